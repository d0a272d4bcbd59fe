import { figure } from '../core/figure.js';
import { linearityOf } from '../linearity/capacitances.js';
import type { Capacitor } from '../spec/floorplan.js';
import type { ParasiticFigures } from '../spec/metrics.js';
import { TOP, VSS } from './conductors.js';
import { between } from './coupling.js';
import type { Extraction } from './extract.js';
import { SECTION_ERROR, UNIT_ERROR } from './sections.js';

/** What wires make of an array. */
export interface Parasitics {
  readonly figures: ParasiticFigures;
  /** Half the width of the band about `inl_lsb`: each kind of conductor off by its own share, all of a kind alike. */
  readonly inlError_lsb: number;
  /** What each bit has to `TOP` beyond its units, in units. */
  readonly excess: ReadonlyMap<string, number>;
}

/**
 * The figures of an extracted array. Capacitances to `TOP` in proportion to the weights are gain; `linearityOf` says what the rest bends.
 * @param topLoad_fF what hangs on `TOP` outside
 */
export function parasiticFigures(
  { coupling, unitExcess_fF }: Extraction,
  capacitors: readonly Capacitor[],
  unit_fF: number,
  topLoad_fF: number,
): Parasitics {
  const bits = capacitors.filter(({ role }) => role === 'bit');
  const weight = bits.map((bit) => bit.weight);
  const toTop = (name: string) => between(coupling, name, TOP).fF;
  const linearity = linearityOf(
    weight,
    bits.map(({ name }) => toTop(name)),
  );
  const array = capacitors.reduce((sum, { name }) => sum + toTop(name), 0);
  const ground = between(coupling, TOP, VSS).fF;

  const wires = new Map(bits.map(({ name }) => [name, 0]));
  const byLayer = new Map<string, Map<string, number>>();
  for (const { net, layer, top_fF } of coupling.wires) {
    if (!wires.has(net)) continue;
    wires.set(net, wires.get(net)! + top_fF);
    const kind = byLayer.get(layer) ?? new Map<string, number>();
    byLayer.set(layer, kind.set(net, (kind.get(net) ?? 0) + top_fF));
  }
  const bending = (of: (name: string) => number) =>
    linearityOf(
      weight,
      bits.map(({ name, weight: w }) => w + of(name) / unit_fF),
    ).inl_lsb;
  let error = UNIT_ERROR * bending((name) => unitExcess_fF[name]);
  for (const kind of byLayer.values()) error += SECTION_ERROR * bending((name) => kind.get(name) ?? 0);

  return {
    figures: {
      inl_lsb: figure(linearity.inl_lsb),
      ...(linearity.dnl_lsb !== undefined && { dnl_lsb: figure(linearity.dnl_lsb) }),
      topToGround_fF: ground,
      attenuation_percent: figure((100 * (ground + topLoad_fF)) / (array + ground + topLoad_fF)),
      bits: bits.map(({ name }) => {
        const load = coupling.nets.reduce((sum, net) => sum + (net === TOP ? 0 : between(coupling, name, net).fF), 0);
        return { name, topCoupling_fF: figure(wires.get(name) ?? 0), load_fF: figure(load) };
      }),
    },
    inlError_lsb: error,
    excess: new Map(bits.map(({ name, weight: w }) => [name, toTop(name) / unit_fF - w])),
  };
}
