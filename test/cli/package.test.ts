import { execFileSync, spawnSync } from 'node:child_process';
import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { buildTool, filesBelow, remove, root, temporaryFolder } from './built-tool.js';

let folder: string;
beforeAll(() => {
  buildTool();
  folder = temporaryFolder();
});
afterAll(() => {
  remove(folder);
});

// A test run started by npm hands down settings of that run; the npm in here is nobody's child.
const env = Object.fromEntries(Object.entries(process.env).filter(([key]) => !/^npm_|^NODE_ENV$/i.test(key)));
const npm = (cwd: string, ...args: string[]) =>
  execFileSync('npm', args, { cwd, env, encoding: 'utf8', stdio: 'pipe' });

it('the packed archive, installed in an empty folder, has a tool and a library that work', { timeout: 600_000 }, () => {
  const packed: unknown = JSON.parse(npm(root, 'pack', '--json', '--ignore-scripts', '--pack-destination', folder));
  const [archive] = packed as { filename: string; files: { path: string }[] }[];
  const paths = archive?.files.map(({ path }) => path) ?? [];
  expect(paths).toContain('templates/parallel-plate.technology.json');
  expect(paths.filter((path) => !/^(dist|templates)\/|^(package\.json|README\.md|LICENSE)$/.test(path))).toEqual([]);

  const empty = join(folder, 'empty');
  mkdirSync(empty);
  writeFileSync(join(empty, 'package.json'), '{"private": true, "type": "module"}');
  npm(
    empty,
    'install',
    '--prefer-offline',
    '--no-audit',
    '--no-fund',
    '--omit=dev',
    join(folder, archive?.filename ?? ''),
  );
  const run = spawnSync('npx', ['steelyard', 'place', '--bits', '4'], { cwd: empty, env, encoding: 'utf8' });
  expect({ status: run.status, stderr: run.stderr }).toEqual({ status: 0, stderr: '' });
  expect(run.stdout).toMatch(/^cdac4, 4 bits/);
  expect(filesBelow(join(empty, 'cdac4')).length).toBe(12);

  writeFileSync(join(empty, 'use.js'), `import { schemaNames } from 'steelyard'; console.log(schemaNames[0]);`);
  const library = execFileSync(process.execPath, ['use.js'], { cwd: empty, encoding: 'utf8' });
  expect(library).toBe('array\n');
});
