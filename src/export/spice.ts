import { figure } from '../core/figure.js';
import { InputError } from '../core/problem.js';
import type { Polygons } from '../spec/polygons.js';
import { deviceName, netlistText, remarkOnPins, subcircuitOf, unitGroups } from './spice-text.js';
import type { NetlistOptions } from './spice-text.js';

export interface CapacitorNetlistOptions extends NetlistOptions {
  /** Capacitances as they came out, by capacitor; those not named keep their units times the technology's unit. */
  readonly capacitances_fF?: Readonly<Record<string, number>>;
}

/**
 * A SPICE netlist of ideal capacitors: one subcircuit, one capacitor a bit, one for the termination, one for all fill dummies (TOP to
 * VSS) and one for all dummies on VSS.
 * @throws InputError with every name that a netlist cannot hold, and every capacitance that is none
 */
export function writeCapacitorNetlist(p: Polygons, options: CapacitorNetlistOptions = {}): string {
  const circuit = subcircuitOf(p, options);
  const unit_fF = p.technology.unit.capacitance_fF;
  const own = new Map(Object.entries(options.capacitances_fF ?? {}));
  const problems = [...own].flatMap(([name, value]) => {
    const at = { pointer: '', found: `${String(value)} fF for ${JSON.stringify(name)}` };
    if (!p.capacitors.some((c) => c.name === name))
      return [{ ...at, wanted: `a capacitor of this array: ${p.capacitors.map((c) => c.name).join(', ')}` }];
    return Number.isFinite(value) && value > 0 ? [] : [{ ...at, wanted: 'a number above 0' }];
  });
  if (problems.length > 0) throw new InputError(problems);

  const devices = unitGroups(p, circuit.units).map((group) => {
    const { capacitor, top, bottom, count } = group;
    const value = (capacitor === undefined ? undefined : own.get(capacitor)) ?? count * unit_fF;
    return [`C${deviceName(group)}`, circuit.nodeOf(top), circuit.nodeOf(bottom), `${figure(value)}f`];
  });
  const value = own.size === 0 ? `a unit is ${figure(unit_fF)} fF` : 'capacitances as given';
  return netlistText(circuit, `ideal capacitors, one a bit; ${value}`, [remarkOnPins], devices);
}
