/** How values are shown in messages. */

// Besides what JSON escapes: the delete key's and the second block of control characters, marks that turn the writing direction, and
// line separators. None of them may reach a terminal from a file.
const unseen = /[\u0000-\u001f\u007f-\u009f\u200b-\u200f\u2028-\u202e\u2060-\u206f\ufeff\ud800-\udfff]/g;
const escape = (unit: string): string => `\\u${unit.charCodeAt(0).toString(16).padStart(4, '0')}`;
const longest = 60;

/** Harmless on a terminal, whole. */
export const harmlessText = (raw: string): string => raw.replace(unseen, escape);

const cut = (raw: string): string => (raw.length > longest ? `${raw.slice(0, longest - 3)}...` : raw);

/** A text in quotes, cut to some 60 characters, control characters escaped. */
export function quoted(raw: string): string {
  const body = JSON.stringify(cut(raw)).slice(1, -1).replace(unseen, escape);
  return `"${cut(body)}"`;
}

/** A value from a file in a few words. */
export function shown(value: unknown): string {
  if (typeof value === 'string') return quoted(value);
  if (Array.isArray(value)) return value.length === 0 ? 'an empty list' : `a list of ${value.length}`;
  if (value === null) return 'null';
  if (typeof value === 'object') {
    const keys = Object.keys(value).length;
    return keys === 0 ? 'an empty object' : `an object of ${keys} ${keys === 1 ? 'key' : 'keys'}`;
  }
  if (typeof value === 'number' && !Number.isFinite(value)) return 'a number too large for a double';
  return cut(JSON.stringify(value) ?? 'nothing');
}

function joined(values: readonly unknown[], word: string): string {
  const words = values.map((v) => JSON.stringify(v));
  const last = words.pop() ?? '';
  return words.length === 0 ? last : `${words.join(', ')} ${word} ${last}`;
}

/** `"a", "b" or "c"`. */
export const either = (values: readonly unknown[]): string => joined(values, 'or');

/** `"a", "b" and "c"`. */
export const all = (values: readonly unknown[]): string => joined(values, 'and');

/** `1 row`, `2 rows`. */
export const counted = (count: number, noun: string): string => `${count} ${noun}${count === 1 ? '' : 's'}`;

/** Insertions, deletions, changes and exchanges of neighbours that turn `a` into `b`. */
function distance(a: string, b: string): number {
  let before: number[] = [];
  let last = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      const change = last[j - 1] + (a[i - 1] === b[j - 1] ? 0 : 1);
      let least = Math.min(last[j] + 1, row[j - 1] + 1, change);
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1]) least = Math.min(least, before[j - 2] + 1);
      row.push(least);
    }
    before = last;
    last = row;
  }
  return last[b.length];
}

/** What of `known` was probably meant, in words that complete "wanted ...": the nearest one, or all when none is near. */
export function meant(word: string, known: readonly string[], noun: string): string {
  const given = word.slice(0, longest).toLowerCase();
  let best = '';
  let least = Infinity;
  for (const candidate of known) {
    const d = distance(given, candidate.toLowerCase());
    if (d < least) [best, least] = [candidate, d];
  }
  if (least <= Math.max(2, best.length / 2)) return `${quoted(best)}, the nearest known ${noun}`;
  if (known.length === 0) return `no ${noun} here`;
  return `a known ${noun}: ${known.slice(0, 24).map(quoted).join(', ')}${known.length > 24 ? ', ...' : ''}`;
}
