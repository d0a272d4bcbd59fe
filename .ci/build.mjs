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
const command = join('cli', 'main.js');

const filesIn = (dir) =>
  readdirSync(dir, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => join(entry.parentPath, entry.name))
    .sort();

const sources = ['.ci/build.mjs', 'tsconfig.json', 'tsconfig.build.json', 'package-lock.json', ...filesIn('src')];

// Names and contents of what goes in and of what came out: an edited or incomplete dist/ is built again too.
const fingerprint = () => {
  const hash = createHash('sha256');
  for (const file of [...sources, ...(existsSync('dist') ? filesIn('dist') : [])]) {
    hash.update(`${file}\0`).update(createHash('sha256').update(readFileSync(file)).digest());
  }
  return hash.digest('hex');
};

if (!existsSync(stamp) || readFileSync(stamp, 'utf8') !== fingerprint()) {
  const fresh = join(cache, `dist-${process.pid}`);
  mkdirSync(cache, { recursive: true });
  const tsc = ['node_modules/typescript/bin/tsc', '-p', 'tsconfig.build.json', '--outDir', fresh];
  const status = spawnSync(process.execPath, tsc, { stdio: 'inherit' }).status;
  if (status === 0) {
    chmodSync(join(fresh, command), 0o755);
    rmSync(stamp, { force: true });
    rmSync('dist', { recursive: true, force: true });
    renameSync(fresh, 'dist');
    writeFileSync(stamp, fingerprint());
  } else {
    rmSync(fresh, { recursive: true, force: true });
    process.exitCode = 1;
  }
}
