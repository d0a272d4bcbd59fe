import { InputError, formatFloorplan, parseArray, placeByRule } from '../index.js';
import { exit, shown } from './fault.js';
import type { Io } from './io.js';
import { pitchOf } from './pitch.js';
import { lines } from './summary.js';

/** The options of `pattern` as typed. */
export interface PatternFlags {
  readonly bits: string;
  readonly pitch?: string;
  readonly out?: string;
}

/** The number of bits, judged by the rules of an array file. */
function bitsOf(text: string): number {
  const bits = /^\d{1,15}$/.test(text) ? Number(text) : text;
  const parsed = parseArray(JSON.stringify({ format: 'steelyard/array', version: 1, bits }), '');
  if (parsed.ok) return parsed.value.bits ?? 0;
  throw new InputError(parsed.issues.map(({ found, wanted }) => ({ pointer: '--bits', found, wanted })));
}

/** `pattern`: a published rule's placement as a floorplan, on standard output or in a file. */
export async function pattern(io: Io, name: string, flags: PatternFlags): Promise<number> {
  const problems: InputError['problems'][number][] = [];
  const judged = <T>(judge: () => T): T | undefined => {
    try {
      return judge();
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      problems.push(...error.problems);
      return undefined;
    }
  };
  const bits = judged(() => bitsOf(flags.bits));
  const pitch_um = judged(() => pitchOf(flags.pitch ?? '1,1'));
  const floorplan = judged(() => placeByRule(name, bits ?? 4, pitch_um ?? [1, 1]));
  if (floorplan === undefined || problems.length > 0) {
    throw new InputError(problems.map((each) => (each.pointer === '/rule' ? { ...each, pointer: 'pattern' } : each)));
  }
  const text = formatFloorplan(floorplan);
  if (flags.out === undefined) await io.stdout(text);
  else {
    io.writeFiles([{ path: flags.out, content: text }]);
    await io.stdout(lines([shown(flags.out)]));
  }
  return exit.done;
}
