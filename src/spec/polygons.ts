import type { Structure } from '../core/layout.js';
import type { Capacitor } from './floorplan.js';
import type { Technology } from './technology.js';

/** The stream-format-compatible list of what is drawn. */
export interface Polygons {
  readonly format: 'steelyard/polygons';
  readonly version: 1;
  readonly databaseUnit_m: number;
  readonly userUnit_m: number;
  readonly topStructure: string;
  readonly technology: Technology;
  readonly capacitors: readonly Capacitor[];
  readonly structures: readonly Structure[];
}
