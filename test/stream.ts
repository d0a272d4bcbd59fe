import { parseGDS, RecordType } from 'gdsii';
import { expect } from 'vitest';
import type { Point, Reference, Structure } from '../src/core/layout.js';
import type { Polygons } from '../src/spec/polygons.js';

// The npm package gdsii reads a stream file into records; it has nothing to do with this project.

/** The structures as the records tell them. */
export function readRecords(bytes: Uint8Array): { units: unknown; structures: Structure[] } {
  const structures: { -readonly [K in keyof Structure]: Structure[K][number][] | string }[] = [];
  let units: unknown;
  let fields = new Map<RecordType, unknown>();
  let kind: RecordType | undefined;
  for (const { tag, data } of parseGDS(new Uint8Array(bytes))) {
    if (tag === RecordType.UNITS) units = data;
    else if (tag === RecordType.STRNAME) structures.push({ name: data, polygons: [], references: [], labels: [] });
    else if ([RecordType.BOUNDARY, RecordType.SREF, RecordType.AREF, RecordType.TEXT].includes(tag)) {
      kind = tag;
      fields = new Map();
    } else if (tag === RecordType.ENDEL) {
      const into = structures.at(-1) as unknown as { polygons: unknown[]; references: unknown[]; labels: unknown[] };
      const xy = fields.get(RecordType.XY) as [number, number][];
      if (kind === RecordType.BOUNDARY) {
        expect(xy.at(-1)).toEqual(xy[0]);
        into.polygons.push({
          layer: fields.get(RecordType.LAYER),
          datatype: fields.get(RecordType.DATATYPE),
          xy: xy.slice(0, -1),
        });
      } else if (kind === RecordType.TEXT)
        into.labels.push({
          text: fields.get(RecordType.STRING),
          layer: fields.get(RecordType.LAYER),
          texttype: fields.get(RecordType.TEXTTYPE),
          xy: xy[0],
        });
      else {
        const { columns, rows } = (fields.get(RecordType.COLROW) ?? { columns: 1, rows: 1 }) as Reference;
        const step = (end: number, count: number) => xy[end].map((value, i) => (value - xy[0][i]) / count);
        const strans = ((fields.get(RecordType.STRANS) as number | undefined) ?? 0) & 0xffff;
        expect([0, 0x8000]).toContain(strans);
        expect(xy).toHaveLength(kind === RecordType.AREF ? 3 : 1);
        into.references.push({
          structure: fields.get(RecordType.SNAME),
          origin: xy[0],
          columns,
          rows,
          columnStep: kind === RecordType.AREF ? step(1, columns) : [0, 0],
          rowStep: kind === RecordType.AREF ? step(2, rows) : [0, 0],
          mirrored: strans === 0x8000,
          angle_deg: fields.get(RecordType.ANGLE) ?? 0,
        });
      }
    } else fields.set(tag, data);
  }
  return { units, structures: structures as unknown as Structure[] };
}

/** What a stream file can say of the structures: no nets, no parts, no cells; steps only where something repeats. */
export const sayable = (structures: readonly Structure[]): Structure[] =>
  structures.map(({ name, polygons, references, labels }) => ({
    name,
    polygons: polygons.map(({ layer, datatype, xy }) => ({ layer, datatype, xy })),
    references: references.map(({ cells: _, ...r }) =>
      r.columns === 1 && r.rows === 1 ? { ...r, columnStep: [0, 0], rowStep: [0, 0] } : r,
    ),
    labels,
  }));

/**
 * Layer and corners of every polygon, layer and place of every label, by brute force: every instance in turn, complex numbers for points.
 */
export function placedByHand(p: Polygons): string[] {
  const found: string[] = [];
  type Move = (point: Point) => Point;
  const visit = (name: string, move: Move): void => {
    const s = p.structures.find((one) => one.name === name)!;
    const written = (point: Point) =>
      move(point)
        .map((value) => value + 0)
        .join(',');
    for (const q of s.polygons) found.push(`${q.layer}: ${q.xy.map(written).join(' ')}`);
    for (const l of s.labels) found.push(`${l.layer}: ${l.text} at ${written(l.xy)}`);
    for (const r of s.references)
      for (let i = 0; i < r.columns; i++)
        for (let j = 0; j < r.rows; j++)
          visit(r.structure, ([x, y]) => {
            let [re, im] = [x, r.mirrored ? -y : y];
            for (let turned = 0; turned < r.angle_deg; turned += 90) [re, im] = [-im, re];
            return move([
              re + r.origin[0] + i * r.columnStep[0] + j * r.rowStep[0],
              im + r.origin[1] + i * r.columnStep[1] + j * r.rowStep[1],
            ]);
          });
  };
  visit(p.topStructure, (point) => point);
  return found.sort();
}
