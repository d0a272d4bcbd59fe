import type { ArraySpec } from './array-spec.js';
import type { Capacitor } from './floorplan.js';
import { items, record, word } from './loose.js';
import type { Report } from './report.js';
import { counted, meant, quoted } from './words.js';

/** Where the pins of a block are to lie. */
export interface PinsWanted {
  /** The edge that the bits and the termination end at, and the one that `TOP` ends at. */
  readonly bits: 'bottom' | 'top';
  readonly top: 'bottom' | 'top';
  /** Capacitors from left to right. */
  readonly order: readonly string[];
  /** From one pin to the next; absent where they lie as the wires end. */
  readonly pitch_um?: number;
}

/** What an array says of its pins, all defaults filled in. A termination that the order leaves out stands leftmost. */
export function pinsWanted(
  capacitors: readonly Capacitor[],
  { bits, top }: NonNullable<ArraySpec['pins']> = {},
): PinsWanted {
  const named = (role: Capacitor['role']) => capacitors.filter((one) => one.role === role).map(({ name }) => name);
  const order = bits?.order ?? named('bit');
  return {
    bits: bits?.side ?? 'bottom',
    top: top?.side ?? 'top',
    order: [...named('termination').filter((name) => !order.includes(name)), ...order],
    ...(bits?.pitch_um !== undefined && { pitch_um: bits.pitch_um }),
  };
}

/** Adds what is wrong with an order of pins: a name that is none, one that comes twice, bits that are left out. */
export function checkPinOrder(
  pins: unknown,
  capacitors: readonly { readonly name: string; readonly role: string }[],
  report: Report,
  at: string,
): void {
  const { order } = record(record(pins).bits);
  if (!Array.isArray(order)) return;
  const here = `${at}/bits/order`;
  const names = capacitors.map(({ name }) => name);
  const seen = new Set<string>();
  items(order).forEach((given, i) => {
    const name = word(given);
    if (name === undefined) return;
    if (!names.includes(name)) report.add(`${here}/${i}`, quoted(name), () => meant(name, names, 'pin'));
    else if (seen.has(name)) report.add(`${here}/${i}`, `${quoted(name)} once more`, 'each pin once');
    seen.add(name);
  });
  const left = capacitors.filter(({ name, role }) => role === 'bit' && !seen.has(name)).map(({ name }) => name);
  if (left.length > 0)
    report.add(here, `${counted(items(order).length, 'pin')} without ${left.map(quoted).join(', ')}`, 'every bit once');
}
