/** Something wrong with a drawing or a floorplan; keys are those of the command's JSON. */
export interface Finding {
  readonly rule: string;
  /** Name of the layer or via in the technology, "" where no layer is concerned. */
  readonly layer: string;
  /** Where it is, in the top structure's coordinates (a floorplan's: from the core's centre). */
  readonly at_um: readonly [x: number, y: number];
  readonly found_um?: number;
  readonly limit_um?: number;
  readonly nets?: readonly string[];
  readonly text: string;
}

/** A place in nanometres as it is reported; half nanometres go down. */
export const placeUm = (x: number, y: number): [number, number] => [Math.floor(x) / 1000, Math.floor(y) / 1000];

/** A length in nanometres as it is reported: tenths of nanometres, never rounded up to its limit. */
export const lengthUm = (nanometres: number): number => Math.floor(nanometres * 10) / 10000;

const byText = (a: string, b: string): number => (a < b ? -1 : a > b ? 1 : 0);

function order(a: Finding, b: Finding): number {
  return (
    byText(a.rule, b.rule) ||
    byText(a.layer, b.layer) ||
    a.at_um[1] - b.at_um[1] ||
    a.at_um[0] - b.at_um[0] ||
    byText(a.text, b.text)
  );
}

/** The findings in an order that depends on nothing but themselves, each once. */
export function inOrder(findings: readonly Finding[]): Finding[] {
  const sorted = [...findings].sort(order);
  return sorted.filter((finding, i) => i === 0 || order(sorted[i - 1], finding) !== 0);
}
