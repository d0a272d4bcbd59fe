/** A figure as files show it: the nearest number with 12 significant digits; -0 becomes 0. */
export const figure = (n: number): number => Number(n.toPrecision(12)) + 0;
