import type { FlatDrawing, FlatLayer } from '../../src/core/flatten.js';
import { flatten, streamKey } from '../../src/core/flatten.js';
import type { Point, Polygon, Reference, Structure } from '../../src/core/layout.js';
import type { Random } from '../../src/core/random.js';
import type { Rectangle } from '../../src/core/rectangle.js';
import { outline, rectangle } from '../../src/core/rectangle.js';
import type { Finding } from '../../src/check/finding.js';
import type { Polygons } from '../../src/spec/polygons.js';
import type { Layer, Via } from '../../src/spec/technology.js';

/** A drawing with one fault in it: what a check should say (any of these rules), about which nets, and where. */
export interface Planted {
  readonly polygons: Polygons;
  readonly rules: readonly string[];
  readonly nets?: readonly string[];
  readonly region: Rectangle;
}

type Plant = (p: Polygons, random: Random) => Planted | undefined;

const nanometres = (length_um: number) => Math.round(length_um * 1000);

const topOf = (p: Polygons): Structure => p.structures.find((s) => s.name === p.topStructure)!;

const withTop = (p: Polygons, change: (top: Structure) => Structure, more: Structure[] = []): Polygons => ({
  ...p,
  structures: [...more, ...p.structures.map((s) => (s.name === p.topStructure ? change(s) : s))],
});

const withPolygon = (p: Polygons, index: number, changed: Polygon | undefined): Polygons =>
  withTop(p, (top) => ({
    ...top,
    polygons: top.polygons.flatMap((polygon, i) => (i !== index ? [polygon] : changed ? [changed] : [])),
  }));

const withAdded = (p: Polygons, added: Polygon): Polygons =>
  withTop(p, (top) => ({ ...top, polygons: [...top.polygons, added] }));

/** The polygon as a rectangle, if it is one. */
function boxOf(polygon: Polygon): Rectangle | undefined {
  const xs = polygon.xy.map((point) => point[0]);
  const ys = polygon.xy.map((point) => point[1]);
  return polygon.xy.length === 4
    ? rectangle(Math.min(...xs), Math.min(...ys), Math.max(...xs), Math.max(...ys))
    : undefined;
}

const redrawn = (polygon: Polygon, box: Rectangle): Polygon => ({ ...polygon, xy: outline(box) });

const pick = <T>(list: readonly T[], random: Random): T | undefined =>
  list.length > 0 ? list[random.below(list.length)] : undefined;

/** A fault from one of the candidates, tried in random order until one works. */
function fromAny<T>(list: readonly T[], random: Random, plant: (one: T) => Planted | undefined): Planted | undefined {
  const left = [...list];
  while (left.length > 0) {
    const [one] = left.splice(random.below(left.length), 1);
    const planted = plant(one);
    if (planted) return planted;
  }
  return undefined;
}

interface TopBox {
  readonly index: number;
  readonly polygon: Polygon;
  readonly box: Rectangle;
}

/** Rectangles of the top structure that are parts of one of these kinds. */
function topBoxes(p: Polygons, ...parts: string[]): TopBox[] {
  return topOf(p).polygons.flatMap((polygon, index) => {
    const box = boxOf(polygon);
    return box && polygon.part && (parts.length === 0 || parts.includes(polygon.part)) ? [{ index, polygon, box }] : [];
  });
}

const isBit = (p: Polygons, net: string | undefined): boolean =>
  p.capacitors.some((capacitor) => capacitor.role === 'bit' && capacitor.name === net);

const layerOf = (p: Polygons, polygon: Polygon): Layer | undefined =>
  p.technology.layers.find((l) => streamKey(l.stream) === streamKey(polygon));
const viaOf = (p: Polygons, polygon: Polygon): Via | undefined =>
  p.technology.vias.find((v) => streamKey(v.stream) === streamKey(polygon));

interface FlatBox extends Rectangle {
  readonly net: string | undefined;
  readonly part: string | undefined;
  readonly cell: number;
  readonly polygon: Polygon;
}

