/**
 * JSON text seen without building a tree: nesting, repeated keys and places. One linear pass each and memory for the nesting only, so
 * that a file of hundreds of megabytes is judged as safely as a small one.
 */

/** Deeper than any format here. */
export const deepest = 64;

/** Lists, objects and keys of a text that still fits the memory when it is parsed: more than any drawing here has. */
const mostParts = 12_000_000;

const quote = 34;
const comma = 44;
const colon = 58;
const openList = 91;
const backslash = 92;
const closeList = 93;
const openObject = 123;
const closeObject = 125;

interface Visitor {
  open(isObject: boolean): void;
  close(): void;
  /** A key with its quotes: text.slice(start, end). */
  key(start: number, end: number): void;
  /** The start of any value; for an object or a list just before `open`. */
  value(start: number): void;
}

// A quote is escaped if an odd number of backslashes stands before it. The runs before two quotes share no character: linear in all.
function endOfString(text: string, start: number): number {
  for (let i = text.indexOf('"', start + 1); i !== -1; i = text.indexOf('"', i + 1)) {
    let run = i;
    while (text.charCodeAt(run - 1) === backslash && run - 1 > start) run--;
    if ((i - run) % 2 === 0) return i + 1;
  }
  return text.length;
}

const isSpace = (c: number): boolean => c === 32 || c === 10 || c === 13 || c === 9;

/** Visits keys and values; takes any text, not only valid JSON. Returns where the nesting exceeds `deepest`, else -1. */
function walk(text: string, visitor: Visitor): number {
  const isObject = new Uint8Array(deepest + 1);
  let depth = 0;
  let keyNext = false;
  for (let i = 0; i < text.length;) {
    const c = text.charCodeAt(i);
    if (c === quote) {
      const end = endOfString(text, i);
      if (keyNext) visitor.key(i, end);
      else visitor.value(i);
      keyNext = false;
      i = end;
    } else if (c === openObject || c === openList) {
      if (depth === deepest) return i;
      visitor.value(i);
      isObject[++depth] = c === openObject ? 1 : 0;
      keyNext = c === openObject;
      visitor.open(keyNext);
      i++;
    } else if (c === closeObject || c === closeList) {
      if (depth > 0) {
        visitor.close();
        depth--;
      }
      keyNext = false;
      i++;
    } else if (c === comma) {
      keyNext = isObject[depth] === 1;
      i++;
    } else if (c === colon || isSpace(c)) {
      i++;
    } else {
      visitor.value(i);
      for (i++; i < text.length; i++) {
        const d = text.charCodeAt(i);
        if (
          d === comma ||
          d === colon ||
          d === quote ||
          isSpace(d) ||
          (d & ~32) === openList ||
          (d & ~32) === closeList
        )
          break;
      }
    }
  }
  return -1;
}

function keyOf(text: string, start: number, end: number): string {
  const raw = text.slice(start + 1, end - 1);
  if (!raw.includes('\\')) return raw;
  try {
    return JSON.parse(text.slice(start, end)) as string;
  } catch {
    return raw; // reported as a syntax error
  }
}

/** One step of a JSON pointer. */
export const step = (key: string | number): string => `/${String(key).replaceAll('~', '~0').replaceAll('/', '~1')}`;

interface Frame {
  readonly isObject: boolean;
  readonly keys: Set<string>;
  last: string;
  index: number;
}

/** What stands against parsing a text: it is nested too deeply (from this offset on), or made of too many parts. */
interface Survey {
  readonly tooDeepAt?: number;
  readonly tooManyParts?: number;
}

/** Looks over a text before it is parsed. Calls `repeated` with the place and pointer of every key that its object has already. */
export function survey(text: string, repeated: (offset: number, pointer: string, key: string) => void): Survey {
  const frames: Frame[] = [];
  let top: Frame | undefined;
  let parts = 0;
  const tooDeepAt = walk(text, {
    open(isObject) {
      parts++;
      top = { isObject, keys: new Set(), last: '', index: -1 };
      frames.push(top);
    },
    close() {
      frames.pop();
      top = frames.at(-1);
    },
    key(start, end) {
      if (top === undefined || ++parts > mostParts) return;
      top.last = keyOf(text, start, end);
      if (top.keys.has(top.last)) {
        const pointer = frames.map((f) => step(f.isObject ? f.last : f.index)).join('');
        repeated(start, pointer, top.last);
      }
      top.keys.add(top.last);
    },
    value() {
      if (top !== undefined) top.index++;
    },
  });
  if (tooDeepAt !== -1) return { tooDeepAt };
  return parts > mostParts ? { tooManyParts: mostParts } : {};
}

interface Place {
  key: number;
  value: number;
}

interface Branch {
  place: Place | undefined;
  readonly children: Map<string, Branch>;
}

/** Finds where the key and the value of each JSON pointer start, in offsets. Of repeated keys the last counts, as for a reader. */
export function locate(text: string, pointers: Iterable<string>): Map<string, Place> {
  const root: Branch = { place: undefined, children: new Map() };
  const found = new Map<string, Place>();
  for (const pointer of pointers) {
    let branch = root;
    for (const token of pointer.split('/').slice(1)) {
      const key = token.replaceAll('~1', '/').replaceAll('~0', '~');
      let next = branch.children.get(key);
      if (next === undefined) branch.children.set(key, (next = { place: undefined, children: new Map() }));
      branch = next;
    }
    found.set(pointer, (branch.place ??= { key: 0, value: 0 }));
  }
  const frames: { readonly branch: Branch | undefined; readonly isObject: boolean; index: number }[] = [];
  let next: Branch | undefined = root;
  let keyAt = -1;
  walk(text, {
    open(isObject) {
      frames.push({ branch: next, isObject, index: 0 });
    },
    close() {
      frames.pop();
    },
    key(start, end) {
      next = frames.at(-1)?.branch?.children.get(keyOf(text, start, end));
      keyAt = start;
    },
    value(start) {
      const frame = frames.at(-1);
      if (frame !== undefined && !frame.isObject) {
        next = frame.branch?.children.get(String(frame.index++));
        keyAt = start;
      }
      if (next?.place !== undefined) {
        next.place.key = keyAt < 0 ? start : keyAt;
        next.place.value = start;
      }
    },
  });
  return found;
}
