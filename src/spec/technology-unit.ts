import { checkFramedFingers } from './technology-fingers.js';
import { real, record } from './loose.js';
import { fromNm, pairNm, toNm } from './technology-examination.js';
import type { Examination } from './technology-examination.js';
import { checkNamedCell } from './technology-named-cell.js';
import { checkTabs, checkTerminal, densityOf, padOf } from './technology-terminals.js';
import { quoted } from './words.js';

/** A unit against the rules of its layers. */
export function checkUnit(examination: Examination): void {
  switch (record(examination.technology.unit).kind) {
    case 'parallel-plate':
      return checkParallelPlate(examination);
    case 'framed-fingers':
      return checkFramedFingers(examination);
    case 'named-cell':
      return checkNamedCell(examination);
  }
}

/** Plates, tabs and terminals against the rules of their layers. */
function checkParallelPlate(examination: Examination): void {
  const { report, technology } = examination;
  const at = `${examination.at}/unit`;
  const unit = record(technology.unit);
  densityOf(examination, 'plateCapacitance_fF_per_um2');
  const enclosure = toNm(real(unit.plateEnclosure_um));
  const topPlate = pairNm(unit.topPlate_um);
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
  const pad = padOf(via);
  topPlate.forEach((side, i) => {
    if (pad === undefined || via === undefined || side === undefined || side >= pad) return;
    const wanted = `${fromNm(pad)} or more: via ${quoted(via.name)} with its enclosure`;
    report.add(`${at}/topPlate_um/${i}`, `a top plate of ${fromNm(side)}`, wanted);
  });

  const around = (plate: (number | undefined)[]) =>
    plate.map((side) => (side === undefined ? undefined : ([-side / 2, side / 2] as const)));
  checkTerminal(examination, 'top', around(topPlate), pad === undefined ? 0 : pad / 2, 'on the plate');
  checkTerminal(examination, 'bottom', around(bottomPlate), 0, 'on the plate');
  checkTabs(examination, bottomPlate[1]);
}
