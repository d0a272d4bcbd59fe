import { join } from 'node:path';
import { FileError, UsageError, exit, isOutOfMemory, outOfMemory, problemLine, shown } from './fault.js';
import { guarded } from './guard.js';
import type { Io } from './io.js';

async function version(io: Io): Promise<string> {
  const bytes = await io.readFile(join(io.root, 'package.json'), 2 ** 20);
  const { version: text } = JSON.parse(new TextDecoder().decode(bytes)) as { version: string };
  return text;
}

/** What an error means to the caller: the exit code, and what is to be said about it. */
async function verdict(error: unknown, debug: boolean): Promise<{ code: number; lines: readonly string[] }> {
  if (error instanceof UsageError) return { code: exit.badInput, lines: error.lines };
  if (error instanceof FileError) return { code: exit.file, lines: [`steelyard: ${error.message}`] };
  const { Infeasible, InputError } = await import('../index.js');
  if (error instanceof InputError) return { code: exit.badInput, lines: error.problems.map(problemLine) };
  if (error instanceof Infeasible) {
    return { code: exit.infeasible, lines: [`steelyard: impossible as asked: ${error.because}`, `  ${error.remedy}`] };
  }
  if (isOutOfMemory(error)) return { code: exit.infeasible, lines: outOfMemory };
  const text = error instanceof Error ? `${error.name}: ${error.message}` : String(error);
  const stack = error instanceof Error ? (error.stack ?? text).split('\n') : [text];
  const hint = debug ? [] : ['  Run the same command with --debug for the place in the code.'];
  const lines = [`steelyard: a defect of this program, not of your input: ${text}`, ...hint, ...(debug ? stack : [])];
  return { code: exit.defect, lines };
}

/** Runs what gives an exit code; an error becomes lines on standard error and its code. Never throws. */
export async function reporting(io: Io, debug: boolean, action: () => Promise<number>): Promise<number> {
  try {
    return await action();
  } catch (error) {
    const { code, lines } = await verdict(error, debug);
    // With standard error gone as well there is nobody left to tell; the exit code still does.
    await io.stderr(lines.map((line) => `${shown(line)}\n`).join('')).catch(() => undefined);
    return code;
  }
}

/**
 * The command line as a function: arguments in, exit code out, the machine through `io` alone. Never throws.
 * @returns 0 done, 1 a check or limit fails, 2 bad input or usage, 3 impossible as asked, 4 a file, 5 a defect, 130 interrupted.
 */
export function run(argv: readonly string[], io: Io): Promise<number> {
  return reporting(io, argv.includes('--debug'), async () => {
    // Ahead of everything that takes time to load.
    if (argv.length === 1 && argv[0] === '--version') {
      await io.stdout(`${await version(io)}\n`);
      return exit.done;
    }
    const { runCommand } = await import('./commands.js');
    return await runCommand(argv, guarded(io), await version(io));
  });
}
