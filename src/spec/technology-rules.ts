import { nm } from '../core/units.js';
import { integer, items, real, record, word } from './loose.js';
import { step } from './json-text.js';
import { fromNm, toNm } from './technology-examination.js';
import type { Drawn, Examination } from './technology-examination.js';
import type { Roles } from './technology.js';
import { quoted, shown } from './words.js';

const lengthsOfLayer = ['minWidth_um', 'minSpacing_um', 'wideFrom_um', 'wideSpacing_um', 'maxWidth_um'];
const conducting = ['metal', 'plate'];

export function checkNames({ layers, vias, report }: Examination): void {
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

export function checkGrid({ technology, layers, vias, report, at }: Examination): void {
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
  for (const key of [
    'plateEnclosure_um',
    'tabLevel_um',
    'strip_um',
    'fingerLength_um',
    'gap_um',
    'frameWidth_um',
    'barWidth_um',
  ])
    onGrid(`${here}/${key}`, unit[key]);
  onGrid(`${here}/fingerWidth_um`, unit.fingerWidth_um, 2);
  items(unit.tab_um).forEach((side, i) => onGrid(`${here}/tab_um/${i}`, side, i === 1 ? 2 : 1));
  items(unit.outline_um).forEach((corner, c) =>
    items(corner).forEach((side, i) => onGrid(`${here}/outline_um/${c}/${i}`, side)),
  );
  for (const [key, terminal] of Object.entries(record(unit.terminals))) {
    items(record(terminal).at_um).forEach((side, i) => onGrid(`${here}/terminals/${key}/at_um/${i}`, side));
  }
}

export function checkLayer(examination: Examination, { at, entry }: Drawn): void {
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

export function checkVia(examination: Examination, { at, name, entry }: Drawn): void {
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
  extractionExclusion: ['marker'],
  boundary: ['outline'],
};

export function checkRoles(examination: Examination): void {
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
  const kind = record(examination.technology.unit).kind;
  if (kind !== 'framed-fingers') below('bottomPlate', 'topPlate', 'the top plate lies on the bottom plate');
  // A named cell may bring its top terminal on the straps' own metal.
  if (kind !== 'named-cell' || roles.topPlate !== roles.strap)
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

/** `VSS`, the bits and `TOP` end in pins, each on the layer of pins that belongs to its metal. */
export function checkPinLayers(examination: Examination): void {
  const { layers, roles, report, at } = examination;
  const pins = layers.filter(({ entry }) => entry.kind === 'pin');
  // A layer of pins that belongs to nothing is wrong by itself; whose it was meant to be is anybody's guess.
  if (pins.some(({ entry }) => !conducting.includes(word(examination.layer(entry.of)?.entry.kind) ?? ''))) return;
  const bearers = { bottomPlate: 'VSS', trunk: 'the bits', spine: 'TOP' } as const;
  for (const [role, nets] of Object.entries(bearers)) {
    const metal = word(roles[role]);
    if (metal === undefined || !layers.some(({ name }) => name === metal)) continue;
    if (pins.some(({ entry }) => entry.of === metal)) continue;
    const found = `no layer of kind "pin" of ${quoted(metal)}`;
    report.add(`${at}/layers`, found, `one: the pins of ${nets} are drawn on it`);
  }
}

export function checkDevice({ technology, report, at }: Examination): void {
  const device = record(technology.device);
  const parameters = Object.keys(record(device.parameters));
  for (const key of parameters)
    if (!/^[A-Za-z][A-Za-z0-9_]{0,63}$/.test(key))
      report.add(
        `${at}/device/parameters${step(key)}`,
        `parameter ${quoted(key)}`,
        'a letter, then letters, digits or _, 64 at most',
        'key',
      );
  const multiplicity = word(device.multiplicity);
  if (multiplicity !== undefined && parameters.includes(multiplicity))
    report.add(`${at}/device/multiplicity`, quoted(multiplicity), 'a key that is no size parameter');
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
  const others = terminals.filter((t) => t !== 'top' && t !== 'bottom');
  if (others.length > 0 && device.bulk === undefined)
    report.add(`${at}/device`, `terminal ${shown(others[0])} without "bulk"`, '"bulk": the net that it is on');
  if (others.length === 0 && device.bulk !== undefined)
    report.add(`${at}/device/bulk`, shown(device.bulk), 'no net, or a terminal for it beside "top" and "bottom"');
}
