import { secondOrderInl } from '../linearity/exact-inl.js';
import type { LeastOfReflected } from '../linearity/proved.js';
import type { Capacitor, Core } from '../spec/floorplan.js';
import { ExactSearch } from './exact-search.js';
import type { Best } from './search.js';

type Placed = Pick<Best, 'dealing' | 'netOfCell'>;

/** An exact search that goes on from a deal of the same bits on the same core: the deal stands until something better is found. */
export class ProvingSearch {
  readonly #core: Core;
  readonly #from: Placed;
  readonly #incumbent: bigint;
  readonly #exact: ExactSearch;

  /** @param from of straight binary bits alone, in their order: pairs and the centre cell. @throws RangeError as `ExactSearch`. */
  constructor(from: Placed, core: Core, bits: readonly Capacitor[]) {
    this.#core = core;
    this.#from = from;
    this.#incumbent = secondOrderInl(from.dealing.deal, core.pitch_um).squared;
    this.#exact = new ExactSearch({ core, bits, incumbent: this.#incumbent });
  }

  get progress(): number {
    return this.#exact.progress;
  }

  get work(): number {
    return this.#exact.work;
  }

  step(work: number): boolean {
    return this.#exact.step(work);
  }

  best(): Placed {
    const better = this.#exact.best();
    if (!better) return this.#from;
    const { dealing } = this.#from;
    const { start, cells, netOfBlock } = dealing.deal;
    // The blocks are what they were, and each is all of one bit.
    const nets = netOfBlock.map((_, block) => better.netOfCell[cells[start[block]]]);
    return { dealing: { ...dealing, deal: { ...dealing.deal, netOfBlock: nets } }, netOfCell: better.netOfCell };
  }

  /** Once the search has come to its end. */
  get proved(): LeastOfReflected | undefined {
    if (this.#exact.status !== 'proved') return undefined;
    return { core: this.#core, squared: this.#exact.best()?.squared ?? this.#incumbent };
  }
}
