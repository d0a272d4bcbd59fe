import { UsageError, shown } from './fault.js';
import type { Io } from './io.js';

/** The same machine, but what was read from it is never written over. */
export function guarded(io: Io): Io {
  const inputs: string[] = [];
  return {
    ...io,
    readFile: (path, limit) => {
      inputs.push(path);
      return io.readFile(path, limit);
    },
    writeFiles: (files) => {
      const lines = files
        .filter(({ path }) => inputs.some((input) => io.isSameFile(input, path)))
        .map(
          ({ path }) =>
            `${shown(path)}: found an input of this run; wanted another folder for what is written (--out DIR)`,
        );
      if (lines.length > 0) throw new UsageError(lines);
      io.writeFiles(files);
    },
  };
}