/** All rectangles of a layer, with the net that each is meant to carry: those of units after their cell. */
export function flatBoxes(flat: FlatDrawing, layer: FlatLayer | undefined): FlatBox[] {
  if (!layer) return [];
  return Array.from(layer.x0, (x0, i) => {
    const polygon = flat.shapes.polygon[layer.shape[i]];
    const cell = layer.cell[i];
    const name = cell < 0 ? undefined : flat.cells[cell].name;
    const bottom = name === '-' || name === '=' ? 'VSS' : name;
    const top = name === '-' ? 'VSS' : 'TOP';
    const net = cell < 0 ? polygon.net : polygon.net === 'BOTTOM' ? bottom : polygon.net === 'TOP' ? top : undefined;
    return { x0, y0: layer.y0[i], x1: layer.x1[i], y1: layer.y1[i], net, part: polygon.part, cell, polygon };
  });
}

const overlapOf = (a: Rectangle, b: Rectangle): Rectangle =>
  rectangle(Math.max(a.x0, b.x0), Math.max(a.y0, b.y0), Math.min(a.x1, b.x1), Math.min(a.y1, b.y1));
const overlaps = (a: Rectangle, b: Rectangle): boolean => a.x0 < b.x1 && b.x0 < a.x1 && a.y0 < b.y1 && b.y0 < a.y1;
const touches = (a: Rectangle, b: Rectangle): boolean => {
  const o = overlapOf(a, b);
  return o.x1 >= o.x0 && o.y1 >= o.y0 && o.x1 - o.x0 + (o.y1 - o.y0) > 0;
};

/** The straight gap between two boxes that face each other, and whether it runs along x. */
function gapOf(a: Rectangle, b: Rectangle): { readonly gap: Rectangle; readonly alongX: boolean } | undefined {
  const o = overlapOf(a, b);
  if (o.x0 > o.x1 && o.y0 < o.y1) return { gap: rectangle(o.x1, o.y0, o.x0, o.y1), alongX: true };
  if (o.y0 > o.y1 && o.x0 < o.x1) return { gap: rectangle(o.x0, o.y1, o.x1, o.y0), alongX: false };
  return undefined;
}

/** The number of pieces that all conductors make, by trying every pair: slow, and nothing in common with the check. */
function countPieces(p: Polygons): number {
  const flat = flatten(p.structures, p.topStructure);
  const { technology } = p;
  const nodes: { box: Rectangle; on: string[] }[] = [];
  for (const layer of technology.layers)
    if (layer.kind === 'metal' || layer.kind === 'plate')
      for (const box of flatBoxes(flat, flat.layers.get(streamKey(layer.stream))))
        nodes.push({ box, on: [layer.name] });
  for (const via of technology.vias)
    for (const box of flatBoxes(flat, flat.layers.get(streamKey(via.stream))))
      nodes.push({ box, on: [via.lower, via.upper] });
  const piece = nodes.map((_, i) => i);
  const find = (i: number): number => (piece[i] === i ? i : (piece[i] = find(piece[i])));
  for (let i = 0; i < nodes.length; i++)
    for (let j = i + 1; j < nodes.length; j++) {
      if (find(i) === find(j) || !nodes[i].on.some((name) => nodes[j].on.includes(name))) continue;
      if (nodes[i].on.length === 2 && nodes[j].on.length === 2) continue;
      if (touches(nodes[i].box, nodes[j].box)) piece[find(i)] = find(j);
    }
  return nodes.filter((_, i) => find(i) === i).length;
}

const viaRemoved: Plant = (p, random) => {
  const pieces = countPieces(p);
  return fromAny(topBoxes(p, 'via'), random, ({ index, polygon, box }) => {
    const polygons = withPolygon(p, index, undefined);
    // One of two vias of a joint may go without harm.
    if (countPieces(polygons) <= pieces) return undefined;
    return {
      polygons,
      rules: ['open', 'floating'],
      region: box,
      ...(isBit(p, polygon.net) ? { nets: [polygon.net!] } : {}),
    };
  });
};

