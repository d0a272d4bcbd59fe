import { join } from 'node:path';
import {
  drawFloorplanSvg,
  drawHookupSvg,
  formatFloorplan,
  formatMetrics,
  formatPolygons,
  writeStream,
} from '../index.js';
import type { Drawn } from '../index.js';
import type { OutputFile } from './io.js';

/** The kinds of files that a drawing is written as, as `export --to` names them. */
export const formats = ['gds', 'polygons', 'svg'] as const;
export type Format = (typeof formats)[number];

/** The drawing in the chosen formats; without one drawn, what of it the floorplan alone gives. */
export async function drawingFiles(
  { floorplan, polygons, metrics: { name } }: Drawn,
  chosen: readonly Format[],
  folder: string,
  date?: string,
): Promise<OutputFile[]> {
  const files: OutputFile[] = [];
  const add = (ending: string, content: string | Uint8Array) =>
    files.push({ path: join(folder, name + ending), content });
  if (chosen.includes('polygons') && polygons !== undefined) add('.polygons.json', formatPolygons(polygons));
  if (chosen.includes('gds') && polygons !== undefined) {
    add('.gds', writeStream(polygons, date === undefined ? {} : { date }));
  }
  if (chosen.includes('svg')) {
    add('.floorplan.svg', await drawFloorplanSvg(floorplan));
    if (polygons !== undefined) add('.hookup.svg', await drawHookupSvg(polygons, floorplan));
  }
  return files;
}

/** All that `place` writes. */
export async function allFiles(drawn: Drawn, folder: string): Promise<OutputFile[]> {
  const { floorplan, metrics } = drawn;
  return [
    { path: join(folder, `${metrics.name}.floorplan.json`), content: formatFloorplan(floorplan) },
    { path: join(folder, `${metrics.name}.metrics.json`), content: formatMetrics(metrics) },
    ...(await drawingFiles(drawn, formats, folder)),
  ];
}
