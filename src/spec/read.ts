import { printParseErrorCode, visit } from 'jsonc-parser';
import type { Result } from '../core/problem.js';
import { deepest, survey } from './json-text.js';
import { Report } from './report.js';
import type { Source } from './report.js';
import { schemaNames } from './schema.js';
import type { SchemaName } from './schema.js';
import { checkShape } from './shape.js';
import { quoted, shown } from './words.js';

/** Something that a later version may accept. The report says no more about what stands at its pointer. */
export interface Refusal {
  readonly pointer: string;
  readonly found: string;
  readonly wanted: string;
  readonly place: 'key' | 'value';
}

export interface Rules {
  readonly refusals: (value: unknown) => readonly Refusal[];
  /** What a schema cannot say; takes a value of any shape. */
  readonly check: (value: unknown, report: Report) => void;
}

const aValue = 'a value: an object, a list, a text in double quotes, a number, true, false or null';
const syntax: Readonly<Record<string, string>> = {
  InvalidSymbol: 'a key or a text in double quotes, a number, true, false or null',
  InvalidNumberFormat: 'a decimal number',
  PropertyNameExpected: 'a key in double quotes, and no comma before a closing brace',
  ValueExpected: `${aValue}, and no comma before a closing bracket`,
  ColonExpected: 'a colon after the key',
  CommaExpected: 'a comma between two entries',
  CloseBraceExpected: 'a closing brace',
  CloseBracketExpected: 'a closing bracket',
  EndOfFileExpected: 'the end of the file after the first value',
  InvalidCommentToken: 'no comment: JSON has none',
  UnexpectedEndOfComment: 'no comment: JSON has none',
  UnexpectedEndOfString: 'a text with its closing quote on the same line',
  UnexpectedEndOfNumber: 'a complete number',
  InvalidUnicode: 'four hexadecimal digits after \\u',
  InvalidEscapeCharacter: 'one of the escapes of JSON: \\" \\\\ \\/ \\b \\f \\n \\r \\t \\u0000',
  InvalidCharacter: 'a text without control characters; they are written \\n, \\t, \\u0000',
};

function addSyntaxErrors(text: string, report: Report): void {
  const before = report.count;
  let last = -1;
  // One slip upsets the parser several times: the first of a line counts.
  const onError = (error: number, offset: number, length: number, line: number): void => {
    if (line === last) return;
    last = line;
    if (!report.open) return report.addUnlisted(1);
    const found =
      offset >= text.length ? 'the end of the file' : quoted(text.slice(offset, offset + Math.max(length, 1)));
    report.add('', found, syntax[printParseErrorCode(error)] ?? 'JSON', offset);
  };
  visit(text, { onError }, { disallowComments: true, allowTrailingComma: false });
  if (report.count === before) report.add('', 'text that is not JSON', 'JSON');
}

/** The text as a value; undefined where it holds none. What is wrong with the text itself goes into the report. */
function parseText(text: string, report: Report): unknown {
  if (!/\S/.test(text)) {
    report.add('', 'an empty file', 'a JSON object');
    return undefined;
  }
  const { tooDeepAt, tooManyParts } = survey(text, (offset, pointer, key) => {
    report.add(pointer, `key ${quoted(key)} once more`, 'each key once in its object', offset);
  });
  if (tooDeepAt !== undefined) {
    report.add('', `more than ${deepest} levels of nesting`, `${deepest} levels at most`, tooDeepAt);
    return undefined;
  }
  if (tooManyParts !== undefined) {
    report.add('', `more than ${tooManyParts} lists, objects and keys`, `${tooManyParts} at most`);
    return undefined;
  }
  try {
    return JSON.parse(text) as unknown;
  } catch {
    addSyntaxErrors(text, report);
    return undefined;
  }
}

/**
 * Reads a file of one format: text, shape, then the rules that a schema cannot say. Lists every problem at once; never throws for any
 * text. A leading byte-order mark is passed over.
 */
export function read<T>(name: SchemaName, source: Source, rules: Rules): Result<T> {
  const text = source.text.startsWith('\ufeff') ? source.text.slice(1) : source.text;
  const report = new Report({ text, file: source.file });
  const value = parseText(text, report);
  if (value !== undefined) checkValue(name, value, report, rules);
  const issues = report.problems();
  return issues.length > 0 ? { ok: false, issues } : { ok: true, value: value as T };
}

function checkValue(name: SchemaName, value: unknown, report: Report, rules: Rules): void {
  if (typeof value !== 'object' || value === null || Array.isArray(value)) {
    report.add('', shown(value), `an object with "format": "steelyard/${name}"`);
    return;
  }
  const { format } = value as { format?: unknown };
  if (schemaNames.some((other) => other !== name && format === `steelyard/${other}`)) {
    // Every key of another format would be unknown here.
    report.add('/format', shown(format), `"steelyard/${name}": this is a file of another kind`);
    return;
  }
  const refusals = rules.refusals(value);
  for (const { pointer, found, wanted, place } of refusals) report.add(pointer, found, wanted, place);
  const settled = refusals.map((r) => r.pointer);
  checkShape(name, value, report, settled);
  rules.check(value, report);
}
