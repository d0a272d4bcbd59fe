import { formatMetrics } from '../index.js';
import type { Drawn } from '../index.js';
import { shown } from './fault.js';
import { allFiles, formats, staleBeside } from './files.js';
import type { Io } from './io.js';
import { findingLines, lines, summaryOf } from './summary.js';

export interface Delivery {
  /** Default: a folder of the array's name. */
  readonly folder?: string;
  /** The metrics alone on standard output, what else there is to say on standard error. */
  readonly json: boolean;
  /** No pictures either. */
  readonly bare?: boolean;
}

/**
 * Writes the set of files of a placed array and tells what it is. What lies there of an earlier set and is not replaced goes, and is
 * named: it would belong to another floorplan.
 */
export async function deliver(io: Io, drawn: Drawn, { folder, json, bare = false }: Delivery): Promise<void> {
  const { name } = drawn.metrics;
  const into = folder ?? name;
  const { files, left } = await allFiles(drawn, into, bare ? [] : formats);
  const warnings = [...drawn.warnings, ...left];
  const paths = files.map(({ path }) => path);
  const output = json ? formatMetrics(drawn.metrics) : lines(summaryOf({ ...drawn, warnings }, paths, io));
  const removed = io.writeFiles(files, staleBeside(files, name, into));
  await io.stdout(output);
  const remarks = [
    ...(json ? [...warnings, ...drawn.missed, ...findingLines(drawn.findings)] : []),
    ...removed.map((path) => `steelyard: ${path} removed: it belonged to the floorplan that was there before`),
  ];
  if (remarks.length > 0) await io.stderr(lines(remarks.map(shown)));
}
