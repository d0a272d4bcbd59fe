import { nm } from '../core/units.js';
import type { Result } from '../core/problem.js';
import { integer, items, real, record, word } from './loose.js';
import { read } from './read.js';
import type { Refusal } from './read.js';
import type { Report } from './report.js';
import type { Roles, Technology } from './technology.js';
import { meant, quoted, shown } from './words.js';

type Loose = Readonly<Record<string, unknown>>;

/** A length in nanometres, as near as the file gives it. */
const toNm = (length_um: number | undefined): number | undefined =>
  length_um === undefined ? undefined : Math.round(length_um * 1000);
const fromNm = (length_nm: number): string => `${length_nm / 1000} um`;

interface Drawn {
  readonly at: string;
  readonly name: string;
  readonly entry: Loose;
}

/** One technology under examination: the parts that rules compare, whatever their shape. */
class Examination {
  readonly layers: readonly Drawn[];
  readonly vias: readonly Drawn[];
  readonly layerNames: readonly string[];
  readonly roles: Loose;

  constructor(
    readonly technology: Loose,
    readonly report: Report,
    readonly at: string,
  ) {
    const drawn = (key: string): Drawn[] =>
      items(technology[key]).map((value, i) => {
        const entry = record(value);
        return { at: `${at}/${key}/${i}`, name: word(entry.name) ?? '', entry };
      });
    this.layers = drawn('layers');
    this.vias = drawn('vias');
    this.layerNames = this.layers.map((l) => l.name).filter((name) => name !== '');
    this.roles = record(technology.roles);
  }

  layer(name: unknown): Drawn | undefined {
    return this.layers.find((l) => l.name !== '' && l.name === name);
  }

  role(role: keyof Roles): Drawn | undefined {
    return this.layer(this.roles[role]);
  }

  /** The via between two layers, whichever is the lower. */
  via(a: Drawn | undefined, b: Drawn | undefined): Drawn | undefined {
    const ends = [a?.name, b?.name];
    return this.vias.find(({ entry }) => ends.includes(word(entry.lower)) && ends.includes(word(entry.upper)));
  }

  /** Adds a name that no layer has. */
  known(at: string, name: unknown): void {
    const given = word(name);
    if (given === undefined || this.layerNames.includes(given)) return;
    this.report.add(at, quoted(given), () => meant(given, this.layerNames, 'layer'));
  }
}

const at2 = (value: unknown, i: number): number | undefined => real(items(value)[i]);
const lengthsOfLayer = ['minWidth_um', 'minSpacing_um', 'wideFrom_um', 'wideSpacing_um', 'maxWidth_um'];
const conducting = ['metal', 'plate'];

function checkNames({ layers, vias, report }: Examination): void {
  const names = new Set<string>();
  const lefNames = new Set<string>();
  const holder = new Map<string, string>();
  for (const { at, name, entry } of [...layers, ...vias]) {
    if (name !== '' && names.has(name))
      report.add(`${at}/name`, `${quoted(name)} once more`, 'each layer and via once');
    names.add(name);
    const lefName = word(entry.lefName);
    if (lefName !== undefined && lefNames.has(lefName)) {
      report.add(`${at}/lefName`, `${quoted(lefName)} once more`, 'a name of its own for each layer');
    }
    if (lefName !== undefined) lefNames.add(lefName);
    const stream = record(entry.stream);
    const layer = integer(stream.layer);
    const datatype = integer(stream.datatype);
    if (layer === undefined || datatype === undefined) continue;
    const number = `${layer}/${datatype}`;
    const other = holder.get(number);
    if (other === undefined) holder.set(number, name);
    else
      report.add(
        `${at}/stream`,
        `stream number ${number} of ${quoted(other)}`,
        'a stream number of its own for each layer and via',
      );
  }
}

