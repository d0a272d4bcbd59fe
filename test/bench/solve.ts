import { readFileSync } from 'node:fs';
import { parseArray, parseTechnology, resolveArray, startPlacement } from '../../src/index.js';
import type { Result } from '../../src/index.js';

function must<T>(result: Result<T>): T {
  if (!result.ok) throw new Error(JSON.stringify(result.issues));
  return result.value;
}

const template = 'templates/parallel-plate.technology.json';

/** The search alone, in one piece: how many trial swaps, how long, how many a second. */
export function measureSolve(bits: number) {
  const technology = must(parseTechnology(readFileSync(template, 'utf8'), template));
  const spec = must(parseArray(JSON.stringify({ format: 'steelyard/array', version: 1, bits }), 'bench'));
  const run = startPlacement({ array: must(resolveArray(spec, technology)) });
  const start = performance.now();
  while (run.step(1e6));
  const search_s = (performance.now() - start) / 1000;
  return {
    bits,
    trials: run.work,
    search_s: Number(search_s.toFixed(3)),
    trialsPerSecond: Math.round(run.work / search_s),
  };
}
