import { readdirSync } from 'node:fs';
import { Infeasible } from '../../src/core/problem.js';
import { drawn, template } from '../pipeline/drawn.js';

const emphases = ['balanced', 'wiring', 'gradient', 'dispersed'] as const;

interface Outcome {
  readonly technology: string;
  readonly bits: number;
  readonly clean: number;
  /** What is impossible, by emphasis and rings, with the reason. */
  readonly impossible: readonly string[];
  /** What should not be there. */
  readonly faulty: readonly string[];
}

/** Every emphasis with 0, 1 and 2 rings, fill on either net, quick effort: drawn without a finding, or impossible for a reason. */
function arraysOf(technology: string, bits: number): Outcome {
  const impossible: string[] = [];
  const faulty: string[] = [];
  let clean = 0;
  for (const [e, emphasis] of emphases.entries())
    for (const rings of [0, 1, 2]) {
      const name = `${emphasis}, ${rings} rings`;
      const fillTop = (bits + rings + e) % 2 === 0 ? 'VSS' : 'TOP';
      try {
        const { findings } = drawn(
          { bits, rings, emphasis, fillTop, effort: 'quick' },
          undefined,
          1e7,
          template(technology),
        );
        if (findings.length === 0) clean++;
        else faulty.push(`${name}: ${findings[0].rule}, ${findings[0].text}`);
      } catch (error) {
        if (error instanceof Infeasible) impossible.push(`${name}: ${error.message}`);
        else throw error;
      }
    }
  return { technology, bits, clean, impossible, faulty };
}

/** Arrays in every shipped technology. Prints each reason and each finding. */
export function measureArrays(bitCounts: readonly number[], only?: string) {
  const technologies = readdirSync('templates')
    .filter((file) => file.endsWith('.technology.json'))
    .map((file) => file.replace('.technology.json', ''))
    .filter((name) => only === undefined || name === only);
  return technologies.flatMap((technology) =>
    bitCounts.map((bits) => {
      const start = performance.now();
      const { impossible, faulty, ...rest } = arraysOf(technology, bits);
      for (const text of [...impossible, ...faulty]) console.log(`${technology}, ${bits} bits, ${text}`);
      const s = Math.round((performance.now() - start) / 100) / 10;
      return { ...rest, impossible: impossible.length, faulty: faulty.length, s };
    }),
  );
}
