import { exit } from './fault.js';
import type { Io, Rescue } from './io.js';

/**
 * The end of a run that Ctrl-C has stopped. What it put by is saved; where there is nothing, nothing is loaded either.
 * @returns the exit code
 * @throws what `save` throws
 */
export async function interrupted(io: Io, rescue: Rescue | undefined): Promise<number> {
  if (rescue === undefined)
    await io.stderr('steelyard: interrupted before there was anything to save: nothing written\n');
  else await (await import('./rescue.js')).save(io, rescue);
  return exit.interrupted;
}
