// Compiles src/ into dist/. A dist/ that already stands for these sources is left alone; any other is replaced whole,
// so that no file of a deleted source survives and a failed build changes nothing. Node's own modules only.
import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import {
  chmodSync,
  existsSync,
  mkdirSync,
  readdirSync,
  readFileSync,
  renameSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import { join } from 'node:path';

const cache = 'node_modules/.cache/steelyard';
const stamp = join(cache, 'build');
const fresh = join(cache, `dist-${process.pid}`);
const former = join(cache, `former-${process.pid}`);
const discard = (...dirs) => dirs.forEach((dir) => rmSync(dir, { recursive: true, force: true }));

const hashOf = (files, base = '.') => {
  const hash = createHash('sha256');
  for (const file of files) {
    const content = readFileSync(join(base, file));
    hash.update(`${file}\0${content.length}\0`).update(content);
  }
  return hash.digest('hex');
};
const filesIn = (dir) =>
  readdirSync(dir, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => join(entry.parentPath, entry.name).slice(dir.length + 1))
    .sort();
const hashOfTree = (dir) => hashOf(filesIn(dir), dir);

// Read before the compiler reads them: a source edited meanwhile makes the next build a new one.
const settings = hashOf(['.ci/build.mjs', 'tsconfig.json', 'tsconfig.build.json', 'package-lock.json']);
const sources = `${settings} ${hashOfTree('src')}`;

// An edited or incomplete dist/ does not match either, nor one that another build replaces at this moment.
const isCurrent = () => {
  try {
    return readFileSync(stamp, 'utf8') === `${sources} ${hashOfTree('dist')}`;
  } catch {
    return false;
  }
};

// Two renames, so that dist/ is whole whenever it is there; they are tried again when another build came between.
const putInPlace = (attempts = 20) => {
  try {
    if (existsSync('dist')) renameSync('dist', former);
    renameSync(fresh, 'dist');
  } catch (error) {
    if (attempts === 1) throw error;
    discard(former);
    putInPlace(attempts - 1);
  }
};

const build = () => {
  discard(fresh, former);
  mkdirSync(cache, { recursive: true });
  const tsc = ['node_modules/typescript/bin/tsc', '-p', 'tsconfig.build.json', '--outDir', fresh];
  const good = spawnSync(process.execPath, tsc, { stdio: 'inherit' }).status === 0;
  if (good) {
    chmodSync(join(fresh, 'cli', 'main.js'), 0o755);
    const built = `${sources} ${hashOfTree(fresh)}`;
    putInPlace();
    writeFileSync(stamp, built);
  }
  discard(fresh, former);
  return good;
};

if (!isCurrent() && !build()) process.exitCode = 1;
