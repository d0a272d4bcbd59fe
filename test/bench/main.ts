// npm run bench -- [whole] [solve] [router] [hostile] [interrupts] [--json FILE] [--runs N] [--seed N] [--from N]: what a run costs, as a table and
// as JSON; and, only if asked for by name, how the router stands beside a general solver, how it takes damaged inputs and signals. Nothing here passes or fails.
import { writeFileSync } from 'node:fs';
import { cpus } from 'node:os';
import { parseArgs } from 'node:util';
import { measureArrays } from './arrays.js';
import { exponent } from './fit.js';
import { measureHostile } from './hostile.js';
import { measureInterrupts } from './interrupts.js';
import { flat, measurePlacement } from './placement.js';
import { measureRouter } from './router.js';
import { measureSolve } from './solve.js';
import { measureWhole } from './whole.js';

const bitCounts = [6, 8, 10, 12];
const known = ['whole', 'solve', 'placement', 'router', 'arrays', 'hostile', 'interrupts'];

const { values, positionals } = parseArgs({
  allowPositionals: true,
  options: {
    json: { type: 'string' },
    runs: { type: 'string' },
    seed: { type: 'string', default: '1' },
    from: { type: 'string', default: '0' },
    seeds: { type: 'string', default: '20' },
    technology: { type: 'string' },
    bits: { type: 'string', default: bitCounts.join(',') },
  },
});
const unknown = positionals.filter((name) => !known.includes(name));
if (unknown.length > 0) throw new Error(`there is no ${unknown.join(', ')}: ${known.join(', ')}`);
const chosen = positionals.length === 0 ? ['whole', 'solve'] : positionals;

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
if (chosen.includes('placement')) {
  const measured = measurePlacement(values.bits.split(',').map(Number), Number(values.seeds));
  print(
    'Placements beside bounds and published rules: worst (median) over the seeds, normal effort',
    measured.rows.map(flat),
  );
  print('Search time grows as units to the power of', measured.growth);
  print('The search (emphasis gradient) and swap annealing with a full recount, the same seconds', measured.baseline);
  print('The tool at 12 bits, cells alone, with one worker and with two', measured.workers);
  result['placement'] = measured;
}
if (chosen.includes('router')) {
  const measured = await measureRouter({ runs: Number(values.runs ?? 200), seed: Number(values.seed) });
  print('The router against an integer programme, random placements', [measured.against]);
  print('The router on whole arrays', measured.rows);
  result['router'] = measured;
}
if (chosen.includes('arrays')) {
  const rows = measureArrays(values.bits.split(',').map(Number), values.technology);
  print('Arrays of every emphasis with 0 to 2 rings', rows);
  result['arrays'] = rows;
}
if (chosen.includes('hostile')) {
  const runs = Number(values.runs ?? 20_000);
  const { rows, ...rest } = await measureHostile({ runs, seed: Number(values.seed), from: Number(values.from) });
  print('Damaged inputs and command lines', rows);
  console.log(rest);
  result['hostile'] = { rows, ...rest };
}
if (chosen.includes('interrupts')) {
  const runs = values.runs === undefined ? undefined : Number(values.runs);
  const measured = await measureInterrupts(Number(values.seed), runs);
  print('Runs of 14 bits ended by Ctrl-C', measured.interrupts);
  print('Runs over an earlier result, killed', measured.kills);
  result['interrupts'] = measured;
}
if (values.json !== undefined) writeFileSync(values.json, `${JSON.stringify(result, null, 2)}\n`);
