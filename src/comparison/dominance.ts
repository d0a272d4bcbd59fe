import { figure } from '../core/figure.js';
import { comparedFigures } from './figures.js';
import type { ComparedFigures } from './figures.js';

/** Whether `a` is worse than `b` in no figure that decides, and better in one or more: as files show them, to 12 digits. */
export function isBetter(a: ComparedFigures, b: ComparedFigures): boolean {
  let better = false;
  for (const { decides, of } of comparedFigures) {
    const [mine, other] = [of(a), of(b)];
    if (!decides || mine === undefined || other === undefined) continue;
    if (figure(mine) > figure(other)) return false;
    if (figure(mine) < figure(other)) better = true;
  }
  return better;
}
