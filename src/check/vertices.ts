import type { Polygon } from '../core/layout.js';
import { placed, slantedEdges, streamKey } from '../core/flatten.js';
import type { Drawing } from './drawing.js';
import type { Finding } from './finding.js';
import { placeUm } from './finding.js';

/** Points off the grid, edges along neither axis, outlines around nothing: the only rules that look at outlines as they are drawn. */
export function checkVertices(drawing: Drawing): Finding[] {
  const { technology, flat } = drawing;
  const grid = technology.grid_nm;
  const names = new Map([...technology.layers, ...technology.vias].map((one) => [streamKey(one.stream), one.name]));
  const slanted = new Map<Polygon, readonly number[]>();
  const findings: Finding[] = [];
  const drawnShapes = new Set<number>();
  for (const layer of flat.layers.values()) for (const shape of layer.shape) drawnShapes.add(shape);
  flat.shapes.polygon.forEach((polygon, shape) => {
    const place = flat.shapes.place[shape];
    const layer = () => names.get(streamKey(polygon)) ?? streamKey(polygon);
    for (const point of polygon.xy) {
      const [x, y] = placed(place, point[0], point[1]);
      if (x % grid === 0 && y % grid === 0) continue;
      const text = `point ${x}, ${y} nm is not on the grid of ${grid} nm`;
      findings.push({ rule: 'grid', layer: layer(), at_um: placeUm(x, y), limit_um: grid / 1000, text });
    }
    let edges = slanted.get(polygon);
    if (!edges) slanted.set(polygon, (edges = slantedEdges(polygon.xy)));
    for (const edge of edges) {
      const [ax, ay] = placed(place, ...polygon.xy[edge]);
      const [bx, by] = placed(place, ...polygon.xy[(edge + 1) % polygon.xy.length]);
      const text = `edge from ${ax}, ${ay} to ${bx}, ${by} nm runs along neither axis`;
      findings.push({ rule: 'angle', layer: layer(), at_um: placeUm((ax + bx) / 2, (ay + by) / 2), text });
    }
    if (!drawnShapes.has(shape)) {
      const [x, y] = polygon.xy.length > 0 ? placed(place, ...polygon.xy[0]) : [place.dx, place.dy];
      findings.push({
        rule: 'width',
        layer: layer(),
        at_um: placeUm(x, y),
        found_um: 0,
        text: 'outline around nothing',
      });
    }
  });
  return findings;
}
