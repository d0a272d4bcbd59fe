import { dirname, isAbsolute, join, relative } from 'node:path';
import { Infeasible, InputError, arrayFileOf, etchResidue, formatJson, nonUnitPlate, sizeConverter } from '../index.js';
import type { ArraySpec, NonUnitPlate, Technology } from '../index.js';
import { converterOf, inConverter, technologyOf } from './converter.js';
import type { ConverterFlags } from './converter.js';
import { UsageError, exit, shown } from './fault.js';
import type { Io } from './io.js';
import { explanation, plateLines, sizeSummary } from './size-summary.js';
import { lines } from './summary.js';

/** The options of `size` as typed, besides the keys of a converter file. */
export interface SizeFlags extends ConverterFlags {
  readonly ratio?: string;
  readonly undercut?: string;
  readonly explain?: boolean;
  readonly out?: string;
  readonly json?: boolean;
}

/** A plate that is no whole number of units, and what etching leaves of its ratio. */
type Ratioed = NonUnitPlate & { readonly etchResidue?: number };

const mostUnits = 16383;

function numberOf(flag: string, text: string, least: number, most: number, wanted: string): number {
  const value = /^\d{1,9}(\.\d{1,12})?$/.test(text) ? Number(text) : NaN;
  if (value >= least && value <= most) return value;
  throw new InputError([{ pointer: flag, found: JSON.stringify(text), wanted }]);
}

function ratioed({ unit, grid_nm, name }: Technology, ratio: string, undercut: string | undefined): Ratioed {
  const units = numberOf('--ratio', ratio, 1, mostUnits, `a number of units from 1 to ${mostUnits}`);
  if (unit.kind !== 'parallel-plate')
    throw new Infeasible(
      `The unit of technology "${name}" is no plate whose sides could be chosen.`,
      'Name a technology of parallel plates.',
    );
  const plate = nonUnitPlate(unit.topPlate_um, units, grid_nm / 1000);
  if (undercut === undefined) return plate;
  const most = Math.min(...unit.topPlate_um) / 4;
  const edge_um = numberOf('--undercut', undercut, 0, most, `micrometres from 0 to ${most}`);
  return { ...plate, etchResidue: etchResidue(unit.topPlate_um, plate.ratio, edge_um) };
}

/** How a file at `out` names a technology that `from` (a file, or undefined: the command line) calls `reference`. */
function asNamedFrom(out: string, from: string | undefined, reference: string | undefined): string | undefined {
  if (reference === undefined || !reference.endsWith('.json') || isAbsolute(reference)) return reference;
  return relative(dirname(out), join(dirname(from ?? ''), reference));
}

/** `size`: how large the unit of a converter's array has to be, and the array file that follows. */
export async function size(io: Io, file: string | undefined, flags: SizeFlags): Promise<number> {
  const { ratio, undercut, out, json = false, explain = false } = flags;
  if (undercut !== undefined && ratio === undefined)
    throw new UsageError(['size --undercut: found without --ratio; wanted both']);
  const { stated, converter } = await converterOf(io, file, flags);
  const { bits } = converter;
  const template = await technologyOf(io, file, flags, stated);
  if (bits === undefined) {
    if (ratio === undefined || out !== undefined)
      throw new UsageError(['size: found no number of bits; wanted --bits, or a file with "bits"']);
    const plate = ratioed(template, ratio, undercut);
    await io.stdout(json ? formatJson({ nonUnit: plate }) : lines(plateLines(plate, template).map(shown)));
    return exit.done;
  }
  const { sizing, worked, technology } = inConverter(file, flags, () =>
    sizeConverter({ ...converter, bits }, template),
  );
  const plate = ratio === undefined ? undefined : ratioed(technology, ratio, undercut);
  if (out !== undefined) {
    const reference = asNamedFrom(out, typeof flags.technology === 'string' ? undefined : file, stated.technology);
    const array: ArraySpec = arrayFileOf(sizing, converter, template, reference);
    io.writeFiles([{ path: out, content: formatJson(array) }]);
  }
  if (json) {
    await io.stdout(formatJson({ ...sizing, ...(plate && { nonUnit: plate }), ...(explain && { worked }) }));
    return exit.done;
  }
  await io.stdout(
    lines(
      [
        ...sizeSummary(sizing, { ...converter, bits }, stated, technology),
        ...(plate ? plateLines(plate, technology) : []),
        ...(out === undefined ? [] : [`file          ${out}`]),
        ...(explain ? ['', ...explanation(worked)] : []),
      ].map(shown),
    ),
  );
  return exit.done;
}