const trunkMoved: Plant = (p, random) => {
  const lines = topBoxes(p, 'trunk', 'shield').filter(
    ({ polygon }) => layerOf(p, polygon)?.name === p.technology.roles.trunk,
  );
  return fromAny(
    lines.filter(({ polygon }) => polygon.part === 'trunk' && isBit(p, polygon.net)),
    random,
    (trunk) => {
      const beside = lines
        .filter((l) => l.polygon.net !== trunk.polygon.net && l.box.y0 < trunk.box.y1 && trunk.box.y0 < l.box.y1)
        .sort((a, b) => Math.abs(a.box.x0 - trunk.box.x0) - Math.abs(b.box.x0 - trunk.box.x0))[0];
      if (!beside) return undefined;
      const by = beside.box.x0 - trunk.box.x0;
      const moved = { ...trunk.box, x0: trunk.box.x0 + by, x1: trunk.box.x1 + by };
      const region = { ...moved, x0: Math.min(moved.x0, trunk.box.x0), x1: Math.max(moved.x1, trunk.box.x1) };
      const polygons = withPolygon(p, trunk.index, redrawn(trunk.polygon, moved));
      return { polygons, rules: ['short', 'open'], nets: [trunk.polygon.net!], region };
    },
  );
};

const spacingShort: Plant = (p, random) => {
  const flat = flatten(p.structures, p.topStructure);
  const grid = p.technology.grid_nm;
  const all = topBoxes(p).filter(({ polygon }) => layerOf(p, polygon)?.minSpacing_um !== undefined);
  return fromAny(all, random, ({ index, polygon, box }) => {
    const layer = layerOf(p, polygon)!;
    const spacing = nanometres(layer.minSpacing_um!);
    const others = flatBoxes(flat, flat.layers.get(streamKey(layer.stream)));
    const near = others.flatMap((other) => {
      const between = gapOf(box, other);
      if (!between || others.some((third) => overlaps(third, between.gap))) return [];
      const wide = between.alongX ? between.gap.x1 - between.gap.x0 : between.gap.y1 - between.gap.y0;
      return wide >= spacing && wide <= 2 * spacing ? [{ other, between, wide }] : [];
    });
    const chosen = pick(near, random);
    if (!chosen) return undefined;
    const { other, between, wide } = chosen;
    const by = wide - spacing + grid;
    const grown = between.alongX
      ? other.x0 > box.x0
        ? { ...box, x1: box.x1 + by }
        : { ...box, x0: box.x0 - by }
      : other.y0 > box.y0
        ? { ...box, y1: box.y1 + by }
        : { ...box, y0: box.y0 - by };
    return { polygons: withPolygon(p, index, redrawn(polygon, grown)), rules: ['spacing'], region: between.gap };
  });
};

/** The instances of the drawing's array of units, with what each is meant to be. */
function cellsOf(p: Polygons): { reference: number; instance: number; name: string; region: Rectangle }[] {
  const flat = flatten(p.structures, p.topStructure);
  const plate = p.technology.layers.find((l) => l.name === p.technology.roles.bottomPlate)!;
  const boxes = flatBoxes(flat, flat.layers.get(streamKey(plate.stream)));
  return flat.cells.map((cell, number) => {
    const own = boxes.filter((box) => box.cell === number);
    const region = own.reduce<Rectangle>(
      (a, b) => rectangle(Math.min(a.x0, b.x0), Math.min(a.y0, b.y0), Math.max(a.x1, b.x1), Math.max(a.y1, b.y1)),
      own[0],
    );
    return { reference: cell.reference, instance: cell.instance, name: cell.name!, region };
  });
}

