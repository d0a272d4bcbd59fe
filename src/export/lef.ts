import { BoxList } from '../core/boxes.js';
import { figure } from '../core/figure.js';
import { streamKey } from '../core/flatten.js';
import type { FlatDrawing } from '../core/flatten.js';
import { InputError } from '../core/problem.js';
import type { Problem } from '../core/problem.js';
import type { Rectangle } from '../core/rectangle.js';
import { nm, um } from '../core/units.js';
import { pinNamer } from '../spec/pin-map.js';
import type { PinMap } from '../spec/pin-map.js';
import type { Polygons } from '../spec/polygons.js';
import type { Layer } from '../spec/technology.js';
import { drawnBlock } from './drawn-pins.js';
import type { DrawnBlock, DrawnPin } from './drawn-pins.js';
import { TOP, VSS, unitNet } from './drawn-shapes.js';
import { areaOf, boxesOf, rectanglesOf, united, without } from './regions.js';

export interface AbstractOptions {
  /** Names of one's own for the pins. */
  readonly pins?: PinMap;
}

/** A conductor with its name in LEF. */
type Named = Layer & { readonly lefName: string };

const conducting = ['metal', 'plate', 'diffusion', 'well'];
const isNamed = (layer: Layer): layer is Named => layer.lefName !== undefined;

/**
 * The block's abstract in LEF 5.8: size, pins as drawn, and on every conductor of the technology that has a name in LEF the whole block as
 * an obstruction, so that nothing is routed over, under or between the plates. Around a pin the obstruction keeps the layer's spacing, but
 * for what is drawn there. Antenna figures are the area of all metal that a net has on a layer, plates included.
 * @throws InputError with every metal in use that has no `lefName`, every pin without a shape, every name that LEF cannot hold
 */
export function writeAbstract(p: Polygons, options: AbstractOptions = {}): string {
  const drawn = drawnBlock(p);
  const nameOf = pinNamer(options.pins);
  const layers = namedConductors(p, drawn, nameOf);
  const { block, pins } = drawn;
  const areas = areasOf(drawn.flat, layers);
  const brackets = pins.some(({ net }) => nameOf(net).includes('<')) ? '<>' : '[]';
  const highest = layers.at(-1)?.lefName ?? '';
  const out = [
    `# Abstract of ${p.topStructure}: layers are those of the technology's own LEF; nothing is said of cuts and of metal above ${highest}.`,
    'VERSION 5.8 ;',
    `BUSBITCHARS "${brackets}" ;`,
    'DIVIDERCHAR "/" ;',
    'UNITS',
    `  DATABASE MICRONS ${Math.round(p.userUnit_m / p.databaseUnit_m)} ;`,
    'END UNITS',
    '',
    `MACRO ${p.topStructure}`,
    '  CLASS BLOCK ;',
    `  FOREIGN ${p.topStructure} 0 0 ;`,
    '  ORIGIN 0 0 ;',
    `  SIZE ${um(block.x1)} BY ${um(block.y1)} ;`,
    '  SYMMETRY X Y ;',
  ];
  for (const pin of pins)
    out.push(...pinText(pin, nameOf(pin.net), layers, areas.get(pin.net), p.technology.underlay?.net));
  out.push('  OBS', ...layers.flatMap((layer) => obstruction(drawn, layer)), '  END');
  out.push(`END ${p.topStructure}`, '', 'END LIBRARY', '');
  return out.join('\n');
}

const rect = ({ x0, y0, x1, y1 }: Rectangle): string => `RECT ${um(x0)} ${um(y0)} ${um(x1)} ${um(y1)} ;`;

function pinText(
  { net, places }: DrawnPin,
  name: string,
  layers: readonly Named[],
  areas: ReadonlyMap<string, number> | undefined,
  underlay: string | undefined,
): string[] {
  const [direction, use] =
    net === VSS
      ? ['INOUT', 'GROUND']
      : net === underlay
        ? ['INOUT', 'POWER']
        : net === TOP
          ? ['INOUT', 'ANALOG']
          : ['INPUT', 'ANALOG'];
  const ports = places.flatMap(({ layer: { of }, shape }) => [
    '    PORT',
    `      LAYER ${layers.find((layer) => layer.name === of)?.lefName ?? ''} ;`,
    ...shape.map((r) => `        ${rect(r)}`),
    '    END',
  ]);
  const antenna = layers.flatMap(({ name: layer, lefName }) => {
    const area = areas?.get(layer) ?? 0;
    return area > 0 ? [`    ANTENNAPARTIALMETALAREA ${figure(area / 1e6)} LAYER ${lefName} ;`] : [];
  });
  return [`  PIN ${name}`, `    DIRECTION ${direction} ;`, `    USE ${use} ;`, ...ports, ...antenna, `  END ${name}`];
}

