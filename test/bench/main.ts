// npm run bench -- [whole] [solve] [--json FILE]: what a run costs, as a table and as JSON. Nothing here passes or fails.
import { writeFileSync } from 'node:fs';
import { cpus } from 'node:os';
import { exponent } from './fit.js';
import { measureSolve } from './solve.js';
import { measureWhole } from './whole.js';

const bitCounts = [6, 8, 10, 12];
const known = ['whole', 'solve'];

const args = process.argv.slice(2);
const jsonAt = args.indexOf('--json');
const jsonFile = jsonAt < 0 ? undefined : args[jsonAt + 1];
if (jsonAt >= 0) args.splice(jsonAt, 2);
const unknown = args.filter((name) => !known.includes(name));
if (unknown.length > 0 || (jsonAt >= 0 && jsonFile === undefined)) {
  throw new Error(`usage: npm run bench -- [${known.join('] [')}] [--json FILE]`);
}
const chosen = args.length === 0 ? known : args;

const print = (title: string, rows: readonly object[]) => {
  console.log(`\n${title}`);
  console.table(rows);
};

const result: Record<string, unknown> = { node: process.version, cpu: cpus()[0]?.model, cpus: cpus().length };
if (chosen.includes('whole')) {
  const runs = bitCounts.map(measureWhole);
  const growth = exponent(runs.map(({ bits, wall_s }) => [2 ** bits, wall_s]));
  print('Whole process: steelyard place --bits N, normal effort', runs);
  console.log(`wall time grows as units to the power of ${growth.toFixed(2)}`);
  result['whole'] = { runs, growthExponent: growth };
}
if (chosen.includes('solve')) {
  const runs = bitCounts.map(measureSolve);
  const growth = exponent(runs.map(({ bits, search_s }) => [2 ** bits, search_s]));
  print('The search alone, in this process', runs);
  console.log(`search time grows as units to the power of ${growth.toFixed(2)}`);
  result['solve'] = { runs, growthExponent: growth };
}
if (jsonFile !== undefined) writeFileSync(jsonFile, `${JSON.stringify(result, null, 2)}\n`);
