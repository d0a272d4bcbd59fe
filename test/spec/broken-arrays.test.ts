import { describe, expect, it } from 'vitest';
import { parseArray } from '../../src/spec/parse-array.js';
import { kiln4, line, linesOf } from './kiln4.js';

const head = '"format": "steelyard/array", "version": 1';
const ten = `{${head}, "bits": 10}`;
const withKeys = (keys: string): string => `{${head}, ${keys}}`;

/** A broken file and what must be said of it: pointer, found and wanted of every problem, in the order of the file. */
const cases: [name: string, text: string, problems: string[]][] = [
  ['empty', '', [' | an empty file | a JSON object']],
  ['blanks only', ' \n\t\n', [' | an empty file | a JSON object']],
  ['a byte-order mark only', '\ufeff', [' | an empty file | a JSON object']],
  ['a list', '[]', [' | an empty list | an object with "format": "steelyard/array"']],
  ['null', 'null', [' | null | an object with "format": "steelyard/array"']],
  ['a text', '"bits"', [' | "bits" | an object with "format": "steelyard/array"']],
  [
    'no keys',
    '{}',
    [
      ' | no key "format" | "format": "steelyard/array"',
      ' | no key "version" | "version": 1',
      ' | neither "bits" nor "weights" | one of the two',
    ],
  ],
  [
    'another format',
    kiln4('kiln4.floorplan.json'),
    ['/format | "steelyard/floorplan" | "steelyard/array": this is a file of another kind'],
  ],
  [
    'a misspelt format and a later version',
    '{"format": "steelyard/aray", "version": 2, "bits": 10}',
    ['/format | "steelyard/aray" | "steelyard/array"', '/version | 2 | 1'],
  ],
  ['version as a text', '{"format": "steelyard/array", "version": "1", "bits": 10}', ['/version | "1" | 1']],
  ['bits as a text', withKeys('"bits": "10"'), ['/bits | "10" | a whole number from 2 to 14']],
  ['bits too many', withKeys('"bits": 15'), ['/bits | 15 | a whole number from 2 to 14']],
  [
    'a pitch off every grid',
    withKeys('"bits": 4, "core": {"rows": 5, "columns": 3, "pitch_um": [1.00005, 2]}'),
    ['/core/pitch_um/0 | 1.00005 um | a whole number of nanometres: three decimals at most'],
  ],
  ['bits too few', withKeys('"bits": 1'), ['/bits | 1 | a whole number from 2 to 14']],
  ['half a bit', withKeys('"bits": 2.5'), ['/bits | 2.5 | a whole number from 2 to 14']],
  ['bits null', withKeys('"bits": null'), ['/bits | null | a whole number from 2 to 14']],
  [
    'bits and weights',
    withKeys('"bits": 4, "weights": [1, 2]'),
    ['/weights | "weights" beside "bits" | one of the two'],
  ],
  ['no weight', withKeys('"weights": []'), ['/weights | an empty list | a list of 2 to 20 whole numbers']],
  [
    'weights of wrong kinds',
    withKeys('"weights": [1, 0, -2, "4", 1.5, null]'),
    [0, -2, '"4"', 1.5, 'null'].map((w, i) => `/weights/${i + 1} | ${w} | a whole number from 1 to 16383`),
  ],
  [
    'weights too heavy in all',
    withKeys('"weights": [8192, 8192]'),
    ['/weights | weights of 16384 in all | 16383 in all at most'],
  ],
  [
    'too many weights',
    withKeys(`"weights": [${'1,'.repeat(20)}1]`),
    ['/weights | a list of 21 | a list of 2 to 20 whole numbers'],
  ],
  [
    'bad names',
    withKeys('"bits": 4, "name": "4bits"'),
    ['/name | "4bits" | a letter, then letters, digits or _, 24 characters at most'],
  ],
  [
    'a name with blanks',
    withKeys('"bits": 4, "name": "my array"'),
    ['/name | "my array" | a letter, then letters, digits or _, 24 characters at most'],
  ],
  [
    'a name with a line break at its end',
    withKeys('"bits": 4, "name": "a\\n"'),
    ['/name | "a\\n" | a letter, then letters, digits or _, 24 characters at most'],
  ],
  [
    'a name of 10,000 letters',
    withKeys(`"bits": 4, "name": "${'n'.repeat(10000)}"`),
    [`/name | "${'n'.repeat(57)}..." | a letter, then letters, digits or _, 24 characters at most`],
  ],
  [
    'a name that would drive a terminal',
    withKeys('"bits": 4, "name": "\\u001b[31m\\u009b\\u202e"'),
    ['/name | "\\u001b[31m\\u009b\\u202e" | a letter, then letters, digits or _, 24 characters at most'],
  ],
  ['an unknown key', withKeys('"bitz": 4, "bits": 4'), ['/bitz | unknown key "bitz" | "bits", the nearest known key']],
  [
    'unknown keys near and deep',
    withKeys('"bits": 4, "Seed": 3, "core": {"rows": 3, "colums": 5}'),
    [
      '/Seed | unknown key "Seed" | "seed", the nearest known key',
      '/core | no key "columns" | "columns": a whole number from 1 to 40000',
      '/core/colums | unknown key "colums" | "columns", the nearest known key',
    ],
  ],
  [
    'keys that objects have by nature',
    withKeys('"bits": 4, "fillTop": "TOP", "core": {"rows": 3, "columns": 5, "__proto__": {"rows": 1}}'),
    ['/core/__proto__ | unknown key "__proto__" | a known key: "rows", "columns", "pitch_um"'],
  ],
  [
    'a core of nothing',
    withKeys('"bits": 4, "core": {"rows": 0, "columns": 5}'),
    ['/core/rows | 0 | a whole number from 1 to 40000'],
  ],
  [
    'a core of halves',
    withKeys('"bits": 4, "core": {"rows": 3.5, "columns": 5}'),
    ['/core/rows | 3.5 | a whole number from 1 to 40000'],
  ],
  [
    'a core too large',
    withKeys('"bits": 4, "core": {"rows": 300, "columns": 300}'),
    ['/core | a core of 90000 cells | 40000 cells at most'],
  ],
  ['a core as a text', withKeys('"bits": 4, "core": "5x3"'), ['/core | "5x3" | an object with "rows", "columns"']],
  [
    'a pitch of one number and none',
    withKeys('"bits": 4, "core": {"rows": 3, "columns": 5, "pitch_um": [0]}'),
    ['/core/pitch_um | a list of 1 | a list of 2 numbers', '/core/pitch_um/0 | 0 | a number above 0, 33554 at most'],
  ],
  ['too many rings', withKeys('"bits": 4, "rings": 4'), ['/rings | 4 | a whole number from 0 to 3']],
  ['no track', withKeys('"bits": 4, "tracksPerChannel": 0'), ['/tracksPerChannel | 0 | a whole number from 1 to 64']],
  [
    'words that mean nothing',
    withKeys('"bits": 4, "termination": "rings", "fillTop": "GND", "effort": "max", "emphasis": "INL"'),
    [
      '/termination | "rings" | "ring", "core" or "none"',
      '/fillTop | "GND" | "TOP" or "VSS"',
      '/effort | "max" | "quick", "normal" or "thorough"',
      '/emphasis | "INL" | "balanced", "gradient", "dispersed" or "wiring"',
    ],
  ],
  [
    'values of later versions',
    withKeys('"bits": 4, "balance": "on", "pair": "mirrored"'),
    [
      '/balance | "on" | "off" ("on" is not available yet)',
      '/pair | "mirrored" | "none" ("mirrored" is not available yet)',
    ],
  ],
  [
    'keys of later versions',
    withKeys('"bits": 4, "block": {"maxWidth_um": 90}'),
    ['/block | key "block" | it left out: "block" is not available yet'],
  ],
  [
    'a drive that is none',
    withKeys('"bits": 4, "drive": {"reference_ohm": -1, "switch_ohms": 5}'),
    [
      '/drive | no key "switch_ohm" | "switch_ohm": a number of 0 or more or a list of 0 to 20 numbers',
      '/drive/reference_ohm | -1 | a number of 0 or more',
      '/drive/switch_ohms | unknown key "switch_ohms" | "switch_ohm", the nearest known key',
    ],
  ],
  [
    'mismatch in part',
    withKeys('"bits": 4, "mismatch": {"localSigma_percent": -1, "correlatedSigma_percent": 0.1}'),
    [
      '/mismatch | no key "correlationLength_um" | "correlationLength_um": a number from 0 to 33554',
      '/mismatch/localSigma_percent | -1 | a number of 0 or more',
    ],
  ],
  [
    'pins at a side that is none',
    withKeys('"bits": 4, "pins": {"bits": {"side": "left"}}'),
    ['/pins/bits/side | "left" | "bottom" or "top"'],
  ],
  ['pins null', withKeys('"bits": 4, "pins": null'), ['/pins | null | an object']],
  [
    'a gradient of texts',
    withKeys('"bits": 4, "gradient": {"linear_ppm_per_um": "10", "quadratic_ppm_per_um2": {"xx": 1}, "angle": 3}'),
    [
      '/gradient/linear_ppm_per_um | "10" | a number',
      '/gradient/quadratic_ppm_per_um2 | no key "xy" | "xy": a number',
      '/gradient/quadratic_ppm_per_um2 | no key "yy" | "yy": a number',
      '/gradient/angle | unknown key "angle" | a known key: "linear_ppm_per_um", "quadratic_ppm_per_um2", "direction_deg"',
    ],
  ],
  [
    'a seed beyond exact numbers',
    withKeys('"bits": 4, "seed": 1e300'),
    ['/seed | 1e+300 | a whole number from 0 to 9007199254740991'],
  ],
  [
    'a number too large for a double',
    withKeys('"bits": 1e999'),
    ['/bits | a number too large for a double | a whole number from 2 to 14'],
  ],
  [
    'a key twice',
    withKeys('"bits": 4, "seed": 1, "bits": 99'),
    ['/bits | key "bits" once more | each key once in its object', '/bits | 99 | a whole number from 2 to 14'],
  ],
  [
    'a comment and a trailing comma',
    `{${head}, // ten bits\n"bits": 10,}`,
    [
      ' | "// ten bits" | no comment: JSON has none',
      ' | "}" | a key in double quotes, and no comma before a closing brace',
    ],
  ],
  ['two values', `${ten} ${ten}`, [' | "{" | the end of the file after the first value']],
  ['not closed', `{${head}, "bits": 10`, [' | the end of the file | a closing brace']],
  ['no commas', `{${head} "bits": 10}`, [' | "\\"bits\\"" | a comma between two entries']],
  [
    'a bare key',
    `{${head}, bits: 10}`,
    [' | "bits" | a key or a text in double quotes, a number, true, false or null'],
  ],
  ['not JSON at all', 'bits = 10', [' | "bits" | a key or a text in double quotes, a number, true, false or null']],
  [
    'slips on several lines',
    `{${head},\n"bits" 10,\n"seed": TRUE}`,
    [' | "10" | a colon after the key', ' | "TRUE" | a key or a text in double quotes, a number, true, false or null'],
  ],
  [
    'a picture',
    '\u0089PNG\r\n\u001a\n\u0000\u0000',
    [
      ' | "\\u0089PNG" | a key or a text in double quotes, a number, true, false or null',
      ' | "\\u001a" | a key or a text in double quotes, a number, true, false or null',
      ' | "\\u0000\\u0000" | a key or a text in double quotes, a number, true, false or null',
    ],
  ],
  ['deep nesting', '['.repeat(100), [' | more than 64 levels of nesting | 64 levels at most']],
];

