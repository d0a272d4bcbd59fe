import { Square, TERMINATION } from './square.js';
import type { Position } from './square.js';

/** Of two places as far away: the higher one first, then the one further right. */
const higherThenRight = (a: Position, b: Position): number => b.y - a.y || b.x - a.x;

/** Centres of `count` equal rectangles that make up the square, in half-pitches: halved across, then along, and so on in turn. */
function centres(side: number, count: number): Position[] {
  let rows = 1;
  let columns = 1;
  while (rows * columns < count) {
    if (rows === columns) rows *= 2;
    else columns *= 2;
  }
  return Array.from({ length: count }, (_, i) => ({
    x: ((2 * (i % columns) + 1) * side) / columns - side,
    y: side - ((2 * Math.floor(i / columns) + 1) * side) / rows,
  }));
}

/**
 * A bit of u units cuts the core into u equal rectangles and puts a unit as near as it can to the centre of each, smaller bits first. The
 * termination and bit 0 take the two cells at the centre, the largest bit what is left over; every unit has its reflection.
 *
 * After C.-C. Huang, C.-L. Wey, J.-E. Chen, P.-W. Luo, "Performance-Driven Unit-Capacitor Placement of Successive-Approximation-Register
 * ADCs", ACM Transactions on Design Automation of Electronic Systems, 2015 (from memory).
 */
export function partitionCentred(bits: number): number[][] {
  const square = new Square(1 << (bits / 2));
  square.setPair({ x: 1, y: 1 }, 0, TERMINATION);
  const places = square.positions();
  for (let bit = 1; bit < bits - 1; bit++) {
    centres(square.side, 1 << bit)
      .filter(({ x, y }) => y > 0 || (y === 0 && x > 0))
      .sort((a, b) => a.x * a.x + a.y * a.y - (b.x * b.x + b.y * b.y) || higherThenRight(a, b))
      .forEach((centre) => square.setPair(nearestFree(square, places, centre), bit));
  }
  for (const place of places) if (square.isFree(place)) square.set(place, bits - 1);
  return square.rows();
}

function nearestFree(square: Square, places: readonly Position[], centre: Position): Position {
  let nearest = centre;
  let least = Infinity;
  for (const place of places) {
    if (!square.isFree(place)) continue;
    const [dx, dy] = [place.x - centre.x, place.y - centre.y];
    const distance = dx * dx + dy * dy;
    if (distance > least || (distance === least && higherThenRight(nearest, place) <= 0)) continue;
    [nearest, least] = [place, distance];
  }
  return nearest;
}
