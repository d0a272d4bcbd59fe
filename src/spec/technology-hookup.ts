import { record, real } from './loose.js';
import { fromNm, toNm } from './technology-examination.js';
import type { Examination } from './technology-examination.js';
import { padOf } from './technology-terminals.js';
import { all, quoted, shown } from './words.js';

const places = {
  tab_um: 'how far the tabs stand out, and how tall they are',
  tabLevel_um: 'how far above the middle the left tab stands',
  strip_um: 'the height of the landing strip along the lower edge',
} as const;

/** What a style of hookup asks of the technology: where its units are met, and what may lie under them. */
export function checkHookup(examination: Examination): void {
  const { technology, report, at } = examination;
  const { hookup } = technology;
  if (hookup !== 'channel' && hookup !== 'under-plate') return;
  const unit = record(technology.unit);
  if (unit.kind === 'parallel-plate' || unit.kind === 'framed-fingers') {
    const needed = hookup === 'channel' ? ['tab_um', 'tabLevel_um'] : ['strip_um'];
    for (const [key, what] of Object.entries(places)) {
      const wanted = needed.includes(key);
      if (wanted && unit[key] === undefined)
        report.add(`${at}/unit`, `no key "${key}" for the hookup "${hookup}"`, `"${key}": ${what}`);
      if (!wanted && unit[key] !== undefined)
        report.add(`${at}/unit/${key}`, `"${key}" for the hookup "${hookup}"`, `${all(needed)} in its place`, 'key');
    }
  }
  if (hookup === 'under-plate') checkUnderPlate(examination);
}

function checkUnderPlate(examination: Examination): void {
  const { technology, report, roles, at } = examination;
  const unit = record(technology.unit);
  if (technology.wiresUnderPlate === false)
    report.add(`${at}/wiresUnderPlate`, 'false', 'true: the trunks of the hookup "under-plate" run below the plates');
  const [trunk, stub, plate] = (['trunk', 'stub', 'bottomPlate'] as const).map((role) => examination.role(role));
  const landing = padOf(examination.via(trunk, stub));
  const strip = toNm(real(unit.strip_um));
  if (unit.kind === 'parallel-plate') {
    const enclosure = toNm(real(unit.plateEnclosure_um));
    if (technology.viaUnderTopPlate === true || [landing, strip, enclosure].includes(undefined)) return;
    const free = strip! + enclosure!;
    if (free < landing!)
      report.add(
        `${at}/unit/strip_um`,
        `${fromNm(free)} from the top plate's edge to the strip's`,
        `${fromNm(landing!)} or more, so that a via to a trunk fits beside the top plate: ${fromNm(strip! + landing! - free)} or more`,
      );
  }
  if (unit.kind !== 'framed-fingers') return;
  if (unit.shield === true)
    report.add(`${at}/unit/shield`, 'true', "false or none: trunks are on the shield's metal under plates");
  if (technology.viaUnderTopPlate === false)
    report.add(`${at}/viaUnderTopPlate`, 'false', 'true: the vias to the trunks lie below the frame');
  if (stub !== undefined && stub.name === plate?.name) {
    report.add(
      `${at}/roles/stub`,
      shown(roles.stub),
      `a metal between ${quoted(trunk?.name ?? '')} and ${quoted(stub.name)}: a plate on it shields the comb from the trunks`,
    );
    return;
  }
  const bus = examination.role('bus');
  if (stub !== undefined && bus !== undefined && bus.name !== stub.name)
    report.add(`${at}/roles/bus`, shown(roles.bus), `${quoted(stub.name)}, the metal of stub`);
  if (stub === undefined || plate === undefined) return;
  const heights = [trunk, stub, plate].map((layer) => real(layer?.entry.height_um));
  const [low, middle, high] = heights;
  if (middle !== undefined && high !== undefined && (middle >= high || (low !== undefined && middle <= low)))
    report.add(`${at}/roles/stub`, shown(roles.stub), 'a metal between those of trunk and bottomPlate');
  const via = examination.via(stub, plate);
  if (via === undefined) {
    const found = `no via between ${quoted(stub.name)} and ${quoted(plate.name)}`;
    report.add(`${at}/vias`, found, 'one: it joins the frame to the plate under it');
    return;
  }
  const pad = padOf(via);
  const wall = toNm(real(unit.frameWidth_um));
  if (pad !== undefined && wall !== undefined && strip !== undefined && wall + strip < pad)
    report.add(
      `${at}/unit/strip_um`,
      `${fromNm(wall + strip)} of strip and frame`,
      `${fromNm(pad)} or more, so that via ${quoted(via.name)} fits: a strip of ${fromNm(pad - wall)} or more`,
    );
}
