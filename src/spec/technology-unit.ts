import { items, real, record } from './loose.js';
import { fromNm, toNm } from './technology-examination.js';
import type { Examination } from './technology-examination.js';
import { quoted, shown } from './words.js';

const at2 = (value: unknown, i: number): number | undefined => real(items(value)[i]);
/** Plates, tabs and terminals against the rules of their layers. */
export function checkUnit(examination: Examination): void {
  const { report, technology } = examination;
  const at = `${examination.at}/unit`;
  const unit = record(technology.unit);
  const enclosure = toNm(real(unit.plateEnclosure_um));
  const topPlate = [0, 1].map((i) => toNm(at2(unit.topPlate_um, i)));
  const bottomPlate = topPlate.map((side) =>
    side === undefined || enclosure === undefined ? undefined : side + 2 * enclosure,
  );
  const rules = (side: number | undefined, role: 'topPlate' | 'bottomPlate', i: number): void => {
    const layer = examination.role(role);
    if (side === undefined || layer === undefined) return;
    const least = toNm(real(layer.entry.minWidth_um));
    const most = toNm(real(layer.entry.maxWidth_um));
    const pointer = `${at}/topPlate_um/${i}`;
    const found = `a ${role === 'topPlate' ? 'top' : 'bottom'} plate of ${fromNm(side)}`;
    if (least !== undefined && side < least)
      report.add(pointer, found, `${fromNm(least)} or more, the minWidth_um of ${quoted(layer.name)}`);
    if (most !== undefined && side > most)
      report.add(pointer, found, `${fromNm(most)} at most, the maxWidth_um of ${quoted(layer.name)}`);
  };
  topPlate.forEach((side, i) => rules(side, 'topPlate', i));
  bottomPlate.forEach((side, i) => rules(side, 'bottomPlate', i));

  const [width, height] = topPlate;
  const leastArea = real(examination.role('topPlate')?.entry.minArea_um2);
  if (width !== undefined && height !== undefined && leastArea !== undefined && width * height < leastArea * 1e6) {
    report.add(
      `${at}/topPlate_um`,
      `a top plate of ${(width * height) / 1e6} um2`,
      `${leastArea} um2 or more, its layer's minArea_um2`,
    );
  }

  const via = examination.via(examination.role('topPlate'), examination.role('strap'));
  const size = toNm(real(via?.entry.size_um));
  const around = toNm(real(via?.entry.enclosure_um));
  const pad = size === undefined || around === undefined ? undefined : size + 2 * around;
  topPlate.forEach((side, i) => {
    if (pad === undefined || via === undefined || side === undefined || side >= pad) return;
    const wanted = `${fromNm(pad)} or more: via ${quoted(via.name)} with its enclosure`;
    report.add(`${at}/topPlate_um/${i}`, `a top plate of ${fromNm(side)}`, wanted);
  });

  const terminals = record(unit.terminals);
  const within = (
    key: 'top' | 'bottom',
    role: 'topPlate' | 'bottomPlate',
    plate: (number | undefined)[],
    margin: number,
  ): void => {
    const terminal = record(terminals[key]);
    examination.known(`${at}/terminals/${key}/layer`, terminal.layer);
    const layer = examination.role(role);
    if (layer !== undefined && examination.layer(terminal.layer) !== undefined && terminal.layer !== layer.name) {
      report.add(`${at}/terminals/${key}/layer`, shown(terminal.layer), `${quoted(layer.name)}, the layer of ${role}`);
    }
    items(terminal.at_um).forEach((given, i) => {
      const value = toNm(real(given));
      const side = plate[i];
      if (value === undefined || side === undefined || side < 2 * margin || 2 * Math.abs(value) + 2 * margin <= side)
        return;
      const most = fromNm(side / 2 - margin);
      const what = margin > 0 ? 'so that the via fits on the plate' : 'on the plate';
      report.add(`${at}/terminals/${key}/at_um/${i}`, fromNm(value), `-${most} to ${most}, ${what}`);
    });
  };
  within('top', 'topPlate', topPlate, pad === undefined ? 0 : pad / 2);
  within('bottom', 'bottomPlate', bottomPlate, 0);

  const level = toNm(real(unit.tabLevel_um));
  const tab = toNm(at2(unit.tab_um, 1));
  const side = bottomPlate[1];
  if (level === undefined || tab === undefined) return;
  if (side !== undefined && 2 * level + tab > side) {
    report.add(
      `${at}/tabLevel_um`,
      fromNm(level),
      `${fromNm((side - tab) / 2)} at most, so that the tab lies on the plate's edge`,
    );
  }
  const least = toNm(real(examination.role('bottomPlate')?.entry.minWidth_um));
  if (least !== undefined && tab < least) {
    report.add(`${at}/tab_um/1`, fromNm(tab), `${fromNm(least)} or more, the minWidth_um of the bottom plate's layer`);
  }
}