const cellsSwapped: Plant = (p, random) => {
  const cells = cellsOf(p);
  const one = pick(
    cells.filter((cell) => isBit(p, cell.name)),
    random,
  );
  const other =
    one &&
    pick(
      cells.filter((c) => c.name !== one.name && c.reference === one.reference && isBit(p, c.name)),
      random,
    );
  if (!other) return undefined;
  const polygons = withTop(p, (top) => ({
    ...top,
    references: top.references.map((reference, r) => {
      if (r !== one.reference) return reference;
      const swapped = [...reference.cells!];
      [swapped[one.instance], swapped[other.instance]] = [other.name, one.name];
      return { ...reference, cells: swapped };
    }),
  }));
  return { polygons, rules: ['unit-net'], nets: [one.name, other.name], region: one.region };
};

/** The wires of two capacitors exchanged at their pins; the cells say what they said. */
const wiresSwapped: Plant = (p, random) => {
  const cells = cellsOf(p);
  const one = pick(
    cells.filter((cell) => isBit(p, cell.name)),
    random,
  );
  const other =
    one &&
    pick(
      cells.filter((cell) => isBit(p, cell.name) && cell.name !== one.name),
      random,
    );
  if (!other) return undefined;
  const exchanged = (text: string) => (text === one.name ? other.name : text === other.name ? one.name : text);
  const polygons = withTop(p, (top) => ({
    ...top,
    labels: top.labels.map((label) => ({ ...label, text: exchanged(label.text) })),
  }));
  return { polygons, rules: ['unit-net'], nets: [one.name, other.name], region: one.region };
};

/** One instance taken out of an array: what is left of the array, and a reference of its own for the instance. */
function isolated(reference: Reference, instance: number, structure: string): Reference[] {
  const [row, column] = [Math.floor(instance / reference.columns), instance % reference.columns];
  const part = (
    fromRow: number,
    rows: number,
    fromColumn: number,
    columns: number,
    of = reference.structure,
  ): Reference[] =>
    rows <= 0 || columns <= 0
      ? []
      : [
          {
            ...reference,
            structure: of,
            rows,
            columns,
            origin: [0, 1].map(
              (axis) =>
                reference.origin[axis] + fromRow * reference.rowStep[axis] + fromColumn * reference.columnStep[axis],
            ) as unknown as Point,
            ...(reference.cells
              ? {
                  cells: Array.from(
                    { length: rows * columns },
                    (_, i) =>
                      reference.cells![
                        (fromRow + Math.floor(i / columns)) * reference.columns + fromColumn + (i % columns)
                      ],
                  ),
                }
              : {}),
          },
        ];
  return [
    ...part(0, row, 0, reference.columns),
    ...part(row, 1, 0, column),
    ...part(row, 1, column, 1, structure),
    ...part(row, 1, column + 1, reference.columns - column - 1),
    ...part(row + 1, reference.rows - row - 1, 0, reference.columns),
  ];
}

const unitDeleted: Plant = (p, random) => {
  const cell = pick(cellsOf(p), random);
  if (!cell) return undefined;
  const reference = topOf(p).references[cell.reference];
  const unit = p.structures.find((s) => s.name === reference.structure)!;
  const plates = unit.polygons.filter((polygon) => polygon.part === 'plate');
  const lost = pick(plates, random);
  // A plate under a comb is no part of what makes it a unit: without it the unit is one of another size.
  const { roles } = p.technology;
  const shields = lost && ![roles.bottomPlate, roles.topPlate].includes(layerOf(p, lost)?.name ?? '');
  const faulty = {
    ...unit,
    name: `${unit.name}_faulty`,
    polygons: unit.polygons.filter((polygon) => polygon !== lost),
  };
  const polygons = withTop(
    p,
    (top) => ({
      ...top,
      references: top.references.flatMap((r, i) =>
        i === cell.reference ? isolated(r, cell.instance, faulty.name) : [r],
      ),
    }),
    [faulty],
  );
  const region = cell.region;
  return shields
    ? { polygons, rules: ['unit-area'], region }
    : { polygons, rules: ['unit-missing'], nets: [cell.name], region };
};

