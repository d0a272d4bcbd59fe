import { spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

// The measured process tells its own peak when it ends, on a descriptor that it does not use.
const reporter =
  'data:text/javascript,' +
  encodeURIComponent(
    `import { writeSync } from 'node:fs'; process.on('exit', () => writeSync(3, String(process.resourceUsage().maxRSS)));`,
  );

/** One run of the built tool as a user starts it: from the start of node to its end, with all files written. */
export function measureWhole(bits: number) {
  const folder = mkdtempSync(join(tmpdir(), 'steelyard-bench-'));
  try {
    const start = performance.now();
    const args = ['--import', reporter, 'dist/cli/main.js', 'place', '--bits', String(bits), '--out', folder];
    const { status, output } = spawnSync(process.execPath, args, { stdio: ['ignore', 'ignore', 'inherit', 'pipe'] });
    const wall = performance.now() - start;
    if (status !== 0) throw new Error(`place --bits ${bits} ended with ${status}`);
    const peak_KiB = Number(String(output[3]));
    return { bits, wall_s: Number((wall / 1000).toFixed(2)), peak_MB: Math.round((peak_KiB * 1024) / 1e6) };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