/** All of the block on one layer but its pins and the spacing around them; in that spacing what is drawn. */
function obstruction({ flat, block, pins }: DrawnBlock, layer: Named): string[] {
  const spacing = nm(layer.minSpacing_um ?? 0);
  const shapes = pins.flatMap(({ places }) =>
    places.filter((at) => at.layer.of === layer.name).flatMap((at) => at.shape),
  );
  const grown = shapes.map((r) => ({
    x0: Math.max(block.x0, r.x0 - spacing),
    y0: Math.max(block.y0, r.y0 - spacing),
    x1: Math.min(block.x1, r.x1 + spacing),
    y1: Math.min(block.y1, r.y1 + spacing),
  }));
  const drawn = flat.layers.get(streamKey(layer.stream));
  const kept = without(boxesOf([block]), boxesOf(grown));
  const blocked = without(drawn === undefined ? kept : united(kept, drawn), boxesOf(shapes));
  const rule = layer.minSpacing_um === undefined ? '' : ` SPACING ${layer.minSpacing_um}`;
  return [`    LAYER ${layer.lefName}${rule} ;`, ...rectanglesOf(blocked).map((r) => `      ${rect(r)}`)];
}

/** The area (nm2) that each net covers on each conductor, by the layer's name. */
function areasOf(flat: FlatDrawing, layers: readonly Named[]): Map<string, Map<string, number>> {
  const areas = new Map<string, Map<string, number>>();
  for (const { name, stream } of layers) {
    const boxes = flat.layers.get(streamKey(stream));
    if (boxes === undefined) continue;
    const lists = new Map<string, BoxList>();
    boxes.x0.forEach((x0, i) => {
      const { net } = flat.shapes.polygon[boxes.shape[i]];
      if (net === undefined) return;
      const whole = unitNet(net, flat.cells[boxes.cell[i]]?.name);
      const list = lists.get(whole) ?? new BoxList();
      lists.set(whole, list);
      list.push(x0, boxes.y0[i], boxes.x1[i], boxes.y1[i]);
    });
    for (const [net, list] of lists) {
      const of = areas.get(net) ?? new Map<string, number>();
      areas.set(net, of.set(name, areaOf(list.finish())));
    }
  }
  return areas;
}

const isWord = (name: string): boolean => name.length <= 80 && /^[A-Za-z_][\w.$-]*(\[\d+\]|<\d+>)?$/.test(name);

/** The conductors that LEF has a name for, from the lowest up. */
function namedConductors(p: Polygons, { flat, block, pins }: DrawnBlock, nameOf: (pin: string) => string): Named[] {
  const problems: Problem[] = [];
  const add = (pointer: string, found: string, wanted: string) => problems.push({ pointer, found, wanted });
  const words = 'a letter or _, then letters, digits and _ . $ -; perhaps an index as [3] or <3>';
  for (const name of [p.topStructure, ...pins.map(({ net }) => nameOf(net))])
    if (!isWord(name)) add('', JSON.stringify(name), words);
  if (block.x0 !== 0 || block.y0 !== 0)
    add('/structures', `the block's lower left corner at ${um(block.x0)}, ${um(block.y0)} um`, 'it at 0, 0');

  const { layers } = p.technology;
  const pinMetals = new Set(pins.flatMap(({ places }) => places.map((place) => place.layer.of)));
  const holders = new Map<string, string>();
  layers.forEach((layer, i) => {
    const pointer = `/technology/layers/${i}`;
    if (!conducting.includes(layer.kind) && layer.kind !== 'pin') return;
    const key = streamKey(layer.stream);
    const other = holders.get(key);
    if (other !== undefined)
      add(`${pointer}/stream`, `${key}, as for "${other}"`, 'a number of its own: shapes are told apart by it');
    holders.set(key, layer.name);
    const used = flat.layers.has(key);
    if (layer.lefName !== undefined && !isWord(layer.lefName))
      add(`${pointer}/lefName`, JSON.stringify(layer.lefName), words);
    if (layer.lefName === undefined && ((layer.kind === 'metal' && used) || pinMetals.has(layer.name)))
      add(pointer, `no "lefName" for layer "${layer.name}"`, '"lefName": the name that it has in LEF');
  });
  for (const { net, places } of pins)
    for (const { layer, shape } of places)
      if (shape.length === 0) add('/structures', `pin "${net}" without a shape`, `one on layer "${layer.name}"`);
  if (problems.length > 0) throw new InputError(problems);
  return layers
    .filter((layer) => conducting.includes(layer.kind))
    .filter(isNamed)
    .sort((a, b) => (a.height_um ?? 0) - (b.height_um ?? 0));
}
