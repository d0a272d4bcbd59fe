import { figure } from '../core/figure.js';
import { integer, real, record } from './loose.js';
import { fromNm, pairNm, toNm } from './technology-examination.js';
import type { Examination } from './technology-examination.js';
import { checkTabs, checkTerminal, densityOf, padOf } from './technology-terminals.js';
import type { FramedFingersUnit } from './technology.js';
import { fingerSizes } from './unit-geometry.js';
import { quoted, shown } from './words.js';

/** By how much the stated capacitance may differ from what the density gives, in percent. */
const tolerance_percent = 5;

const lengths = ['fingerLength_um', 'fingerWidth_um', 'gap_um', 'frameWidth_um', 'barWidth_um'] as const;

/** Frame, comb, tabs and terminals against the rules of their metal; the capacitance against the density. */
export function checkFramedFingers(examination: Examination): void {
  const { report, technology, roles } = examination;
  const at = `${examination.at}/unit`;
  const unit = record(technology.unit);
  const density = densityOf(examination, 'facingCapacitance_fF_per_um');
  if (technology.roles !== undefined && roles.extractionExclusion === undefined)
    report.add(
      `${examination.at}/roles`,
      'no key "extractionExclusion" for a unit of kind "framed-fingers"',
      '"extractionExclusion": a marker layer over the fingers',
    );
  const metal = examination.role('bottomPlate');
  if (metal !== undefined && examination.role('topPlate') !== undefined && roles.topPlate !== metal.name)
    report.add(
      `${examination.at}/roles/topPlate`,
      shown(roles.topPlate),
      `${quoted(metal.name)}, the metal of bottomPlate: frame and comb lie on one metal`,
    );
  const [length, width, gap, frame, bar] = lengths.map((key) => toNm(real(unit[key])));
  const fingers = integer(unit.fingers);

  const least = toNm(real(metal?.entry.minWidth_um));
  const spacing = toNm(real(metal?.entry.minSpacing_um));
  const wideFrom = toNm(real(metal?.entry.wideFrom_um));
  const wideSpacing = toNm(real(metal?.entry.wideSpacing_um));
  const name = quoted(metal?.name ?? '');
  for (const [key, value] of [
    ['fingerWidth_um', width],
    ['frameWidth_um', frame],
    ['barWidth_um', bar],
  ] as const)
    if (value !== undefined && least !== undefined && value < least)
      report.add(`${at}/${key}`, fromNm(value), `${fromNm(least)} or more, the minWidth_um of ${name}`);
  if (gap !== undefined && spacing !== undefined && gap < spacing)
    report.add(`${at}/gap_um`, fromNm(gap), `${fromNm(spacing)} or more, the minSpacing_um of ${name}`);
  const widest = Math.max(width ?? 0, frame ?? 0, bar ?? 0);
  if (gap !== undefined && wideFrom !== undefined && wideSpacing !== undefined && widest >= wideFrom)
    if (gap < wideSpacing && gap >= (spacing ?? 0))
      report.add(
        `${at}/gap_um`,
        `${fromNm(gap)} beside metal ${fromNm(widest)} wide`,
        `${fromNm(wideSpacing)} or more, the wideSpacing_um of ${name}, or metal below ${fromNm(wideFrom)}`,
      );
  if (length !== undefined && gap !== undefined && least !== undefined && length < gap + least)
    report.add(
      `${at}/fingerLength_um`,
      fromNm(length),
      `${fromNm(gap + least)} or more: the gap, and a face as long as the minWidth_um of ${name}`,
    );

  const via = examination.via(examination.role('topPlate'), examination.role('strap'));
  const pad = padOf(via);
  if (pad !== undefined && via !== undefined && bar !== undefined && bar < pad)
    report.add(`${at}/barWidth_um`, fromNm(bar), `${fromNm(pad)} or more: via ${quoted(via.name)} with its enclosure`);
  const tab = pairNm(unit.tab_um);
  if (pad !== undefined && frame !== undefined && tab[0] !== undefined && frame + tab[0] < pad)
    report.add(`${at}/tab_um/0`, fromNm(tab[0]), `${fromNm(pad - frame)} or more, so that a via fits on tab and frame`);
  if (
    fingers === undefined ||
    fingers < 2 ||
    [length, width, gap, frame, bar].some((value) => value === undefined || value <= 0)
  )
    return;
  const whole = Object.fromEntries(lengths.map((key) => [key, (toNm(real(unit[key])) ?? 0) / 1000]));
  const sizes = fingerSizes({ ...(whole as unknown as FramedFingersUnit), fingers });
  const leastArea = real(metal?.entry.minArea_um2);
  if (leastArea !== undefined && sizes.combArea < leastArea * 1e6)
    report.add(
      `${at}/fingerLength_um`,
      `a comb of ${sizes.combArea / 1e6} um2`,
      `${leastArea} um2 or more, minArea_um2`,
    );
  // The frame is drawn about the unit's middle.
  const grid = integer(technology.grid_nm) ?? 1;
  if ([length, bar].every((value) => (value ?? 0) % grid === 0) && sizes.frame[1] % (2 * grid) !== 0)
    report.add(
      `${at}/barWidth_um`,
      `a frame ${fromNm(sizes.frame[1])} high`,
      `a multiple of ${fromNm(2 * grid)}, twice the grid: it is drawn about a centre on the grid`,
    );
  const halfBar = (bar ?? 0) / 2;
  const onBar = [
    [-sizes.comb[0] / 2, sizes.comb[0] / 2],
    [sizes.barY - halfBar, sizes.barY + halfBar],
  ] as const;
  if (pad === undefined || (bar ?? 0) >= pad)
    checkTerminal(examination, 'top', onBar, pad === undefined ? 0 : pad / 2, "on the comb's bar");
  const onFrame = sizes.frame.map((side) => [-side / 2, side / 2] as const);
  checkTerminal(examination, 'bottom', onFrame, 0, 'on the frame');
  checkTabs(examination, sizes.frame[1]);

  const stated = real(unit.capacitance_fF);
  if (stated === undefined || density === undefined) return;
  const drawn = (sizes.facing / 1000) * density;
  if (Math.abs(stated - drawn) * 100 > tolerance_percent * drawn)
    report.add(
      `${at}/capacitance_fF`,
      `${stated} fF`,
      `${figure(drawn)} within ${tolerance_percent} percent: ${fromNm(sizes.facing)} of facing edges at ${density} fF per um`,
    );
}
