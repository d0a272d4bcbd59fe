import type { CostTerm } from './cost-term.js';

/**
 * A term that may grow to a limit and hardly beyond: above it every unit counts `slope` times. The bend keeps one figure within bounds
 * while others are improved at its expense.
 */
export function bentTerm(term: CostTerm, limit: number, slope: number): CostTerm {
  const bent = (value: number): number => (value <= limit ? value : limit + slope * (value - limit));
  return {
    name: term.name,
    value: () => bent(term.value()),
    delta: (a, b) => {
      const now = term.value();
      return bent(now + term.delta(a, b)) - bent(now);
    },
    apply: (a, b) => {
      term.apply(a, b);
    },
  };
}
