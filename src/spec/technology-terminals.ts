import { items, real, record } from './loose.js';
import { fromNm, toNm } from './technology-examination.js';
import type { Drawn, Examination } from './technology-examination.js';
import { quoted, shown } from './words.js';

/** Side of the square that a via with its enclosure needs, in nanometres. */
export function padOf(via: Drawn | undefined): number | undefined {
  const size = toNm(real(via?.entry.size_um));
  const around = toNm(real(via?.entry.enclosure_um));
  return size === undefined || around === undefined ? undefined : size + 2 * around;
}

/** Adds a density that a kind of unit needs and the dielectric does not state. */
export function densityOf({ technology, report, at }: Examination, key: string): number | undefined {
  const dielectric = record(technology.dielectric);
  if (technology.dielectric !== undefined && dielectric[key] === undefined) {
    const kind = quoted(String(record(technology.unit).kind));
    report.add(`${at}/dielectric`, `no key "${key}" for a unit of kind ${kind}`, `"${key}": a number above 0`);
  }
  return real(dielectric[key]);
}

/**
 * A terminal on the layer of its role, with its square landing (half a side: `margin`) within what it may lie on.
 * @param within from and to along x and along y, in nanometres.
 */
export function checkTerminal(
  examination: Examination,
  key: 'top' | 'bottom',
  within: readonly (readonly [from: number, to: number] | undefined)[],
  margin: number,
  on: string,
): void {
  const { report, technology } = examination;
  const role = key === 'top' ? 'topPlate' : 'bottomPlate';
  const at = `${examination.at}/unit/terminals/${key}`;
  const terminal = record(record(record(technology.unit).terminals)[key]);
  examination.known(`${at}/layer`, terminal.layer);
  const layer = examination.role(role);
  if (layer !== undefined && examination.layer(terminal.layer) !== undefined && terminal.layer !== layer.name) {
    report.add(`${at}/layer`, shown(terminal.layer), `${quoted(layer.name)}, the layer of ${role}`);
  }
  items(terminal.at_um).forEach((given, i) => {
    const value = toNm(real(given));
    const range = within[i];
    if (value === undefined || range === undefined) return;
    const [from, to] = [range[0] + margin, range[1] - margin];
    if (from > to || (value >= from && value <= to)) return;
    const what = margin > 0 ? `so that the via fits ${on}` : on;
    report.add(`${at}/at_um/${i}`, fromNm(value), `${fromNm(from)} to ${fromNm(to)}, ${what}`);
  });
}

/** Tabs on the edge of a bottom terminal of this height. */
export function checkTabs(examination: Examination, height: number | undefined): void {
  const { report, technology } = examination;
  const at = `${examination.at}/unit`;
  const unit = record(technology.unit);
  const level = toNm(real(unit.tabLevel_um));
  const tab = toNm(real(items(unit.tab_um)[1]));
  if (level === undefined || tab === undefined) return;
  if (height !== undefined && 2 * level + tab > height) {
    report.add(
      `${at}/tabLevel_um`,
      fromNm(level),
      `${fromNm((height - tab) / 2)} at most, so that the tab lies on the plate's edge`,
    );
  }
  const least = toNm(real(examination.role('bottomPlate')?.entry.minWidth_um));
  if (least !== undefined && tab < least) {
    report.add(`${at}/tab_um/1`, fromNm(tab), `${fromNm(least)} or more, the minWidth_um of the bottom plate's layer`);
  }
}
