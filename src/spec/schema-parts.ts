/** The part of JSON Schema (draft 2020-12) that the file formats are written in, and the small pieces that they share. */
export interface Schema {
  readonly $schema?: string;
  readonly $id?: string;
  /** Of a text with a pattern: the pattern in words; messages quote it. */
  readonly title?: string;
  /** What a key is; the documentation quotes it. */
  readonly description?: string;
  readonly type?: string | readonly string[];
  readonly const?: unknown;
  readonly enum?: readonly unknown[];
  readonly properties?: Readonly<Record<string, Schema>>;
  readonly required?: readonly string[];
  readonly additionalProperties?: false | Schema;
  readonly items?: Schema;
  readonly minItems?: number;
  readonly maxItems?: number;
  readonly minimum?: number;
  readonly maximum?: number;
  readonly exclusiveMinimum?: number;
  readonly multipleOf?: number;
  readonly pattern?: string;
  readonly minLength?: number;
  readonly maxLength?: number;
  readonly oneOf?: readonly Schema[];
  readonly allOf?: readonly { readonly if: Schema; readonly then: Schema }[];
}

type Properties = Readonly<Record<string, Schema>>;

/** Coordinates and lengths end at 2^25 nm, so that products of two stay exact. */
const reach_um = 33554;
const nameWords = 'a letter, then letters, digits or _, 24 characters at most';

export const whole = (minimum: number, maximum: number): Schema => ({ type: 'integer', minimum, maximum });
export const seed = whole(0, Number.MAX_SAFE_INTEGER);
export const number: Schema = { type: 'number', minimum: -1e12, maximum: 1e12 };
export const atLeastZero: Schema = { type: 'number', minimum: 0, maximum: 1e12 };
export const positive: Schema = { type: 'number', exclusiveMinimum: 0, maximum: 1e12 };
export const length: Schema = { type: 'number', exclusiveMinimum: 0, maximum: reach_um };
export const lengthOrZero: Schema = { type: 'number', minimum: 0, maximum: reach_um };
export const position: Schema = { type: 'number', minimum: -reach_um, maximum: reach_um };
export const share: Schema = { type: 'number', minimum: 0, maximum: 1 };
export const truth: Schema = { type: 'boolean' };
export const choice = (...values: string[]): Schema => ({ type: 'string', enum: values });
export const constant = (value: string | number): Schema => ({ type: typeof value, const: value });
export const text = (maxLength: number): Schema => ({ type: 'string', minLength: 1, maxLength });
export const worded = (pattern: string, title: string): Schema => ({ type: 'string', pattern, title });
/** Names of arrays, capacitors and nets. */
export const name = worded('^[A-Za-z][A-Za-z0-9_]{0,23}$', nameWords);
/** A cell: a capacitor's name or a dummy. */
export const cell = worded('^([A-Za-z][A-Za-z0-9_]{0,23}|[-=])$', `a capacitor's name (${nameWords}) or "-"`);
/** Names of structures in stream files. */
export const structureName = worded('^[A-Za-z0-9_?$]{1,127}$', 'letters, digits, _, ? or $, 127 at most');
/** Names that go into other programs' files. */
export const harmless = worded('^[A-Za-z][A-Za-z0-9_-]{0,39}$', 'a letter, then letters, digits, - or _, 40 at most');
export const list = (items: Schema, minItems = 0, maxItems?: number): Schema => ({
  type: 'array',
  items,
  minItems,
  ...(maxItems === undefined ? {} : { maxItems }),
});
export const pair = (items: Schema): Schema => list(items, 2, 2);
/** An object without other keys, in the order in which they are written. A key with a question mark may be absent. */
export const object = (keys: Properties): Schema => {
  const bare = (key: string): string => key.replace('?', '');
  return {
    type: 'object',
    properties: Object.fromEntries(Object.entries(keys).map(([key, schema]) => [bare(key), schema])),
    required: Object.keys(keys).filter((key) => bare(key) === key),
    additionalProperties: false,
  };
};

/** The same with a line of documentation. */
export const described = (schema: Schema, description: string): Schema => ({ ...schema, description });
/** An object whose key `kind` says what other keys it has. */
export const byKind = (kinds: Properties): Schema => {
  const kind: Schema = { ...choice(...Object.keys(kinds)), description: 'what kind it is' };
  const is = (value: string): Schema => ({
    type: 'object',
    properties: { kind: constant(value) },
    required: ['kind'],
  });
  return {
    type: 'object',
    properties: { kind },
    required: ['kind'],
    allOf: Object.entries(kinds).map(([value, then]) => ({ if: is(value), then })),
  };
};
/** What holds for an object of this kind, where its schema is one of several by kind. */
export const ofItsKind = (schema: Schema, kind: unknown): Schema =>
  schema.allOf?.find(({ if: when }) => when.properties?.kind.const === kind)?.then ?? schema;

/** A number for all directions alike, or the three entries of a symmetric form. */
const quadratic: Schema = { ...object({ xx: number, xy: number, yy: number }), type: ['number', 'object'] };
export const gradient = object({
  'linear_ppm_per_um?': number,
  'quadratic_ppm_per_um2?': quadratic,
  'direction_deg?': { type: 'number', minimum: -360, maximum: 360 },
});
export const stream = object({ layer: whole(0, 32767), datatype: whole(0, 32767) });
export const status = choice('proved', 'effort-spent', 'interrupted');

/** A whole file: `format` and `version` first, `$schema` allowed. */
export const file = (format: string, title: string, keys: Properties): Schema => ({
  $schema: 'https://json-schema.org/draft/2020-12/schema',
  $id: `urn:steelyard:${format}:1`,
  title,
  ...object({ '$schema?': text(1000), format: constant(`steelyard/${format}`), version: constant(1), ...keys }),
});

/** A file's schema as a part of another file. */
export const embedded = (schema: Schema): Schema => {
  const { $schema: _draft, $id: _id, title: _title, ...rest } = schema;
  return rest;
};
