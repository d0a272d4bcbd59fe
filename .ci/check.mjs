// The checks that need no test run, two at a time, the longest first. Each prints only when it fails.
import { spawn } from 'node:child_process';

const bin = (path) => [process.execPath, `node_modules/${path}`];
const checks = [
  ['eslint', ...bin('eslint/bin/eslint.js'), '--max-warnings', '0', '.'],
  ['types', ...bin('typescript/bin/tsc'), '-p', 'tsconfig.json'],
  ['unused code', ...bin('knip/bin/knip.js')],
  [
    'import rules',
    ...bin('dependency-cruiser/bin/dependency-cruise.mjs'),
    '--config',
    '.dependency-cruiser.mjs',
    'src',
  ],
  [
    'format',
    ...bin('prettier/bin/prettier.cjs'),
    '--check',
    '{src,test,.ci}/**/*.{ts,mjs}',
    '*.{ts,mjs,json}',
    '.*.mjs',
  ],
];

const run = ([name, file, ...args]) =>
  new Promise((resolve) => {
    const started = performance.now();
    const child = spawn(file, args, { stdio: ['ignore', 'pipe', 'pipe'] });
    let output = '';
    for (const stream of [child.stdout, child.stderr]) {
      stream.setEncoding('utf8').on('data', (text) => (output += text));
    }
    child.on('close', (status) => {
      const seconds = ((performance.now() - started) / 1000).toFixed(1);
      console.log(`${status === 0 ? 'ok    ' : 'FAILED'} ${name} (${seconds} s)`);
      if (status !== 0) console.log(output.trimEnd());
      resolve(status === 0);
    });
  });

const waiting = checks.values();
const worker = async () => {
  let good = true;
  for (const check of waiting) good = (await run(check)) && good;
  return good;
};
const results = await Promise.all([worker(), worker()]);
process.exitCode = results.every(Boolean) ? 0 : 1;
