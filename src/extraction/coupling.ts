/** Capacitance between two nets of a drawing, all of it: plates, wires, the substrate on `VSS`. */
interface Pair {
  readonly a: string;
  readonly b: string;
  readonly fF: number;
  /** Half the width of the band about `fF`. */
  readonly error_fF: number;
}

/** A drawn rectangle of a wire (of a net other than `TOP` and `VSS`) and what hangs on it, spread evenly over its length. */
export interface WireLoad {
  readonly net: string;
  /** Name of its layer. */
  readonly layer: string;
  /** Whole nanometres, as drawn. */
  readonly x0: number;
  readonly y0: number;
  readonly x1: number;
  readonly y1: number;
  /** To `TOP`. */
  readonly top_fF: number;
  /** To everything else. */
  readonly load_fF: number;
}

/** What a drawing's conductors have between them. Nets by their names in the list of polygons: `B0` up, `TERM`, `TOP`, `VSS`. */
export interface Coupling {
  readonly nets: readonly string[];
  /** Each pair once, `a` before `b` in the order of `nets`; pairs that are not listed have nothing between them. */
  readonly pairs: readonly Pair[];
  /** What of the pairs hangs on wires and not on the units' own shapes. */
  readonly wires: readonly WireLoad[];
}

/** The pair of two nets, in either order; 0 where nothing lies between them. */
export function between(
  { pairs }: Coupling,
  one: string,
  other: string,
): { readonly fF: number; readonly error_fF: number } {
  const found = pairs.find(({ a, b }) => (a === one && b === other) || (a === other && b === one));
  return found ?? { fF: 0, error_fF: 0 };
}
