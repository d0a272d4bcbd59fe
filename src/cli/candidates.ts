import pc from 'picocolors';
import { InputError, compact, comparedFigures, figuresOf, formatJson, formatMetrics } from '../index.js';
import type { Drawn, Kept, Metrics } from '../index.js';
import type { Delivery } from './deliver.js';
import { shown } from './fault.js';
import { allFiles, formats, staleBeside } from './files.js';
import type { Io, OutputFile } from './io.js';
import { arrayInWords, findingLines, lines } from './summary.js';

const [fewest, most] = [2, 16];

/** How many candidates the command line asks for. */
export function countOf(text: string): number {
  const count = /^\d{1,3}$/.test(text) ? Number(text) : NaN;
  if (count >= fewest && count <= most) return count;
  const wanted = `a whole number from ${fewest} to ${most}`;
  throw new InputError([{ pointer: '--candidates', found: JSON.stringify(text), wanted }]);
}

const longestName = 24;

/** Inside the files a candidate is called NAME_1, since a name has no dash; the files are NAME-1 and so on. */
function named(kept: Kept, name: string, number: number): Kept {
  const suffix = `_${number}`;
  const own = name.slice(0, longestName - suffix.length) + suffix;
  return { ...kept, floorplan: { ...kept.floorplan, name: own } };
}

/** The part of a candidate's drawing that its summary needs: the polygons of many candidates would fill the memory. */
type Told = Omit<Drawn, 'polygons'> & {
  readonly drawn: boolean;
  readonly file: string;
  readonly left: readonly string[];
};

/**
 * Draws candidates and writes a whole set of files for each, all of them or none. Candidates of an earlier run that these do not replace go.
 * @param name of the array. @param asked how many were wanted
 * @returns whether the check found anything, or a limit is missed
 */
export async function deliverCandidates(
  io: Io,
  candidates: readonly Kept[],
  draw: (kept: Kept) => Drawn,
  { name, asked, folder = name, json, bare = false }: Delivery & { readonly name: string; readonly asked: number },
): Promise<boolean> {
  const files: OutputFile[] = [];
  const told: Told[] = [];
  for (const [i, kept] of candidates.entries()) {
    await io.breath();
    const { polygons, ...rest } = draw(named(kept, name, i + 1));
    const file = `${name}-${i + 1}`;
    const set = await allFiles({ ...rest, ...(polygons && { polygons }) }, folder, bare ? [] : formats, file);
    files.push(...set.files);
    told.push({ ...rest, drawn: polygons !== undefined, file, left: set.left });
  }
  const metrics = told.map((each) => JSON.parse(formatMetrics(each.metrics)) as Metrics);
  const output = json ? formatJson({ candidates: metrics }) : lines(tableOf(told, files, name, asked, io));
  const numbers = Array.from({ length: most }, (_, i) => i + 1);
  const removed = io.writeFiles(
    files,
    numbers.flatMap((number) => staleBeside(files, `${name}-${number}`, folder)),
  );
  await io.stdout(output);
  const remarks = [
    ...(json ? remarksOn(told) : []),
    ...removed.map((path) => `steelyard: ${path} removed: it belonged to the candidates that were there before`),
  ];
  if (remarks.length > 0) await io.stderr(lines(remarks.map(shown)));
  return told.some(({ findings, missed }) => findings.length + missed.length > 0);
}

/** What is to be said of single candidates. */
const remarksOn = (told: readonly Told[]): readonly string[] =>
  told.flatMap(({ file, warnings, left, missed, findings }) => [
    ...[...warnings, ...left, ...missed].map((text) => `${file}: ${text}`),
    ...findingLines(findings).map((text) => `${file}: ${text}`),
  ]);

/** A candidate a line, the figures that decide as columns; a column whose figures are all alike has no best one. */
function tableOf(
  told: readonly Told[],
  files: readonly OutputFile[],
  name: string,
  asked: number,
  io: Pick<Io, 'columns' | 'colour'>,
): readonly string[] {
  const colours = pc.createColors(io.colour);
  const figures = told.map(({ metrics, file }) => figuresOf(metrics, file));
  const columns: (readonly string[])[] = [
    ['', '', ...told.map(({ file }) => shown(file))],
    ['', 'core', ...figures.map(({ core }) => `${core.rows} x ${core.columns}`)],
  ];
  for (const { decides, label, unit, of } of comparedFigures) {
    const values = figures.map(of);
    if (!decides || values.every((value) => value === undefined || value === 0)) continue;
    const least = Math.min(...values.map((value) => value ?? Infinity));
    const differ = values.some((value) => value !== least);
    const cells = values.map((value) =>
      value === undefined ? '-' : `${compact(value)}${differ && value === least ? ' *' : ''}`,
    );
    columns.push([label.replace('order INL', 'order'), unit, ...cells]);
  }
  columns.push(['', 'emphasis', ...told.map(emphasisOf)]);
  const widths = columns.map((cells) => Math.max(...cells.map(({ length }) => length)));
  const rows = columns[0].map((_, row) =>
    columns
      .map((cells, column) => cells[row].padEnd(widths[column]))
      .join('  ')
      .trimEnd(),
  );
  const { floorplan } = told[0];
  const count = told.length === 1 ? '1 candidate' : `${told.length} candidates, none dominated by another`;
  const head = `${name}, ${arrayInWords(floorplan.capacitors)}, ${floorplan.technology?.name ?? ''}: ${count}`;
  const checked = told.filter(({ drawn }) => drawn).length;
  const found = told.reduce((sum, { findings }) => sum + findings.length, 0);
  const [first = ''] = files.map(({ path }) => path);
  return [
    colours.bold(shown(head)),
    '',
    ...rows,
    '',
    ...(told.length > 1 ? ['* is the best; each on the pitch that it is drawn on'] : []),
    ...(told.length < asked
      ? [`fewer than the ${asked} that were asked for: no others were found that these do not dominate`]
      : []),
    ...(checked > 0 ? [`check: ${found === 0 ? 'no findings' : `${found} findings`}`] : []),
    ...remarksOn(told),
    `files: ${files.length}, from ${first} on`,
  ].map((text, i) => (i === 0 ? text : shown(text)));
}

function emphasisOf({ floorplan: { placement } }: Told): string {
  const between = / of the way to (\w+)$/.exec(placement?.method ?? '')?.[1];
  return `${placement?.emphasis ?? ''}${between === undefined ? '' : ` to ${between}`}, seed ${placement?.seed ?? ''}`;
}
