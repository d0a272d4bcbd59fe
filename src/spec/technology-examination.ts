import { items, real, record, word } from './loose.js';
import type { Report } from './report.js';
import type { Roles } from './technology.js';
import { meant, quoted } from './words.js';

type Loose = Readonly<Record<string, unknown>>;

/** A length in nanometres, as near as the file gives it. */
export const toNm = (length_um: number | undefined): number | undefined =>
  length_um === undefined ? undefined : Math.round(length_um * 1000);
/** Width and height, or x and y. */
export const pairNm = (value: unknown): (number | undefined)[] => [0, 1].map((i) => toNm(real(items(value)[i])));
export const fromNm = (length_nm: number): string => `${length_nm / 1000} um`;

export interface Drawn {
  readonly at: string;
  readonly name: string;
  readonly entry: Loose;
}

/** One technology under examination: the parts that rules compare, whatever their shape. */
export class Examination {
  readonly layers: readonly Drawn[];
  readonly vias: readonly Drawn[];
  readonly layerNames: readonly string[];
  readonly roles: Loose;

  constructor(
    readonly technology: Loose,
    readonly report: Report,
    readonly at: string,
  ) {
    const drawn = (key: string): Drawn[] =>
      items(technology[key]).map((value, i) => {
        const entry = record(value);
        return { at: `${at}/${key}/${i}`, name: word(entry.name) ?? '', entry };
      });
    this.layers = drawn('layers');
    this.vias = drawn('vias');
    this.layerNames = this.layers.map((l) => l.name).filter((name) => name !== '');
    this.roles = record(technology.roles);
  }

  layer(name: unknown): Drawn | undefined {
    return this.layers.find((l) => l.name !== '' && l.name === name);
  }

  role(role: keyof Roles): Drawn | undefined {
    return this.layer(this.roles[role]);
  }

  /** The via between two layers, whichever is the lower. */
  via(a: Drawn | undefined, b: Drawn | undefined): Drawn | undefined {
    const joins = (lower: Drawn | undefined, upper: Drawn | undefined, { entry }: Drawn): boolean =>
      entry.lower === lower?.name && entry.upper === upper?.name;
    return this.vias.find((via) => joins(a, b, via) || joins(b, a, via));
  }

  /** Adds a name that no layer has. */
  known(at: string, name: unknown): void {
    const given = word(name);
    if (given === undefined || this.layerNames.includes(given)) return;
    this.report.add(at, quoted(given), () => meant(given, this.layerNames, 'layer'));
  }
}
