/** A figure with the way to it. */
export interface Worked {
  /** What it is, in a word or two. */
  readonly name: string;
  readonly value: number;
  readonly unit: string;
  readonly formula: string;
  /** The formula's right side with the numbers put in. */
  readonly inserted: string;
  readonly source: string;
}

/** A number as an explanation shows it: four digits are enough to follow. */
export const digits = (value: number): string => {
  const rounded = Number(value.toPrecision(4));
  return String(rounded).replace('e+', 'e');
};
