import { InputError } from '../core/problem.js';
import type { Problem } from '../core/problem.js';
import { foldCase, isNodeZero, pinNamer } from '../spec/pin-map.js';
import type { PinMap } from '../spec/pin-map.js';
import type { Polygons } from '../spec/polygons.js';
import { drawnBlock } from './drawn-pins.js';
import { TOP } from './drawn-shapes.js';
import { drawnUnits } from './drawn-units.js';
import type { DrawnUnit } from './drawn-units.js';

/** What both netlists can be asked for. */
export interface NetlistOptions {
  /** Names of one's own for the pins. */
  readonly pins?: PinMap;
  /** Whether dummies are listed too. */
  readonly dummies?: 'include' | 'omit';
}

/** One subcircuit of two-terminal devices between the pins of a block. */
export interface Subcircuit {
  readonly name: string;
  /** Names of the pins in their order. */
  readonly pins: readonly string[];
  /** Those of the units that are to be listed. */
  readonly units: readonly DrawnUnit[];
  /** The name of the node that a net of the drawing is on. */
  nodeOf(net: string): string;
}

const nameWords = 'a letter or _, then letters, digits, _ or .; perhaps an index as [3] or <3>';
const isName = (name: string): boolean => name.length <= 80 && /^[A-Za-z_][\w.]*(\[\d+\]|<\d+>)?$/.test(name);

/**
 * The drawing as a subcircuit: what it holds, under names that a netlist can hold.
 * @param bulk a net that devices need besides those drawn; where it is none of these it becomes the last pin
 * @throws InputError with every name that a netlist cannot hold or tell from another, and every unit on a net that has no pin
 */
export function subcircuitOf(
  p: Polygons,
  { pins: map, dummies = 'include' }: NetlistOptions,
  bulk?: string,
): Subcircuit {
  const { flat, pins } = drawnBlock(p);
  const nets = pins.map((pin) => pin.net);
  if (bulk !== undefined && !nets.includes(bulk)) nets.push(bulk);
  const nodeOf = pinNamer(map);
  const units = drawnUnits(flat).filter(({ capacitor }) => capacitor !== undefined || dummies === 'include');

  const problems: Problem[] = [];
  const add = (found: string, wanted: string) => problems.push({ pointer: '', found, wanted });
  for (const { name } of p.capacitors)
    if (name.startsWith('_')) add(`capacitor ${JSON.stringify(name)}`, 'a name that begins with a letter');
  if (!isName(p.topStructure)) add(`structure ${JSON.stringify(p.topStructure)}`, nameWords);
  const holder = new Map<string, string>();
  for (const node of nets.map(nodeOf)) {
    const other = holder.get(foldCase(node));
    holder.set(foldCase(node), node);
    if (!isName(node)) add(`net ${JSON.stringify(node)}`, nameWords);
    else if (isNodeZero(node)) add(`net "${node}"`, 'a name that circuit simulators do not take for node 0');
    if (other !== undefined)
      add(`nets ${JSON.stringify(other)} and ${JSON.stringify(node)}`, 'names that differ in more than case');
  }
  for (const net of new Set(units.flatMap(({ top, bottom }) => [top, bottom])))
    if (!nets.includes(net)) add(`units on net ${JSON.stringify(net)}`, `one of ${nets.join(', ')}`);
  for (const { name } of p.capacitors)
    if (!units.some(({ capacitor }) => capacitor === name))
      add(`no unit of capacitor ${JSON.stringify(name)}`, 'one or more in the drawing');
  if (problems.length > 0) throw new InputError(problems);
  return { name: p.topStructure, pins: nets.map(nodeOf), units, nodeOf };
}

/** Units that share both nets and their capacitor, in the order of `capacitors`, dummies last. */
export interface UnitGroup {
  readonly capacitor: string | undefined;
  readonly top: string;
  readonly bottom: string;
  readonly count: number;
}

export function unitGroups({ capacitors }: Polygons, units: readonly DrawnUnit[]): UnitGroup[] {
  const groups = new Map<string, UnitGroup>();
  for (const unit of units) {
    const key = [unit.capacitor ?? '', unit.top, unit.bottom].join(' ');
    const group = groups.get(key);
    groups.set(key, { ...unit, count: (group?.count ?? 0) + 1 });
  }
  const order = [...capacitors.map(({ name }) => name), undefined];
  return [...groups.values()].sort(
    (a, b) => order.indexOf(a.capacitor) - order.indexOf(b.capacitor) || (a.top < b.top ? -1 : 1),
  );
}

/** Of a device: capacitors by their own name; a dummy whose top plate is on TOP is a fill. A capacitor's name begins with no underscore. */
export const deviceName = ({
  capacitor,
  top,
}: {
  readonly capacitor: string | undefined;
  readonly top: string;
}): string => capacitor ?? (top === TOP ? '_fill' : '_dummy');

const WIDTH = 80;

/** Words on as many lines as they need, the further ones begun with a plus sign. */
function folded(words: readonly string[]): string {
  let text = '';
  let line = '';
  for (const word of words) {
    if (line !== '' && line.length + 1 + word.length > WIDTH) {
      text += `${line}\n`;
      line = `+ ${word}`;
    } else line += line === '' ? word : ` ${word}`;
  }
  return `${text}${line}\n`;
}

/** A whole netlist: title, remarks, one subcircuit. */
export function netlistText(
  { name, pins }: Subcircuit,
  title: string,
  remarks: readonly string[],
  devices: readonly (readonly string[])[],
): string {
  return [
    `* ${name}: ${title}\n`,
    ...remarks.map((remark) => `* ${remark}\n`),
    folded(['.SUBCKT', name, ...pins]),
    ...devices.map(folded),
    `.ENDS ${name}\n`,
  ].join('');
}

export const remarkOnPins = 'Pins: along the bottom edge from left to right, then the others from left to right.';
