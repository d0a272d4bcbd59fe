import type { Problem } from '../core/problem.js';
import { locate } from './json-text.js';
import { counted, harmlessText } from './words.js';

/** Text of a file and the name to report it under. */
export interface Source {
  readonly text: string;
  readonly file: string;
}

/** Where a problem stands: at the pointer's value, at its key, or at an offset into the text. */
type Place = 'value' | 'key' | number;

interface Held {
  readonly pointer: string;
  readonly found: string;
  readonly wanted: string;
  readonly place: Place;
}

const most = 100;

/** Collects the problems of one file. The first 100 are listed, the rest counted. */
export class Report {
  readonly #held: Held[] = [];
  readonly #seen = new Set<string>();
  #count = 0;

  constructor(readonly source: Source) {}

  get count(): number {
    return this.#count;
  }

  /** True while further problems are listed, not only counted. */
  get open(): boolean {
    return this.#held.length < most;
  }

  /** @param wanted as a function where the words take work to find: called only if the problem is listed */
  add(pointer: string, found: string, wanted: string | (() => string), place: Place = 'value'): void {
    if (this.open) {
      if (typeof wanted === 'function') wanted = wanted();
      const id = `${pointer}\n${found}\n${wanted}\n${typeof place === 'number' ? place : ''}`;
      if (this.#seen.has(id)) return;
      this.#seen.add(id);
      this.#held.push({ pointer, found, wanted, place });
    }
    this.#count++;
  }

  /** Problems that nobody will read one by one. */
  addUnlisted(count: number): void {
    this.#count += count;
  }

  /** In the order of the file, with line and column. */
  problems(): Problem[] {
    const { text, file } = this.source;
    const places = locate(text, new Set(this.#held.map((h) => h.pointer)));
    const offsets = this.#held.map((held) => {
      const place = held.place;
      return { held, offset: typeof place === 'number' ? place : (places.get(held.pointer)?.[place] ?? 0) };
    });
    offsets.sort((a, b) => a.offset - b.offset); // stable: at one place in the order found
    let line = 1;
    let lineStart = 0;
    let at = 0;
    const problems = offsets.map(({ held, offset }): Problem => {
      for (; at < offset; at++) {
        const c = text.charCodeAt(at);
        if (c === 10 || (c === 13 && text.charCodeAt(at + 1) !== 10)) {
          line++;
          lineStart = at + 1;
        }
      }
      const { found, wanted } = held;
      const pointer = harmlessText(held.pointer.length > 200 ? `${held.pointer.slice(0, 197)}...` : held.pointer);
      return { pointer, found, wanted, file, line, column: offset - lineStart + 1 };
    });
    const more = this.#count - problems.length;
    if (more > 0)
      problems.push({ pointer: '', found: counted(more, 'more problem'), wanted: 'those above put right first', file });
    return problems;
  }
}
