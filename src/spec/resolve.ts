import { Infeasible } from '../core/problem.js';
import type { Problem, Result } from '../core/problem.js';
import type { ArraySpec } from './array-spec.js';
import type { Capacitor } from './floorplan.js';
import { mostRings, options } from './options.js';
import { checkDrive } from './parse-array.js';
import { checkPinOrder } from './pins.js';
import { Report } from './report.js';
import type { Source } from './report.js';
import { withUnitOf } from './scale-unit.js';
import type { Technology } from './technology.js';
import { shown } from './words.js';

type Chosen = 'core' | 'tracksPerChannel' | 'bits' | 'weights' | 'drive' | 'topLoad_fF' | 'limits';

/** An array file with every default filled in; what the tool chooses later (core, tracks) is there only where it was given. */
export type ResolvedSpec = ArraySpec & Required<Omit<ArraySpec, Chosen>>;

export interface ResolvedArray {
  readonly spec: ResolvedSpec;
  readonly technology: Technology;
  /** Bits from the least significant up, then the termination where there is one. */
  readonly capacitors: readonly Capacitor[];
}

function capacitorsOf({ bits = 0, weights, termination }: ResolvedSpec): Capacitor[] {
  // Shifts would do up to 2^30; there are 14 bits at most.
  const list = weights ?? Array.from({ length: bits }, (_, bit) => 1 << bit);
  const capacitors = list.map((weight, bit): Capacitor => ({ name: `B${bit}`, role: 'bit', weight, units: weight }));
  if (termination !== 'none') capacitors.push({ name: 'TERM', role: 'termination', weight: 1, units: 1 });
  return capacitors;
}

/**
 * Fills in the defaults of an array file that is to be drawn in a technology, whose unit becomes as large as the file asks.
 * @param source the array file's text, where there is one: problems then have a line and a column
 * @throws Infeasible what the file asks for cannot be had: a unit that the rules do not allow, a termination in a ring without a ring, more
 * rings than there may be, a core too small for its units
 */
export function resolveArray(spec: ArraySpec, template: Technology, source?: Source): Result<ResolvedArray> {
  const report = new Report(source ?? { text: '', file: '' });
  const refused = () => ({ ok: false, issues: report.problems().map((p) => (source ? p : withoutPlace(p))) }) as const;
  if (spec.hookup !== undefined && spec.hookup !== template.hookup) {
    report.add('/hookup', shown(spec.hookup), `"${template.hookup}", as technology "${template.name}" has it`);
  }
  if ((spec.bits === undefined) === (spec.weights === undefined)) {
    report.add(
      '',
      spec.bits === undefined ? 'neither "bits" nor "weights"' : 'both "bits" and "weights"',
      'one of the two',
    );
  }
  checkDrive(spec.drive, spec.bits ?? spec.weights?.length ?? 0, report, '/drive');
  if (report.count > 0) return refused();

  const technology = spec.unit_fF === undefined ? template : withUnitOf(template, spec.unit_fF);
  // `technology` names the template; a file's name would mean nothing where the array travels inside a floorplan.
  const { $schema: _schema, ...given } = spec as ArraySpec & { readonly $schema?: string };
  const filled: Record<string, unknown> = { ...given };
  if ('technology' in filled) filled.technology = technology.name;
  for (const { key, resolve, partly } of options) {
    if (resolve !== undefined && (filled[key] === undefined || partly))
      filled[key] = resolve(filled as unknown as ArraySpec, technology);
  }
  const resolved = filled as unknown as ResolvedSpec;
  const capacitors = capacitorsOf(resolved);
  checkPinOrder(resolved.pins, capacitors, report, '/pins');
  if (report.count > 0) return refused();
  refuseImpossible(spec, resolved, technology, capacitors);
  return { ok: true, value: { spec: resolved, technology, capacitors } };
}

const withoutPlace = ({ pointer, found, wanted }: Problem): Problem => ({ pointer, found, wanted });

function refuseImpossible(
  spec: ArraySpec,
  { rings, termination, core }: ResolvedSpec,
  technology: Technology,
  capacitors: readonly Capacitor[],
): void {
  if (termination === 'ring' && rings === 0) {
    throw new Infeasible(
      'A termination in the ring needs a ring, and "rings" is 0.',
      'Ask for one ring or more, or for "termination": "core" or "none".',
    );
  }
  if (spec.rings === undefined && rings > mostRings) {
    throw new Infeasible(
      `The proximity reach of technology "${technology.name}", ${technology.proximityReach_um} um, needs ${rings} rings; there are ${mostRings} at most.`,
      `Give "rings": ${mostRings} to accept what they cover.`,
    );
  }
  if (core === undefined) return;
  const units = capacitors.reduce(
    (sum, { role, units }) => sum + (role === 'bit' || termination === 'core' ? units : 0),
    0,
  );
  const cells = core.rows * core.columns;
  if (cells < units) {
    throw new Infeasible(
      `A core of ${core.rows} rows and ${core.columns} columns has ${cells} cells; the array has ${units} units in the core.`,
      `Ask for ${units} cells or more, or leave "core" out.`,
    );
  }
}
