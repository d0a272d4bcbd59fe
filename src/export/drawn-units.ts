import type { FlatDrawing } from '../core/flatten.js';
import { TOP, unitNet } from './drawn-shapes.js';

/** A unit capacitor as it is drawn. */
export interface DrawnUnit {
  /** From 1, in the order of the drawing. */
  readonly number: number;
  /** The capacitor that it is part of; undefined for a dummy. */
  readonly capacitor: string | undefined;
  /** Net of its top plate and of its bottom plate. */
  readonly top: string;
  readonly bottom: string;
}

/** Every unit that the drawing holds, in its order: row by row from the lower left corner of each array of units. */
export const drawnUnits = ({ cells }: FlatDrawing): DrawnUnit[] =>
  cells.map(({ name }, i) => ({
    number: i + 1,
    capacitor: name === '-' || name === '=' ? undefined : name,
    top: unitNet(TOP, name),
    bottom: unitNet('BOTTOM', name),
  }));