function checkGrid({ technology, layers, vias, report, at }: Examination): void {
  const grid = integer(technology.grid_nm);
  if (grid === undefined || grid < 1) return;
  const onGrid = (pointer: string, value: unknown, steps = 1): void => {
    const length = real(value);
    if (length === undefined) return;
    let whole: number | undefined;
    try {
      whole = nm(length);
    } catch {
      // No whole number of nanometres: off every grid.
    }
    if (whole !== undefined && whole % (grid * steps) === 0) return;
    const why = steps === 2 ? `, twice the grid: it is drawn about a centre on the grid` : ', the grid';
    report.add(pointer, `${length} um`, `a multiple of ${fromNm(grid * steps)}${why}`);
  };
  for (const { at: here, entry } of layers) for (const key of lengthsOfLayer) onGrid(`${here}/${key}`, entry[key]);
  for (const { at: here, entry } of vias) {
    onGrid(`${here}/size_um`, entry.size_um, 2);
    onGrid(`${here}/spacing_um`, entry.spacing_um);
    onGrid(`${here}/enclosure_um`, entry.enclosure_um);
  }
  const unit = record(technology.unit);
  const here = `${at}/unit`;
  items(unit.topPlate_um).forEach((side, i) => onGrid(`${here}/topPlate_um/${i}`, side, 2));
  onGrid(`${here}/plateEnclosure_um`, unit.plateEnclosure_um);
  items(unit.tab_um).forEach((side, i) => onGrid(`${here}/tab_um/${i}`, side, i === 1 ? 2 : 1));
  onGrid(`${here}/tabLevel_um`, unit.tabLevel_um);
  for (const [key, terminal] of Object.entries(record(unit.terminals))) {
    items(record(terminal).at_um).forEach((side, i) => onGrid(`${here}/terminals/${key}/at_um/${i}`, side));
  }
}

function checkLayer(examination: Examination, { at, entry }: Drawn): void {
  const { report } = examination;
  const kind = word(entry.kind);
  if (kind === 'pin' || kind === 'label') {
    if (entry.of === undefined)
      report.add(at, `no key "of" in a layer of kind "${kind}"`, '"of": the name of its metal');
    else examination.known(`${at}/of`, entry.of);
    const metal = word(examination.layer(entry.of)?.entry.kind);
    if (metal !== undefined && !conducting.includes(metal)) {
      report.add(`${at}/of`, `a layer of kind "${metal}"`, 'a layer of kind "metal" or "plate"');
    }
  } else if (kind !== undefined && entry.of !== undefined) {
    report.add(`${at}/of`, `"of" in a layer of kind "${kind}"`, 'it only in layers of kind "pin" or "label"', 'key');
  }
  if (kind !== undefined && conducting.includes(kind)) {
    for (const key of ['minWidth_um', 'minSpacing_um']) {
      if (entry[key] === undefined)
        report.add(at, `no key "${key}" in a layer of kind "${kind}"`, `"${key}": a number above 0`);
    }
  }
  const notBelow = (key: string, least: string): void => {
    const value = real(entry[key]);
    const limit = real(entry[least]);
    if (value === undefined || limit === undefined || value >= limit) return;
    report.add(`${at}/${key}`, `${value} um`, `${limit} um or more, as ${least} says`);
  };
  notBelow('maxWidth_um', 'minWidth_um');
  notBelow('wideSpacing_um', 'minSpacing_um');
  notBelow('wideFrom_um', 'minWidth_um');
  for (const [one, other] of [
    ['wideFrom_um', 'wideSpacing_um'],
    ['wideSpacing_um', 'wideFrom_um'],
  ] as const) {
    if (entry[one] !== undefined && entry[other] === undefined)
      report.add(at, `"${one}" without "${other}"`, 'both or neither');
  }
}

function checkVia(examination: Examination, { at, name, entry }: Drawn): void {
  const { report } = examination;
  examination.known(`${at}/lower`, entry.lower);
  examination.known(`${at}/upper`, entry.upper);
  if (entry.lower !== undefined && entry.lower === entry.upper) {
    report.add(`${at}/upper`, shown(entry.upper), 'another layer than "lower"');
    return;
  }
  const lower = examination.layer(entry.lower);
  const upper = examination.layer(entry.upper);
  const heights = [real(lower?.entry.height_um), real(upper?.entry.height_um)] as const;
  if (heights[0] !== undefined && heights[1] !== undefined && heights[0] >= heights[1]) {
    report.add(
      `${at}/lower`,
      `${shown(entry.lower)} at ${heights[0]} um`,
      `a layer below ${shown(entry.upper)} at ${heights[1]} um`,
    );
  }
  const size = toNm(real(entry.size_um));
  const enclosure = toNm(real(entry.enclosure_um));
  if (size === undefined || enclosure === undefined) return;
  const pad = size + 2 * enclosure;
  for (const layer of [lower, upper]) {
    const widest = toNm(real(layer?.entry.maxWidth_um));
    if (layer === undefined || widest === undefined || pad <= widest) continue;
    const wanted = `a size and twice an enclosure of ${fromNm(widest)} at most, the maxWidth_um of ${quoted(layer.name)}`;
    report.add(`${at}/size_um`, `a pad of ${fromNm(pad)} for ${quoted(name)}`, wanted);
  }
}

