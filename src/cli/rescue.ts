import { join } from 'node:path';
import { Infeasible, drawKept } from '../index.js';
import type { Drawn, Kept, Technology } from '../index.js';
import { deliverCandidates } from './candidates.js';
import { deliver } from './deliver.js';
import { shown } from './fault.js';
import { guarded } from './guard.js';
import type { Io, Rescue } from './io.js';

/** Arrays of up to so many units (8 bits) are still wired and drawn after Ctrl-C; with larger ones whoever pressed it would have to wait. */
const UNITS_DRAWN_AT_ONCE = 256;

const unitsOf = ({ kept }: Rescue): number => kept.floorplan.capacitors.reduce((sum, { units }) => sum + units, 0);

/** Loads what saving takes, so that it need not be loaded when Ctrl-C comes. */
export async function prepareRescue(rescue: Rescue): Promise<void> {
  if (rescue.kept.options.wired !== false && unitsOf(rescue) <= UNITS_DRAWN_AT_ONCE) await import('paper');
}

function drawnAtOnce(kept: Kept, technology: Technology, wired: boolean): Drawn {
  const alone = () => drawKept({ ...kept, options: { ...kept.options, wired: false } }, technology);
  if (!wired) return alone();
  try {
    return drawKept(kept, technology);
  } catch (error) {
    // The tracks asked for do not suffice: the placement is worth saving all the same.
    if (error instanceof Infeasible) return alone();
    throw error;
  }
}

/** A word as a shell takes it whole, whatever is in it. */
const inShell = (word: string): string => (/^[\w./][\w./-]*$/.test(word) ? word : `'${word.replaceAll("'", "'\\''")}'`);

/**
 * Saves what a run that Ctrl-C has ended put by: a complete set of one floorplan; of a large array its placement alone.
 * @throws FileError where that cannot be written, UsageError where it would take the place of an input.
 */
export async function save(io: Io, rescue: Rescue): Promise<void> {
  const asked = rescue.kept.options.wired !== false;
  const small = unitsOf(rescue) <= UNITS_DRAWN_AT_ONCE;
  const { technology, json, candidates } = rescue;
  const name = candidates?.name ?? rescue.kept.floorplan.name ?? '';
  const folder = rescue.folder ?? name;
  const delivery = { folder, json, bare: !small };
  let undrawn = false;
  const draw = (kept: Kept): Drawn => {
    const drawn = drawnAtOnce(kept, technology, asked && small);
    undrawn ||= asked && drawn.polygons === undefined;
    return drawn;
  };
  const machine = guarded(io, rescue.inputs);
  if (candidates === undefined) await deliver(machine, draw(rescue.kept), delivery);
  else await deliverCandidates(machine, candidates.kept, draw, { ...delivery, ...candidates });
  const floorplan = join(folder, `${name}${candidates === undefined ? '' : '-1'}.floorplan.json`);
  const hint = `; to draw it: steelyard export ${inShell(floorplan)} --to gds,polygons,svg,spice,lef --out ${inShell(folder)}`;
  const what = undrawn ? `the best placement so far is saved, without wires${hint}` : 'the best so far is saved';
  await io.stderr(`steelyard: interrupted; ${shown(what)}\n`);
}
