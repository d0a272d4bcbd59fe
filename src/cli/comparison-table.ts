import pc from 'picocolors';
import { brief, compact, comparedFigures, saddleDirection } from '../index.js';
import type { ComparedFigures, Comparison } from '../index.js';
import { shown } from './fault.js';
import type { Io } from './io.js';

interface Row {
  readonly label: string;
  readonly unit: string;
  readonly cells: readonly string[];
}

const NOTHING = '-';

/** The bits that are on. */
const codeOf = (bits: readonly string[] | undefined): string => (bits === undefined ? NOTHING : bits.join('+'));

function directionOf({ gradient }: ComparedFigures): string {
  const direction = gradient.first.worstDirection_deg;
  return direction === undefined ? NOTHING : brief(direction);
}

function shapeOf({ gradient }: ComparedFigures): string {
  const shape = gradient.second.worstShape;
  if (shape === undefined) return NOTHING;
  const direction = saddleDirection(shape);
  return direction === undefined ? 'bowl' : `saddle ${brief(direction)}`;
}

/** Rows that tell where a figure comes from, after the last figure whose key begins with `after`. */
const causes: readonly { after: string; label: string; unit: string; of: (figures: ComparedFigures) => string }[] = [
  { after: 'gradient.first.', label: '  worst direction', unit: 'degrees', of: directionOf },
  { after: 'gradient.first.', label: '  worst code', unit: '', of: ({ gradient }) => codeOf(gradient.first.worstCode) },
  { after: 'gradient.second.', label: '  worst shape', unit: 'degrees', of: shapeOf },
  {
    after: 'gradient.second.',
    label: '  worst code',
    unit: '',
    of: ({ gradient }) => codeOf(gradient.second.worstCode),
  },
  { after: 'gradient.map.', label: '  worst code', unit: '', of: ({ gradient }) => codeOf(gradient.map?.worstCode) },
];

function rowsOf({ floorplans, pitch_um }: Comparison): readonly Row[] {
  const rows: Row[] = [
    { label: 'core', unit: 'rows x columns', cells: floorplans.map(({ core }) => `${core.rows} x ${core.columns}`) },
  ];
  if (pitch_um === undefined)
    rows.push({ label: 'pitch', unit: 'um', cells: floorplans.map(({ core }) => core.pitch_um.join(' x ')) });
  const known = comparedFigures.filter(({ of }) => floorplans.some((each) => of(each) !== undefined));
  known.forEach(({ key, label, unit, of }, i) => {
    const values = floorplans.map(of);
    const least = Math.min(...values.map((value) => value ?? Infinity));
    // Where all are equal there is no best one.
    const differ = values.some((value) => value !== undefined && value !== least);
    const mark = (value: number): string => (differ && value === least ? `${compact(value)} *` : compact(value));
    rows.push({ label, unit, cells: values.map((value) => (value === undefined ? NOTHING : mark(value))) });
    for (const cause of causes)
      if (key.startsWith(cause.after) && known[i + 1]?.key.startsWith(cause.after) !== true)
        rows.push({ label: cause.label, unit: cause.unit, cells: floorplans.map(cause.of) });
  });
  return rows;
}

/** A comparison as lines of text: figures as rows, floorplans as columns, as many side by side as the width has room for. */
export function tableOf(comparison: Comparison, io: Pick<Io, 'columns' | 'colour'>): readonly string[] {
  const colours = pc.createColors(io.colour);
  const { floorplans, pitch_um, correlationLength_um, sentences } = comparison;
  const rows = rowsOf(comparison);
  const widthOf = (texts: readonly string[]): number => Math.max(...texts.map(({ length }) => length));
  const label = widthOf(rows.map((row) => row.label));
  const unit = widthOf(rows.map((row) => row.unit));
  const widths = floorplans.map(({ name }, i) => widthOf([shown(name), ...rows.map((row) => row.cells[i] ?? '')]));
  const where = pitch_um === undefined ? 'Each on its own pitch' : `All on a pitch of ${pitch_um.join(' x ')} um`;
  const marked = floorplans.length > 1 ? '; * is the best' : '';
  const head = `${where}, mismatch correlated over ${brief(correlationLength_um)} um${marked}.`;
  const text = [...wrapped(head, io.columns), ''];
  for (let from = 0, to: number; from < floorplans.length; from = to) {
    let room = io.columns - label - unit - 2;
    for (to = from; to < floorplans.length && (to === from || room >= (widths[to] ?? 0) + 2); to++)
      room -= (widths[to] ?? 0) + 2;
    const line = (row: Row): string =>
      [
        row.label.padEnd(label),
        row.unit.padEnd(unit),
        ...row.cells.slice(from, to).map((cell, i) => cell.padEnd(widths[from + i] ?? 0)),
      ]
        .join('  ')
        .trimEnd();
    text.push(colours.bold(line({ label: '', unit: '', cells: floorplans.map(({ name }) => shown(name)) })));
    for (const row of rows) text.push(line(row));
    text.push('');
  }
  return [...text, ...sentences.flatMap((sentence) => wrapped(shown(sentence), io.columns))];
}

/** A sentence as lines of at most `columns` characters, all but the first indented; a word that is longer has a line to itself. */
function wrapped(sentence: string, columns: number): string[] {
  const text: string[] = [];
  for (const word of sentence.split(' ')) {
    const last = text[text.length - 1];
    if (last !== undefined && last.length + 1 + word.length <= columns) text[text.length - 1] = `${last} ${word}`;
    else text.push(text.length === 0 ? word : `  ${word}`);
  }
  return text;
}

const quoted = (text: string): string => (/[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text);

/** A comparison as CSV: a floorplan a line, the figures under the keys of a metrics file; what one has not is empty. */
export function csvOf({ floorplans }: Comparison): string {
  const known = comparedFigures.filter(({ of }) => floorplans.some((each) => of(each) !== undefined));
  const head = [
    'name',
    'core.rows',
    'core.columns',
    'core.pitch_um.x',
    'core.pitch_um.y',
    ...known.map(({ key }) => key),
  ];
  const body = floorplans.map((each) => {
    const { rows, columns, pitch_um } = each.core;
    const values = [rows, columns, ...pitch_um, ...known.map(({ of }) => of(each))];
    return [quoted(each.name), ...values.map((value) => (value === undefined ? '' : String(value)))];
  });
  return [head, ...body].map((line) => `${line.join(',')}\n`).join('');
}
