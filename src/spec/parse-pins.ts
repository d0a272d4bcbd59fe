import type { Result } from '../core/problem.js';
import { items, record, word } from './loose.js';
import { foldCase, isNodeZero } from './pin-map.js';
import type { PinMap } from './pin-map.js';
import { read } from './read.js';
import type { Report } from './report.js';
import { meant, quoted } from './words.js';

function check(value: unknown, report: Report, known: readonly string[] | undefined): void {
  const entries = items(record(value).pins).map(record);
  const pins = new Set<string>();
  const holder = new Map<string, string>();
  let bracket: { readonly sign: string; readonly name: string } | undefined;
  entries.forEach((entry, i) => {
    const pin = word(entry.pin);
    if (pin === undefined) return;
    if (pins.has(pin)) report.add(`/pins/${i}/pin`, `${quoted(pin)} once more`, 'each pin once');
    else if (known !== undefined && !known.includes(pin))
      report.add(`/pins/${i}/pin`, quoted(pin), () => meant(pin, known, 'pin of this array'));
    pins.add(pin);
  });
  // A pin that is not listed keeps its name, which is then taken.
  for (const pin of known ?? []) if (!pins.has(pin)) holder.set(foldCase(pin), pin);
  entries.forEach((entry, i) => {
    const name = word(entry.name);
    if (name === undefined || name === '') return;
    const at = `/pins/${i}/name`;
    const other = holder.get(foldCase(name));
    if (other !== undefined)
      report.add(
        at,
        `${quoted(name)}, which pin ${quoted(other)} bears`,
        'a name of its own for each pin, capitals and small letters taken as one',
      );
    holder.set(foldCase(name), word(entry.pin) ?? name);
    if (isNodeZero(name)) report.add(at, quoted(name), 'a name that circuit simulators do not take for node 0');
    const sign = name.endsWith(']') ? '[ ]' : name.endsWith('>') ? '< >' : undefined;
    if (sign === undefined) return;
    if (bracket !== undefined && bracket.sign !== sign)
      report.add(at, quoted(name), `an index in ${bracket.sign}, as in ${quoted(bracket.name)}`);
    bracket ??= { sign, name };
  });
}

/**
 * Reads a map of pin names (`steelyard/pins`).
 * @param known the pins of the array that it is meant for: others are then refused, and names that collide with those kept
 */
export function parsePins(text: string, file: string, known?: readonly string[]): Result<PinMap> {
  return read('pins', { text, file }, { refusals: () => [], check: (value, report) => check(value, report, known) });
}
