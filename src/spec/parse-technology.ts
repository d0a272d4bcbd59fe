import type { Result } from '../core/problem.js';
import { real, record } from './loose.js';
import { read } from './read.js';
import type { Report } from './report.js';
import { Examination } from './technology-examination.js';
import { checkGround } from './technology-ground.js';
import {
  checkDevice,
  checkGrid,
  checkLayer,
  checkNames,
  checkPinLayers,
  checkRoles,
  checkVia,
} from './technology-rules.js';
import { checkHookup } from './technology-hookup.js';
import { checkUnit } from './technology-unit.js';
import type { Technology } from './technology.js';

/** What the shape of a technology does not say: names that refer, the grid, rules that contradict each other or the unit. */
export function checkTechnology(value: unknown, report: Report, at: string): void {
  const examination = new Examination(record(value), report, at);
  checkNames(examination);
  checkGrid(examination);
  for (const layer of examination.layers) checkLayer(examination, layer);
  for (const via of examination.vias) checkVia(examination, via);
  checkRoles(examination);
  checkPinLayers(examination);
  checkUnit(examination);
  checkHookup(examination);
  checkDevice(examination);
  checkGround(examination);
  const mismatch = record(examination.technology.mismatch);
  const correlated = real(mismatch.correlatedSigma_percent) ?? 0;
  if (correlated > 0 && mismatch.correlationLength_um === undefined) {
    report.add(`${at}/mismatch`, '"correlatedSigma_percent" without "correlationLength_um"', 'both or neither');
  }
}

/** Reads a technology template (`steelyard/technology`). */
export function parseTechnology(text: string, file: string): Result<Technology> {
  return read(
    'technology',
    { text, file },
    {
      refusals: () => [],
      check: (value, report) => checkTechnology(value, report, ''),
    },
  );
}