describe('broken array files', () => {
  it('are at least forty', () => {
    expect(cases.length).toBeGreaterThanOrEqual(40);
  });

  it.each(cases)('%s: every problem is named', (_, text, problems) => {
    const result = parseArray(text, 'broken.array.json');
    const lines = linesOf(result);
    expect(result.ok).toBe(false);
    expect(lines).toEqual(problems);
    for (const { file, line: row, column } of result.ok ? [] : result.issues) {
      expect(file).toBe('broken.array.json');
      expect(row).toBeGreaterThanOrEqual(1);
      expect(column).toBeGreaterThanOrEqual(1);
    }
  });

  it('have their problems at a line and a column', () => {
    const text = `{\r\n  ${head},\n\n  "bits": 99,\r  "bitz": 3,\n  "core": {"rows": 1}, "seed": 1.5\n}`;
    const result = parseArray(text, 'a');
    expect(result.ok ? [] : result.issues.map((p) => [p.line, p.column, p.pointer])).toEqual([
      [4, 11, '/bits'],
      [5, 3, '/bitz'],
      [6, 11, '/core'],
      [6, 32, '/seed'],
    ]);
  });
});

describe('hostile array files', () => {
  it('of 50 MB of brackets are one problem', () => {
    const brackets = '['.repeat(50_000_000);
    for (const text of [brackets, '{"a":'.repeat(10_000_000), ten.replace('10', brackets)]) {
      expect(linesOf(parseArray(text, 'a'))).toEqual([' | more than 64 levels of nesting | 64 levels at most']);
    }
  });

  it.each([
    ['wrong values', withKeys(`"weights": [${'"a",'.repeat(200_000)}1]`), 200_001],
    ['unknown keys', withKeys(`"bits": 4, ${Array.from({ length: 200_000 }, (_, i) => `"k${i}": 1`).join()}`), 200_000],
    ['repeated keys', withKeys(`"bits": 4, ${'"seed": 1, '.repeat(200_000)}"seed": 1`), 200_000],
    ['syntax errors', '[' + '1\n'.repeat(200_001) + ']', 200_000],
  ])('with 200,000 %s list a hundred and count the rest', (_, text, count) => {
    const result = parseArray(text, 'a');
    if (result.ok) return expect.unreachable();
    expect(result.issues).toHaveLength(101);
    expect(line(result.issues[100])).toBe(` | ${count - 100} more problems | those above put right first`);
  });
});
