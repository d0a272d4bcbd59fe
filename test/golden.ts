import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { dirname } from 'node:path';
import { fileURLToPath } from 'node:url';
import { expect } from 'vitest';

/**
 * Compares with a file of test/golden/. A file that is missing or differs is a failure; only `npm run golden` writes it.
 * @param name path below test/golden/.
 */
export function expectGolden(actual: string, name: string): void {
  const path = fileURLToPath(new URL(`golden/${name}`, import.meta.url));
  if (process.env.GOLDEN === 'update') {
    mkdirSync(dirname(path), { recursive: true });
    writeFileSync(path, actual);
    return;
  }
  expect(existsSync(path), `${name} is missing: look at the result of "npm run golden"`).toBe(true);
  expect(actual).toBe(readFileSync(path, 'utf8'));
}
