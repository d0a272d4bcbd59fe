import { InputError } from '../core/problem.js';
import type { Problem } from '../core/problem.js';
import type { Polygons } from '../spec/polygons.js';
import { deviceName, netlistText, remarkOnPins, subcircuitOf, unitGroups } from './spice-text.js';
import type { NetlistOptions } from './spice-text.js';

export interface DeviceNetlistOptions extends NetlistOptions {
  /** One device for every unit, or one for all units of a capacitor with the technology's multiplicity key. */
  readonly devices?: 'units' | 'merged';
}

/**
 * A SPICE netlist of the technology's devices: the schematic for a comparison of layout and schematic. Terminals other than `top` and
 * `bottom` are on the technology's bulk net.
 * @throws InputError with every name that a netlist cannot hold; where devices are to be merged and the technology has no multiplicity key
 */
export function writeDeviceNetlist(p: Polygons, options: DeviceNetlistOptions = {}): string {
  const { device } = p.technology;
  const { devices = 'units' } = options;
  const key = device.multiplicity;
  const problems: Problem[] = [];
  const add = (pointer: string, found: string, wanted: string) =>
    problems.push({ pointer: `/technology/device${pointer}`, found, wanted });
  if (devices === 'merged' && key === undefined)
    add(
      '',
      'no "multiplicity"',
      'the key that tells how many devices one line stands for; or one device a unit (--devices units)',
    );
  const words = [device.model, ...Object.entries(device.parameters ?? {}).flat(), ...(key === undefined ? [] : [key])];
  for (const word of words)
    if (!/^[A-Za-z0-9_.+*/()-]+$/.test(word)) add('', JSON.stringify(word), 'letters, digits and _ . + - * / ( )');
  if (problems.length > 0) throw new InputError(problems);
  const others = device.terminals.some((terminal) => terminal !== 'top' && terminal !== 'bottom');
  const circuit = subcircuitOf(p, options, others ? device.bulk : undefined);
  const parameters = Object.entries(device.parameters ?? {}).map(([name, value]) => `${name}=${value}`);

  const entries =
    devices === 'merged'
      ? unitGroups(p, circuit.units).map((group) => ({
          ...group,
          name: deviceName(group),
          more: group.count > 1 ? [`${key}=${group.count}`] : [],
        }))
      : circuit.units.map((unit) => ({ ...unit, name: `${deviceName(unit)}_${unit.number}`, more: [] }));
  const lines = entries.map(({ name, top, bottom, more }) => {
    const netOf = (terminal: string) =>
      terminal === 'top' ? top : terminal === 'bottom' ? bottom : (device.bulk ?? '');
    const nodes = device.terminals.map((terminal) => circuit.nodeOf(netOf(terminal)));
    return [`${device.prefix}${name}`, ...nodes, device.model, ...parameters, ...more];
  });
  const order =
    devices === 'merged'
      ? 'One device a capacitor.'
      : 'One device a unit, numbered row by row from the lower left corner of the drawing.';
  return netlistText(circuit, `schematic of devices ${device.model}`, [remarkOnPins, order], lines);
}
