import { dirname } from 'node:path';
import { InputError, converterOptions, parseConverter, resolveConverter, standardTechnologies } from '../index.js';
import type { Converter, Problem, ResolvedConverter, Technology } from '../index.js';
import { readText } from './input.js';
import type { Io } from './io.js';
import { technologyNamed, valueOf } from './technology.js';

/** The keys of a converter file that the command line gives, as typed: each flag is named after itself. */
export type ConverterFlags = Readonly<Record<string, unknown>>;

/** `--full-scale <volts>`: its name, and the property that the command line's parser gives it. */
function namesOf(flag: string): { readonly long: string; readonly property: string } {
  const [long = ''] = flag.split(' ');
  return { long, property: long.slice(2).replace(/-(\w)/g, (_, letter: string) => letter.toUpperCase()) };
}

/** A decimal number if it is one; anything else goes to the parser as it is and is refused there with its limits. */
const numberOr = (value: unknown): unknown =>
  typeof value === 'string' && /^[+-]?\d{1,15}(\.\d{1,15})?$/.test(value) ? Number(value) : value;

/** The keys that the command line gives, judged by the rules of a converter file. */
function converterOfFlags(flags: ConverterFlags): Partial<Converter> {
  const given: Record<string, unknown> = {};
  const longOf = new Map<string, string>();
  for (const { key, flag } of converterOptions) {
    if (flag === undefined) continue;
    const { long, property } = namesOf(flag);
    longOf.set(key, long);
    if (flags[property] !== undefined) given[key] = numberOr(flags[property]);
  }
  const parsed = parseConverter(JSON.stringify({ format: 'steelyard/converter', version: 1, ...given }), '');
  if (parsed.ok) return given;
  const problems = parsed.issues.map(({ pointer, found, wanted }): Problem => {
    const key = pointer.split('/')[1] ?? '';
    return { pointer: longOf.get(key) ?? key, found, wanted };
  });
  throw new InputError(problems);
}

export interface Given {
  /** What the file says, with the command line over it. */
  readonly stated: Converter;
  readonly converter: ResolvedConverter;
}

/** A converter from a file, or from the command line alone. */
export async function converterOf(io: Io, file: string | undefined, flags: ConverterFlags): Promise<Given> {
  const given = converterOfFlags(flags);
  const base: Converter =
    file === undefined
      ? { format: 'steelyard/converter', version: 1 }
      : valueOf(parseConverter(await readText(io, file), file));
  const stated = { ...base, ...given };
  return { stated, converter: resolveConverter(stated) };
}

/** Runs what knows neither files nor flags on a converter: problems that it reports are the flag's, or the file's. */
export function inConverter<T>(file: string | undefined, flags: ConverterFlags, action: () => T): T {
  try {
    return action();
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    throw new InputError(
      error.problems.map((problem): Problem => {
        const key = problem.pointer.split('/')[1];
        const flag = converterOptions.find((option) => option.key === key)?.flag;
        if (flag === undefined) return { ...problem, ...(file !== undefined && { file }) };
        const { long, property } = namesOf(flag);
        if (flags[property] !== undefined) return { ...problem, pointer: long };
        return { ...problem, ...(file !== undefined && { file }) };
      }),
    );
  }
}

/** The technology that a converter names, from its file's folder or, on the command line, from here. */
export function technologyOf(
  io: Io,
  file: string | undefined,
  flags: ConverterFlags,
  { technology }: Converter,
): Promise<Technology> {
  if (typeof flags.technology === 'string')
    return technologyNamed(io, flags.technology, '.', { pointer: '--technology' });
  const where = { pointer: '/technology', ...(file !== undefined && { file }) };
  return technologyNamed(io, technology ?? standardTechnologies.channel, dirname(file ?? ''), where);
}