const busCut: Plant = (p, random) => {
  const pieces = countPieces(p);
  const joints = topBoxes(p, 'via');
  return fromAny(
    topBoxes(p, 'bus').filter(({ polygon }) => isBit(p, polygon.net)),
    random,
    ({ index, polygon, box }) => {
      const gap = 4 * Math.ceil(nanometres(layerOf(p, polygon)!.minSpacing_um!) / 2);
      const ends = joints
        .filter((via) => via.polygon.net === polygon.net && overlaps(via.box, box))
        .map((via) => via.box);
      const between = [...ends]
        .sort((a, b) => a.x0 - b.x0)
        .flatMap((end, i, sorted) => (i > 0 && end.x0 - sorted[i - 1].x1 > gap ? [[sorted[i - 1].x1, end.x0]] : []));
      const room = pick(between, random);
      if (!room) return undefined;
      const grid = p.technology.grid_nm;
      const from = room[0] + grid * random.below(Math.floor((room[1] - room[0] - gap) / grid));
      const polygons = withAdded(
        withPolygon(p, index, redrawn(polygon, { ...box, x1: from })),
        redrawn(polygon, { ...box, x0: from + gap }),
      );
      if (countPieces(polygons) <= pieces) return undefined;
      const region = { ...box, x0: from, x1: from + gap };
      return { polygons, rules: ['open'], nets: [polygon.net!], region };
    },
  );
};

const offGrid: Plant = (p, random) =>
  fromAny(topBoxes(p), random, ({ index, polygon, box }) => {
    const end = random.below(4);
    const key = (['x0', 'y0', 'x1', 'y1'] as const)[end];
    const moved = { ...box, [key]: box[key] + 1 };
    return { polygons: withPolygon(p, index, redrawn(polygon, moved)), rules: ['grid'], region: moved };
  });

/** Ties a box of one net to a box of another on the same layer by a straight wire across the gap between them. */
function tied(
  p: Polygons,
  random: Random,
  layer: Layer,
  one: readonly FlatBox[],
  other: readonly FlatBox[],
): Planted | undefined {
  const width = nanometres(layer.minWidth_um!);
  return fromAny(one, random, (a) => {
    const facing = other
      .flatMap((b) => {
        const between = gapOf(a, b);
        if (!between) return [];
        const { gap, alongX } = between;
        const length = alongX ? gap.x1 - gap.x0 : gap.y1 - gap.y0;
        return (alongX ? gap.y1 - gap.y0 : gap.x1 - gap.x0) >= width ? [{ b, gap, alongX, length }] : [];
      })
      .sort((s, t) => s.length - t.length);
    if (facing.length === 0) return undefined;
    const { b, gap, alongX } = facing[0];
    const wire = alongX ? { ...gap, y1: gap.y0 + width } : { ...gap, x1: gap.x0 + width };
    const polygons = withAdded(p, { layer: layer.stream.layer, datatype: layer.stream.datatype, xy: outline(wire) });
    return { polygons, rules: ['short'], nets: [a.net!, b.net!], region: wire };
  });
}

const ringDummyTied: Plant = (p, random) => {
  const flat = flatten(p.structures, p.topStructure);
  const layer = p.technology.layers.find((l) => l.name === p.technology.roles.bottomPlate)!;
  const boxes = flatBoxes(flat, flat.layers.get(streamKey(layer.stream)));
  const dummies = boxes.filter((box) => box.cell >= 0 && flat.cells[box.cell].name === '-' && box.part === 'plate');
  return tied(
    p,
    random,
    layer,
    dummies,
    boxes.filter((box) => isBit(p, box.net)),
  );
};

const shieldTied: Plant = (p, random) => {
  const flat = flatten(p.structures, p.topStructure);
  const layer = p.technology.layers.find((l) => l.name === p.technology.roles.trunk)!;
  const boxes = flatBoxes(flat, flat.layers.get(streamKey(layer.stream)));
  return tied(
    p,
    random,
    layer,
    boxes.filter((box) => box.part === 'shield' || (box.part === 'trunk' && box.net === 'VSS')),
    boxes.filter((box) => isBit(p, box.net) && box.part === 'trunk'),
  );
};

