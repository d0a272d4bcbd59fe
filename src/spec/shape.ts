import { Ajv2020 } from 'ajv/dist/2020.js';
import type { ErrorObject, ValidateFunction } from 'ajv/dist/2020.js';
import { step } from './json-text.js';
import type { Report } from './report.js';
import type { Schema } from './schema-parts.js';
import { schema } from './schema.js';
import type { SchemaName } from './schema.js';
import { counted, either, meant, quoted, shown } from './words.js';

/** Longer texts have their first departure named alone: a list of millions of them would fill the memory. */
const longest = 8_000_000;

const compiled = new Map<string, ValidateFunction>();

// Compiling takes some tens of milliseconds: only what is used, once.
function validator(name: SchemaName, allErrors: boolean): ValidateFunction {
  const key = `${name} ${allErrors}`;
  let validate = compiled.get(key);
  if (validate === undefined) {
    const ajv = new Ajv2020({ allErrors, verbose: true, strict: true, allowUnionTypes: true });
    compiled.set(key, (validate = ajv.compile(schema(name))));
  }
  return validate;
}

/** The limits of a number; those that only keep arithmetic exact are named where the value is beyond them. */
function range({ minimum, maximum, exclusiveMinimum }: Schema, value: unknown): string {
  const beyond = typeof value === 'number' ? value : 0;
  const most = maximum !== undefined && (maximum < 1e12 || beyond > maximum) ? maximum : undefined;
  const least = minimum !== undefined && (minimum > -1e12 || beyond < minimum) ? minimum : undefined;
  if (exclusiveMinimum !== undefined) {
    return ` above ${exclusiveMinimum}${most === undefined ? '' : `, ${most} at most`}`;
  }
  if (least === undefined) return most === undefined ? '' : ` of ${most} at most`;
  return most === undefined ? ` of ${least} or more` : ` from ${least} to ${most}`;
}

function size({ items, minItems = 0, maxItems }: Schema): string {
  const noun = items?.type === 'integer' ? 'whole number' : items?.type === 'number' ? 'number' : '';
  const many = (count: number): string => (noun === '' ? String(count) : counted(count, noun));
  if (minItems === maxItems) return ` of ${many(minItems)}`;
  if (maxItems !== undefined) return ` of ${minItems} to ${many(maxItems)}`;
  if (minItems > 0) return ` of ${many(minItems)} or more`;
  return noun === '' ? '' : ` of ${noun}s`;
}

/** What a schema wants, in words. */
function wants(part: Schema, value?: unknown): string {
  if (part.const !== undefined) return JSON.stringify(part.const);
  if (part.enum !== undefined) return either(part.enum);
  if (part.pattern !== undefined && part.title !== undefined) return part.title;
  const one = (type: string): string => {
    switch (type) {
      case 'integer':
        return part.multipleOf === undefined
          ? `a whole number${range(part, value)}`
          : `a multiple of ${part.multipleOf}${range(part, value)}`;
      case 'number':
        return `a number${range(part, value)}`;
      case 'string':
        return `a text of ${part.minLength ?? 0} to ${part.maxLength ?? 'any number of'} characters`;
      case 'array':
        return `a list${size(part)}`;
      case 'object': {
        const required = part.required ?? [];
        return required.length === 0 || required.length > 6
          ? 'an object'
          : `an object with ${required.map(quoted).join(', ')}`;
      }
      default:
        return 'true or false';
    }
  };
  return [part.type ?? 'object'].flat().map(one).join(' or ');
}

function addError(report: Report, error: ErrorObject): void {
  const at = error.instancePath;
  const part = error.parentSchema as Schema;
  if (error.keyword === 'additionalProperties') {
    const { additionalProperty: key } = error.params as { additionalProperty: string };
    report.add(
      at + step(key),
      `unknown key ${quoted(key)}`,
      () => meant(key, Object.keys(part.properties ?? {}), 'key'),
      'key',
    );
  } else if (error.keyword === 'required') {
    const { missingProperty: key } = error.params as { missingProperty: string };
    report.add(at, `no key ${quoted(key)}`, `${quoted(key)}: ${wants(part.properties?.[key] ?? {})}`);
  } else {
    report.add(at, shown(error.data), wants(part, error.data));
  }
}

/**
 * Adds every departure of a value from a format's schema.
 * @param settled pointers whose problem is in the report already: nothing more is said about what they hold
 */
export function checkShape(name: SchemaName, value: unknown, report: Report, settled: readonly string[]): void {
  const validate = validator(name, report.source.text.length <= longest);
  if (validate(value)) return;
  for (const error of validate.errors ?? []) {
    // The only alternatives that no key decides, bits or weights, have their own rule.
    if (error.keyword === 'oneOf' || error.schemaPath.includes('/oneOf/')) continue;
    // That the keys of a kind do not fit says each of them itself.
    if (error.keyword === 'if') continue;
    if (settled.some((p) => error.instancePath === p || error.instancePath.startsWith(`${p}/`))) continue;
    if (error.keyword === 'additionalProperties') {
      const { additionalProperty } = error.params as { additionalProperty: string };
      if (settled.includes(error.instancePath + step(additionalProperty))) continue;
    }
    if (report.open) addError(report, error);
    else report.addUnlisted(1);
  }
  validate.errors = null;
}
