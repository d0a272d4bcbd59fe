import type { Label, Point, Polygon, Reference, Structure } from '../core/layout.js';
import { InputError } from '../core/problem.js';
import type { Polygons } from '../spec/polygons.js';
import { flatStructures, libraryCellOf } from './library-cell.js';
import { isStreamName, latticeEnds, libraryNameWanted, streamProblems } from './stream-limits.js';
import * as record from './stream-records.js';

export interface StreamOptions {
  /** YYYY-MM-DD, written as the date of the library and of each structure. */
  readonly date?: string;
  readonly libraryName?: string;
  /** Everything in the top structure, without references. */
  readonly flat?: boolean;
  /** Where units are a named cell: with a placeholder for it, so that the file can be read alone. */
  readonly stubCell?: boolean;
}

const VERSION = 600;
// The same drawing gives the same bytes on any day, so a file carries a date only where it was asked for one.
const NO_DATE = '2000-01-01';

/**
 * The drawing as a GDSII stream file: the same structures, one reference record per reference (an array record where it repeats); or,
 * flat, one structure. A named cell of the user's own library is referenced and not defined.
 *
 * @param p whole database units; polygons not closed, the writer closes them.
 * @param options the library is named after the top structure unless told otherwise.
 * @returns the bytes of the file: same input, same bytes.
 * @throws InputError with every name, number, outline or text that the format cannot hold.
 */
export function writeStream(p: Polygons, options: StreamOptions = {}): Uint8Array {
  const problems = streamProblems(p);
  const library = options.libraryName ?? p.topStructure;
  if (options.libraryName !== undefined && !isStreamName(library))
    problems.push({ pointer: '', found: `library name ${JSON.stringify(library)}`, wanted: libraryNameWanted });
  if (!p.structures.some((s) => s.name === p.topStructure))
    problems.push({
      pointer: '/topStructure',
      found: JSON.stringify(p.topStructure),
      wanted: 'the name of a structure of this list',
    });
  const date = dateParts(options.date ?? NO_DATE);
  if (date === undefined)
    problems.push({ pointer: '', found: `date ${JSON.stringify(options.date)}`, wanted: 'a day as YYYY-MM-DD' });
  let { structures } = p;
  if (options.flat === true && problems.length === 0) {
    structures = flatStructures(p);
    problems.push(...streamProblems({ ...p, structures }));
  }
  if (problems.length > 0 || date === undefined) throw new InputError(problems);

  const cell = options.stubCell === true ? undefined : libraryCellOf(p);
  if (cell !== undefined) structures = structures.filter((s) => s.name !== cell);

  const out = new record.StreamRecords();
  out.begin(record.HEADER).int16(VERSION).end();
  dated(out, record.BGNLIB, date);
  out.begin(record.LIBNAME).text(library).end();
  out
    .begin(record.UNITS)
    .real(p.databaseUnit_m / p.userUnit_m)
    .real(p.databaseUnit_m)
    .end();
  for (const s of structures) writeStructure(out, s, date);
  out.bare(record.ENDLIB);
  return out.bytes();
}

type DateParts = readonly [year: number, month: number, day: number];

function dateParts(text: string): DateParts | undefined {
  const match = /^(\d{4})-(\d{2})-(\d{2})$/.exec(text);
  if (!match) return undefined;
  const [year, month, day] = match.slice(1).map(Number) as [number, number, number];
  const leap = (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0;
  const days = [31, leap ? 29 : 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31][month - 1] ?? 0;
  return year >= 1 && day >= 1 && day <= days ? [year, month, day] : undefined;
}

/** Last change and last access, each as year, month, day, hour, minute, second. */
function dated(out: record.StreamRecords, type: number, date: DateParts): void {
  out.begin(type);
  for (let twice = 0; twice < 2; twice++) for (const part of [...date, 0, 0, 0]) out.int16(part);
  out.end();
}

function writeStructure(out: record.StreamRecords, s: Structure, date: DateParts): void {
  dated(out, record.BGNSTR, date);
  out.begin(record.STRNAME).text(s.name).end();
  for (const q of s.polygons) writeBoundary(out, q);
  for (const r of s.references) writeReference(out, r);
  for (const l of s.labels) writeLabel(out, l);
  out.bare(record.ENDSTR);
}

const point = (out: record.StreamRecords, [x, y]: Point) => out.int32(x).int32(y);

function writeBoundary(out: record.StreamRecords, { layer, datatype, xy }: Polygon): void {
  out.bare(record.BOUNDARY);
  out.begin(record.LAYER).int16(layer).end();
  out.begin(record.DATATYPE).int16(datatype).end();
  out.begin(record.XY);
  for (const corner of xy) point(out, corner);
  point(out, xy[0]);
  out.end().bare(record.ENDEL);
}

const MIRRORED = 0x8000;

function writeReference(out: record.StreamRecords, r: Reference): void {
  const single = r.columns === 1 && r.rows === 1;
  out.bare(single ? record.SREF : record.AREF);
  out.begin(record.SNAME).text(r.structure).end();
  if (r.mirrored || r.angle_deg !== 0)
    out
      .begin(record.STRANS)
      .flags(r.mirrored ? MIRRORED : 0)
      .end();
  if (r.angle_deg !== 0) out.begin(record.ANGLE).real(r.angle_deg).end();
  if (!single) out.begin(record.COLROW).int16(r.columns).int16(r.rows).end();
  out.begin(record.XY);
  point(out, r.origin);
  if (!single) for (const end of latticeEnds(r)) point(out, end);
  out.end().bare(record.ENDEL);
}

function writeLabel(out: record.StreamRecords, { layer, texttype, xy, text }: Label): void {
  out.bare(record.TEXT);
  out.begin(record.LAYER).int16(layer).end();
  out.begin(record.TEXTTYPE).int16(texttype).end();
  out.begin(record.XY);
  point(out, xy);
  out.end();
  out.begin(record.STRING).text(text).end().bare(record.ENDEL);
}
