import { UsageError, shown } from './fault.js';
import type { Io } from './io.js';

/** The same machine, but what was read from it (`before` besides) is never written over. */
export function guarded(io: Io, before: readonly string[] = []): Io {
  const inputs: string[] = [...before];
  return {
    ...io,
    readFile: (path, limit) => {
      inputs.push(path);
      return io.readFile(path, limit);
    },
    keep: (rescue) => {
      io.keep({ ...rescue, inputs });
    },
    writeFiles: (files, stale = []) => {
      const isInput = (path: string) => inputs.some((input) => io.isSameFile(input, path));
      const lines = files
        .filter(({ path }) => isInput(path))
        .map(
          ({ path }) =>
            `${shown(path)}: found an input of this run; wanted another folder for what is written (--out DIR)`,
        );
      if (lines.length > 0) throw new UsageError(lines);
      return io.writeFiles(
        files,
        stale.filter((path) => !isInput(path)),
      );
    },
  };
}