const kindsOfRole: Readonly<Record<keyof Roles, readonly string[]>> = {
  bottomPlate: conducting,
  topPlate: conducting,
  trunk: conducting,
  stub: conducting,
  bus: conducting,
  strap: conducting,
  spine: conducting,
  marker: ['marker'],
  fillExclusion: ['marker'],
  boundary: ['outline'],
};

function checkRoles(examination: Examination): void {
  const { report, roles } = examination;
  const at = `${examination.at}/roles`;
  for (const [role, kinds] of Object.entries(kindsOfRole)) {
    examination.known(`${at}/${role}`, roles[role]);
    const kind = word(examination.layer(roles[role])?.entry.kind);
    if (kind === undefined || kinds.includes(kind)) continue;
    report.add(`${at}/${role}`, `a layer of kind "${kind}"`, `a layer of kind ${kinds.map(quoted).join(' or ')}`);
  }
  const below = (lower: keyof Roles, upper: keyof Roles, why: string): void => {
    const [low, high] = [
      real(examination.role(lower)?.entry.height_um),
      real(examination.role(upper)?.entry.height_um),
    ];
    if (low === undefined || high === undefined || low < high) return;
    report.add(
      `${at}/${lower}`,
      `${shown(roles[lower])} at a height of ${low} um`,
      `it below ${upper} at ${high} um: ${why}`,
    );
  };
  below('bottomPlate', 'topPlate', 'the top plate lies on the bottom plate');
  below('topPlate', 'strap', 'straps run above the plates');
  below('trunk', 'stub', 'trunks run below the stubs that reach them');
  const joined = (a: keyof Roles, b: keyof Roles): void => {
    const [one, other] = [examination.role(a), examination.role(b)];
    if (one === undefined || other === undefined || one === other || examination.via(one, other) !== undefined) return;
    const found = `no via between ${quoted(one.name)} and ${quoted(other.name)}`;
    report.add(`${examination.at}/vias`, found, `one: ${a} and ${b} meet in every array`);
  };
  joined('trunk', 'stub');
  joined('trunk', 'bus');
  joined('topPlate', 'strap');
  joined('bottomPlate', 'strap');
  joined('strap', 'spine');
}

/** Plates, tabs and terminals against the rules of their layers. */
function checkUnit(examination: Examination): void {
  const { report, technology } = examination;
  const at = `${examination.at}/unit`;
  const unit = record(technology.unit);
  const enclosure = toNm(real(unit.plateEnclosure_um));
  const topPlate = [0, 1].map((i) => toNm(at2(unit.topPlate_um, i)));
  const bottomPlate = topPlate.map((side) =>
    side === undefined || enclosure === undefined ? undefined : side + 2 * enclosure,
  );
  const rules = (side: number | undefined, role: 'topPlate' | 'bottomPlate', i: number): void => {
    const layer = examination.role(role);
    if (side === undefined || layer === undefined) return;
    const least = toNm(real(layer.entry.minWidth_um));
    const most = toNm(real(layer.entry.maxWidth_um));
    const pointer = `${at}/topPlate_um/${i}`;
    const found = `a ${role === 'topPlate' ? 'top' : 'bottom'} plate of ${fromNm(side)}`;
    if (least !== undefined && side < least)
      report.add(pointer, found, `${fromNm(least)} or more, the minWidth_um of ${quoted(layer.name)}`);
    if (most !== undefined && side > most)
      report.add(pointer, found, `${fromNm(most)} at most, the maxWidth_um of ${quoted(layer.name)}`);
  };
  topPlate.forEach((side, i) => rules(side, 'topPlate', i));
  bottomPlate.forEach((side, i) => rules(side, 'bottomPlate', i));

  const [width, height] = topPlate;
  const leastArea = real(examination.role('topPlate')?.entry.minArea_um2);
  if (width !== undefined && height !== undefined && leastArea !== undefined && width * height < leastArea * 1e6) {
    report.add(
      `${at}/topPlate_um`,
      `a top plate of ${(width * height) / 1e6} um2`,
      `${leastArea} um2 or more, its layer's minArea_um2`,
    );
  }

  const via = examination.via(examination.role('topPlate'), examination.role('strap'));
  const size = toNm(real(via?.entry.size_um));
  const around = toNm(real(via?.entry.enclosure_um));
  const pad = size === undefined || around === undefined ? undefined : size + 2 * around;
  topPlate.forEach((side, i) => {
    if (pad === undefined || via === undefined || side === undefined || side >= pad) return;
    const wanted = `${fromNm(pad)} or more: via ${quoted(via.name)} with its enclosure`;
    report.add(`${at}/topPlate_um/${i}`, `a top plate of ${fromNm(side)}`, wanted);
  });

  const terminals = record(unit.terminals);
  const within = (
    key: 'top' | 'bottom',
    role: 'topPlate' | 'bottomPlate',
    plate: (number | undefined)[],
    margin: number,
  ): void => {
    const terminal = record(terminals[key]);
    examination.known(`${at}/terminals/${key}/layer`, terminal.layer);
    const layer = examination.role(role);
    if (layer !== undefined && examination.layer(terminal.layer) !== undefined && terminal.layer !== layer.name) {
      report.add(`${at}/terminals/${key}/layer`, shown(terminal.layer), `${quoted(layer.name)}, the layer of ${role}`);
    }
    items(terminal.at_um).forEach((given, i) => {
      const value = toNm(real(given));
      const side = plate[i];
      if (value === undefined || side === undefined || side < 2 * margin || 2 * Math.abs(value) + 2 * margin <= side)
        return;
      const most = fromNm(side / 2 - margin);
      const what = margin > 0 ? 'so that the via fits on the plate' : 'on the plate';
      report.add(`${at}/terminals/${key}/at_um/${i}`, fromNm(value), `-${most} to ${most}, ${what}`);
    });
  };
  within('top', 'topPlate', topPlate, pad === undefined ? 0 : pad / 2);
  within('bottom', 'bottomPlate', bottomPlate, 0);

  const level = toNm(real(unit.tabLevel_um));
  const tab = toNm(at2(unit.tab_um, 1));
  const side = bottomPlate[1];
  if (level === undefined || tab === undefined) return;
  if (side !== undefined && 2 * level + tab > side) {
    report.add(
      `${at}/tabLevel_um`,
      fromNm(level),
      `${fromNm((side - tab) / 2)} at most, so that the tab lies on the plate's edge`,
    );
  }
  const least = toNm(real(examination.role('bottomPlate')?.entry.minWidth_um));
  if (least !== undefined && tab < least) {
    report.add(`${at}/tab_um/1`, fromNm(tab), `${fromNm(least)} or more, the minWidth_um of the bottom plate's layer`);
  }
}

