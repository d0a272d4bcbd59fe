// Brings a checkout to a runnable state: packages, build and, with --tools, the programs that the tests call.
// Run it through npm (`npm run setup`). Node's own modules only: it runs before any package is there.
import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { accessSync, constants, existsSync, readFileSync, writeFileSync } from 'node:fs';
import { delimiter, join } from 'node:path';

// program that the tests call: the Debian package that brings it
const tools = { GDSIIConvert: 'gdsiiconvert', ngspice: 'ngspice' };

const stop = (text) => {
  console.error(text);
  process.exit(1);
};
if (!process.env.npm_execpath) stop('Run this as: npm run setup');

// Output of children goes to standard error: standard output belongs to the command that comes after.
const tryRun = (file, args, env = process.env) => spawnSync(file, args, { stdio: ['ignore', 2, 2], env }).status === 0;
const npm = (args, env) => tryRun(process.execPath, [process.env.npm_execpath, ...args], env);
const isProgram = (path) => {
  try {
    accessSync(path, constants.X_OK);
    return true;
  } catch {
    return false;
  }
};
const onPath = (name) => (process.env.PATH ?? '').split(delimiter).some((dir) => isProgram(join(dir, name)));

const installPackages = () => {
  // Written last, inside node_modules: an interrupted install leaves no stamp and is done again.
  const stamp = 'node_modules/.installed';
  const want = createHash('sha256').update(readFileSync('package-lock.json')).update(process.version).digest('hex');
  if (existsSync(stamp) && readFileSync(stamp, 'utf8') === want) return;
  // The compiler and the tests are wanted whatever the surroundings say about production.
  const env = { ...process.env };
  delete env.NODE_ENV;
  for (const key of Object.keys(env)) if (/^npm_config_(omit|only|production|include)$/i.test(key)) delete env[key];
  const install = () => npm(['ci', '--include=dev', '--no-audit', '--no-fund'], env);
  // A killed run can leave its npm behind, still writing: wait until it has surely ended, then try once more.
  const pause = () => Atomics.wait(new Int32Array(new SharedArrayBuffer(4)), 0, 0, 15_000);
  if (!install() && !(pause() && install())) stop('npm ci failed: see above.');
  writeFileSync(stamp, want);
};

const installTools = () => {
  const missing = Object.keys(tools).filter((program) => !onPath(program));
  if (missing.length === 0) return;
  const packages = missing.map((program) => tools[program]);
  const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
  const apt = (...args) => tryRun('apt-get', ['-o', 'DPkg::Lock::Timeout=300', ...args], env);
  const allowed = onPath('apt-get') && process.getuid?.() === 0;
  const installed = allowed && apt('update') && apt('install', '-y', '--no-install-recommends', ...packages);
  if (!installed || !missing.every(onPath)) {
    stop(
      `The tests call ${missing.join(', ')}: install ${packages.join(' ')} ` +
        `(Debian, as root: apt-get install ${packages.join(' ')}) and run npm test again.`,
    );
  }
};

installPackages();
if (!npm(['run', '--silent', 'build'])) stop('The build failed: see above.');
if (process.argv.includes('--tools')) installTools();
