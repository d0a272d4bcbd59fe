import { integer, items, real, record, word } from './loose.js';
import { fromNm, pairNm, toNm } from './technology-examination.js';
import type { Examination } from './technology-examination.js';
import { checkTerminal, padOf } from './technology-terminals.js';
import { quoted } from './words.js';

/** A named cell's outline and terminals: all that is known of it. */
export function checkNamedCell(examination: Examination): void {
  const { report, technology, roles } = examination;
  const at = `${examination.at}/unit`;
  const unit = record(technology.unit);
  const [low, high] = [0, 1].map((corner) => pairNm(items(unit.outline_um)[corner]));
  const grid = integer(technology.grid_nm) ?? 1;
  const within = [0, 1].map((axis) => {
    const [from, to] = [low[axis], high[axis]];
    if (from === undefined || to === undefined) return undefined;
    const pointer = `${at}/outline_um/1/${axis}`;
    if (from >= to) {
      report.add(pointer, fromNm(to), `more than ${fromNm(from)}: the upper right corner comes second`);
      return undefined;
    }
    if (from % grid === 0 && to % grid === 0 && (from + to) % (2 * grid) !== 0)
      report.add(
        pointer,
        `a middle at ${fromNm((from + to) / 2)}`,
        `one on the grid of ${fromNm(grid)}: the cell is placed by it`,
      );
    return [from, to] as const;
  });
  const least = (['trunk', 'bottomPlate'] as const).map(
    (role) => toNm(real(examination.role(role)?.entry.minWidth_um)) ?? 0,
  );
  const landing = Math.max(padOf(examination.via(examination.role('trunk'), examination.role('stub'))) ?? 0, ...least);
  checkTerminal(examination, 'bottom', within, landing / 2, 'within the outline');
  const toStraps =
    roles.topPlate === roles.strap
      ? undefined
      : examination.via(examination.role('topPlate'), examination.role('strap'));
  checkTerminal(examination, 'top', within, (padOf(toStraps) ?? 0) / 2, 'within the outline');
  const topLayer = word(roles.topPlate);
  if (technology.viaUnderTopPlate === false && topLayer !== undefined && topLayer === roles.strap)
    report.add(
      `${examination.at}/viaUnderTopPlate`,
      'false',
      `true: ${quoted(topLayer)} is the straps' metal too, and straps run over vias`,
    );
}
