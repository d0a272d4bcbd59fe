import { join } from 'node:path';
import {
  InputError,
  drawFloorplanSvg,
  drawHookupSvg,
  drawMismatchSvg,
  formatFloorplan,
  formatMetrics,
  formatPolygons,
  withPinNames,
  writeAbstract,
  writeCapacitorNetlist,
  writeDeviceNetlist,
  writeExtractedNetlist,
  writeMismatchCsv,
  writeStream,
} from '../index.js';
import type { Drawn, PinMap, Polygons } from '../index.js';
import type { OutputFile } from './io.js';

/** What the writers can be told. */
export interface WriterOptions {
  readonly date?: string;
  readonly flat?: boolean;
  readonly stubCell?: boolean;
  readonly pins?: PinMap;
  readonly devices?: 'units' | 'merged';
  readonly dummies?: 'include' | 'omit';
  /** The same drawing on the technology's own stream numbers, where it was drawn on others. */
  readonly onOwnLayers?: Polygons;
}

type Written = readonly (readonly [ending: string, content: string | Uint8Array])[];
type Writer = (
  drawn: Pick<Drawn, 'floorplan' | 'polygons' | 'circuit' | 'covariances'>,
  options: WriterOptions,
) => Written | Promise<Written>;

const labelled = (polygons: Polygons, { pins }: WriterOptions): Polygons =>
  pins === undefined ? polygons : withPinNames(polygons, pins);

/** The kinds of files that a drawing is written as, as `export --to` names them. Without a drawing only the floorplan's picture is left. */
const writers = {
  gds: ({ polygons }, options) =>
    polygons === undefined ? [] : [['.gds', writeStream(labelled(polygons, options), options)]],
  polygons: ({ polygons }) => (polygons === undefined ? [] : [['.polygons.json', formatPolygons(polygons)]]),
  svg: async ({ floorplan, polygons, covariances }, options) => [
    ['.floorplan.svg', await drawFloorplanSvg(floorplan)],
    ...(polygons === undefined
      ? []
      : [['.hookup.svg', await drawHookupSvg(labelled(polygons, options), floorplan)] as const]),
    ['.mismatch.svg', await drawMismatchSvg(floorplan, covariances)],
    ['.mismatch.csv', writeMismatchCsv(floorplan, covariances)],
  ],
  spice: ({ polygons, circuit }, options) =>
    polygons === undefined
      ? []
      : [
          ['.cir', writeCapacitorNetlist(options.onOwnLayers ?? polygons, options)],
          ['.lvs.cir', writeDeviceNetlist(options.onOwnLayers ?? polygons, options)],
          ...(circuit === undefined
            ? []
            : [['.extracted.cir', writeExtractedNetlist(options.onOwnLayers ?? polygons, circuit, options)] as const]),
        ],
  lef: ({ polygons }, options) =>
    polygons === undefined ? [] : [['.lef', writeAbstract(options.onOwnLayers ?? polygons, options)]],
} satisfies Record<string, Writer>;

export type Format = keyof typeof writers;
export const formats = Object.keys(writers) as readonly Format[];

/**
 * The drawing in the chosen formats; without one drawn, what of it the floorplan alone gives.
 * @param refused receives what a format cannot hold; without it that ends the run
 */
export async function drawingFiles(
  drawn: Drawn,
  chosen: readonly Format[],
  folder: string,
  options: WriterOptions = {},
  refused?: (format: Format, error: InputError) => void,
  base = drawn.metrics.name,
): Promise<OutputFile[]> {
  const files: OutputFile[] = [];
  for (const format of formats) {
    if (!chosen.includes(format)) continue;
    const write: Writer = writers[format];
    try {
      for (const [ending, content] of await write(drawn, options))
        files.push({ path: join(folder, base + ending), content });
    } catch (error) {
      if (refused === undefined || !(error instanceof InputError)) throw error;
      refused(format, error);
    }
  }
  return files;
}

const endings = [
  ...['.floorplan.json', '.metrics.json', '.gds', '.polygons.json', '.floorplan.svg', '.hookup.svg'],
  ...['.mismatch.svg', '.mismatch.csv', '.cir', '.lvs.cir', '.extracted.cir', '.lef'],
];

/** What may be left of an earlier set of this name and is not among these files: it belongs to another floorplan. */
export const staleBeside = (files: readonly OutputFile[], name: string, folder: string): string[] =>
  endings.map((ending) => join(folder, name + ending)).filter((path) => !files.some((file) => file.path === path));

/**
 * All that `place` writes, and a sentence on each format that cannot hold this array.
 * @param chosen what besides the floorplan and its figures. @param base what the files' names begin with
 */
export async function allFiles(
  drawn: Drawn,
  folder: string,
  chosen = formats,
  base = drawn.metrics.name,
): Promise<{ files: OutputFile[]; left: string[] }> {
  const { floorplan, metrics } = drawn;
  const left: string[] = [];
  const refused = (format: Format, { problems }: InputError) => {
    for (const { found, wanted } of problems) left.push(`No ${format} files: found ${found}; wanted ${wanted}.`);
  };
  const files = [
    { path: join(folder, `${base}.floorplan.json`), content: formatFloorplan(floorplan) },
    { path: join(folder, `${base}.metrics.json`), content: formatMetrics(metrics) },
    ...(await drawingFiles(drawn, chosen, folder, {}, refused, base)),
  ];
  return { files, left };
}