function checkDevice({ technology, report, at }: Examination): void {
  const device = record(technology.device);
  const terminals = items(device.terminals);
  if (!Array.isArray(device.terminals)) return;
  for (const plate of ['top', 'bottom']) {
    const count = terminals.filter((t) => t === plate).length;
    if (count !== 1)
      report.add(
        `${at}/device/terminals`,
        `"${plate}" ${count === 0 ? 'missing' : `${count} times`}`,
        `"${plate}" once`,
      );
  }
}

/** What the shape of a technology does not say: names that refer, the grid, rules that contradict each other or the unit. */
export function checkTechnology(value: unknown, report: Report, at: string): void {
  const examination = new Examination(record(value), report, at);
  checkNames(examination);
  checkGrid(examination);
  for (const layer of examination.layers) checkLayer(examination, layer);
  for (const via of examination.vias) checkVia(examination, via);
  checkRoles(examination);
  checkUnit(examination);
  checkDevice(examination);
  const mismatch = record(examination.technology.mismatch);
  const correlated = real(mismatch.correlatedSigma_percent) ?? 0;
  if (correlated > 0 && mismatch.correlationLength_um === undefined) {
    report.add(`${at}/mismatch`, '"correlatedSigma_percent" without "correlationLength_um"', 'both or neither');
  }
}

/** Kinds of units and of hookup that a later version may bring. */
export function technologyRefusals(value: unknown, at: string): Refusal[] {
  const { unit, hookup } = record(value);
  const refused: Refusal[] = [];
  const kind = record(unit).kind;
  if (kind === 'framed-fingers' || kind === 'named-cell') {
    const wanted = `a unit of kind "parallel-plate": "${kind}" is not available yet`;
    refused.push({ pointer: `${at}/unit`, found: `kind "${kind}"`, wanted, place: 'value' });
  }
  if (hookup === 'under-plate') {
    const wanted = '"channel" ("under-plate" is not available yet)';
    refused.push({ pointer: `${at}/hookup`, found: '"under-plate"', wanted, place: 'value' });
  }
  return refused;
}

/** Reads a technology template (`steelyard/technology`). */
export function parseTechnology(text: string, file: string): Result<Technology> {
  return read(
    'technology',
    { text, file },
    {
      refusals: (value) => technologyRefusals(value, ''),
      check: (value, report) => checkTechnology(value, report, ''),
    },
  );
}