/** The via on a unit's landing strip moved up along its trunk until it lies under the top plate. */
const viaUnderPlate: Plant = (p, random) => {
  if (p.technology.viaUnderTopPlate) return undefined;
  const { roles } = p.technology;
  const joins = p.technology.vias.find((v) => v.lower === roles.trunk && v.upper === roles.stub)!;
  const flat = flatten(p.structures, p.topStructure);
  const top = p.technology.layers.find((l) => l.name === roles.topPlate)!;
  const plates = flatBoxes(flat, flat.layers.get(streamKey(top.stream)));
  const vias = topBoxes(p, 'via').filter(({ polygon }) => viaOf(p, polygon) === joins && isBit(p, polygon.net));
  return fromAny(vias, random, ({ index, polygon, box }) => {
    const above = plates
      .filter((plate) => plate.x0 <= box.x0 && plate.x1 >= box.x1 && plate.y0 >= box.y1)
      .sort((a, b) => a.y0 - b.y0)[0];
    const up = above && above.y0 - box.y1 + p.technology.grid_nm;
    if (!above || up > nanometres(1)) return undefined;
    const moved = { ...box, y0: box.y0 + up, y1: box.y1 + up };
    return { polygons: withPolygon(p, index, redrawn(polygon, moved)), rules: ['via-under-plate'], region: moved };
  });
};

/** A via on a trunk below a unit that hangs on another one: where the two cross, nothing keeps them apart any more. */
const viaTooMany: Plant = (p, random) => {
  const { roles } = p.technology;
  const joins = p.technology.vias.find((v) => v.lower === roles.trunk && v.upper === roles.stub)!;
  const half = nanometres(joins.size_um) / 2;
  const flat = flatten(p.structures, p.topStructure);
  const stub = p.technology.layers.find((l) => l.name === roles.stub)!;
  const plates = flatBoxes(flat, flat.layers.get(streamKey(stub.stream))).filter((box) => box.part === 'plate');
  const trunks = topBoxes(p, 'trunk').filter(({ polygon }) => isBit(p, polygon.net));
  return fromAny(trunks, random, ({ polygon, box }) => {
    const passed = plates.filter(
      (plate) => overlaps(plate, box) && plate.net !== polygon.net && plate.y0 > box.y0 && plate.y1 < box.y1,
    );
    const plate = pick(passed, random);
    if (!plate) return undefined;
    const x = (box.x0 + box.x1) / 2;
    const y = plate.y0 + (box.x1 - box.x0) / 2;
    const via = rectangle(x - half, y - half, x + half, y + half);
    const polygons = withAdded(p, { ...joins.stream, xy: outline(via) });
    return { polygons, rules: ['short'], nets: [polygon.net!, plate.net!], region: via };
  });
};

const smallIsland: Plant = (p, random) => {
  const flat = flatten(p.structures, p.topStructure);
  const metals = p.technology.layers.filter(
    (l) => l.kind === 'metal' && l.minArea_um2 !== undefined && l.minWidth_um !== undefined,
  );
  const layer = pick(metals, random);
  const block = boxOf(topOf(p).polygons.find((polygon) => layerOf(p, polygon)?.name === p.technology.roles.boundary)!);
  if (!layer || !block) return undefined;
  const [side, grid] = [nanometres(layer.minWidth_um!), p.technology.grid_nm];
  const apart = nanometres(layer.wideSpacing_um ?? layer.minSpacing_um ?? 0);
  const others = flatBoxes(flat, flat.layers.get(streamKey(layer.stream)));
  for (let trial = 0; trial < 1000; trial++) {
    const x = block.x0 + grid * random.below(Math.floor((block.x1 - block.x0 - side) / grid));
    const y = block.y0 + grid * random.below(Math.floor((block.y1 - block.y0 - side) / grid));
    const island = rectangle(x, y, x + side, y + side);
    if (others.some((other) => overlaps(other, rectangle(x - apart, y - apart, x + side + apart, y + side + apart))))
      continue;
    const polygons = withAdded(p, { layer: layer.stream.layer, datatype: layer.stream.datatype, xy: outline(island) });
    return { polygons, rules: ['area'], region: island };
  }
  return undefined;
};

const enclosureShort: Plant = (p, random) => {
  const flat = flatten(p.structures, p.topStructure);
  return fromAny(topBoxes(p, 'via'), random, ({ index, polygon, box }) => {
    const via = viaOf(p, polygon)!;
    const name = pick([via.lower, via.upper], random);
    const layer = p.technology.layers.find((l) => l.name === name)!;
    const metal = flatBoxes(flat, flat.layers.get(streamKey(layer.stream)));
    const under = metal.find((m) => m.x0 <= box.x0 && m.y0 <= box.y0 && m.x1 >= box.x1 && m.y1 >= box.y1);
    if (!under) return undefined;
    const short = nanometres(via.enclosure_um) - p.technology.grid_nm;
    // Towards a side where nothing goes on: there the rim is one grid step too narrow.
    const shifts: readonly (readonly [dx: number, dy: number])[] = [
      [under.x1 - short - box.x1, 0],
      [under.x0 + short - box.x0, 0],
      [0, under.y1 - short - box.y1],
      [0, under.y0 + short - box.y0],
    ];
    return fromAny(shifts, random, ([dx, dy]) => {
      if (Math.abs(dx + dy) > nanometres(via.size_um)) return undefined;
      const moved = rectangle(box.x0 + dx, box.y0 + dy, box.x1 + dx, box.y1 + dy);
      const grown = rectangle(moved.x0 - short - 1, moved.y0 - short - 1, moved.x1 + short + 1, moved.y1 + short + 1);
      if (metal.some((m) => m !== under && overlaps(m, grown))) return undefined;
      return { polygons: withPolygon(p, index, redrawn(polygon, moved)), rules: ['enclosure'], region: moved };
    });
  });
};

/** Every kind of fault; each works on any drawing whose shapes say their `net` and `part`, and gives undefined where none fits. */
export const faults: Readonly<Record<string, Plant>> = {
  'via removed': viaRemoved,
  'trunk moved onto its neighbour': trunkMoved,
  'spacing one grid step short': spacingShort,
  'cells exchanged': cellsSwapped,
  'wires exchanged': wiresSwapped,
  'plate of a unit deleted': unitDeleted,
  'bus cut': busCut,
  'point off the grid': offGrid,
  'ring dummy tied to a bit': ringDummyTied,
  'shield tied to a trunk': shieldTied,
  'island below its least area': smallIsland,
  'enclosure one grid step short': enclosureShort,
};

/** Kinds of fault that trunks below the plates bring with them. */
export const underPlateFaults: Readonly<Record<string, Plant>> = {
  'via under a top plate': viaUnderPlate,
  'via too many below a unit': viaTooMany,
};

/** Whether a finding names a planted fault: one of its rules, one of its nets, within a pitch of it. */
export function names(finding: Finding, planted: Planted): boolean {
  const [x, y] = [finding.at_um[0] * 1000, finding.at_um[1] * 1000];
  const steps = topOf(planted.polygons).references;
  const pitchX = Math.max(...steps.map((r) => r.columnStep[0]));
  const pitchY = Math.max(...steps.map((r) => r.rowStep[1]));
  const { region, nets } = planted;
  return (
    planted.rules.includes(finding.rule) &&
    (!nets || (finding.nets ?? []).some((net) => nets.includes(net))) &&
    x >= region.x0 - pitchX &&
    x <= region.x1 + pitchX &&
    y >= region.y0 - pitchY &&
    y <= region.y1 + pitchY
  );
}
