import { flatten, streamKey } from '../../src/core/flatten.js';
import type { Polygons } from '../../src/spec/polygons.js';

/** A body of one electrode, nm. */
interface Body {
  readonly x: readonly [number, number];
  readonly y: readonly [number, number];
  readonly z: readonly [number, number];
  readonly electrode: number;
}

const EPSILON0 = 8.8541878128e-3; // aF/nm
const nm = (um: number): number => Math.round(1000 * um);

/**
 * What each group of a drawing has to `TOP` (aF), from the field in space within a window of it, whose sides reflect: finite volumes in three
 * dimensions and conjugate gradients. It shares nothing with the extraction but the flattening: nets are those that the polygons are meant to
 * carry. Groups: "B0 wires", "B0 units", ... .
 * @param least cells beside an edge, nm
 */
export function spaceCoupling(
  p: Polygons,
  window: { readonly x: readonly [number, number]; readonly y: readonly [number, number] },
  least: number,
): ReadonlyMap<string, number> {
  const { technology: t } = p;
  const flat = flatten(p.structures, p.topStructure);
  const groups = ['substrate', 'TOP'];
  const bodies: Body[] = [];
  const thin: Omit<Body, 'electrode'>[] = [];
  const metals = t.layers.filter(({ kind }) => kind === 'metal' || kind === 'plate');
  const heights = new Map(metals.map((l) => [l.name, [nm(l.height_um!), nm(l.height_um! + l.thickness_um!)] as const]));
  const levels = [
    ...metals.map((l) => ({ stream: l.stream, z: heights.get(l.name)!, name: l.name })),
    ...t.vias.map((v) => ({
      stream: v.stream,
      z: [heights.get(v.lower)![1], heights.get(v.upper)![0]] as const,
      name: v.name,
    })),
  ];
  const density = t.dielectric.plateCapacitance_fF_per_um2;
  const isThin = t.unit.kind === 'parallel-plate' && density !== undefined;
  for (const { stream, z, name } of levels) {
    const boxes = flat.layers.get(streamKey(stream));
    for (let i = 0; i < (boxes?.x0.length ?? 0); i++) {
      const clip = (from: number, to: number, [low, high]: readonly [number, number]) =>
        [Math.max(from, low) - low, Math.min(to, high) - low] as const;
      const x = clip(boxes!.x0[i], boxes!.x1[i], window.x);
      const y = clip(boxes!.y0[i], boxes!.y1[i], window.y);
      if (x[0] >= x[1] || y[0] >= y[1]) continue;
      const meant = flat.shapes.polygon[boxes!.shape[i]].net!;
      const cell = boxes!.cell[i];
      const own = cell < 0 ? undefined : flat.cells[cell].name!;
      const bottom = own === '-' || own === '=' ? 'VSS' : own;
      const net = own === undefined ? meant : meant === 'TOP' ? (own === '-' ? 'VSS' : 'TOP') : bottom!;
      const group = net === 'TOP' || net === 'VSS' ? net : `${net} ${own === undefined ? 'wires' : 'units'}`;
      if (!groups.includes(group)) groups.push(group);
      bodies.push({ x, y, z, electrode: groups.indexOf(group) });
      if (isThin && name === t.roles.topPlate) thin.push({ x, y, z: [heights.get(t.roles.bottomPlate)![1], z[0]] });
    }
  }
  const highest = Math.max(...levels.map(({ z }) => z[1]));
  const gap = heights.get(t.roles.topPlate)![0] - heights.get(t.roles.bottomPlate)![1];
  const charge = solve(
    [window.x[1] - window.x[0], window.y[1] - window.y[0], 2 * highest],
    bodies,
    { permittivity: t.dielectric.relativePermittivity, thin, thinPermittivity: ((density ?? 0) * gap) / 8.8541878128 },
    groups.length,
    least,
  );
  return new Map(groups.map((group, e) => [group, charge[e]] as const).filter(([group]) => group !== 'TOP'));
}

interface Matter {
  readonly permittivity: number;
  readonly thin: readonly Omit<Body, 'electrode'>[];
  readonly thinPermittivity: number;
}

/** Charge of each electrode (aF, negative) with electrode 1 at 1 V and all others at 0, sign turned. */
function solve(
  size: readonly [number, number, number],
  bodies: readonly Body[],
  { permittivity, thin, thinPermittivity }: Matter,
  electrodes: number,
  least: number,
): Float64Array {
  const axes = (['x', 'y', 'z'] as const).map((axis, a) =>
    graded([...new Set([0, size[a], ...[...bodies, ...thin].flatMap((body) => body[axis])])], least, axis === 'z'),
  );
  const [nx, ny, nz] = axes.map(({ length }) => length);
  const n = nx * ny * nz;
  const [sx, sy] = [ny * nz, nz];
  const extent = ({ x, y, z }: Omit<Body, 'electrode'>) =>
    [x, y, z].map((range, a) => range.map((value) => axes[a].indexOf(value)));
  const electrode = new Int16Array(n).fill(-1);
  for (let node = 0; node < n; node += nz) electrode[node] = 0;
  for (const body of bodies) {
    const [[i0, i1], [j0, j1], [k0, k1]] = extent(body);
    for (let i = i0; i <= i1; i++)
      for (let j = j0; j <= j1; j++) electrode.fill(body.electrode, i * sx + j * sy + k0, i * sx + j * sy + k1 + 1);
  }
  const eps = new Float64Array(n).fill(permittivity);
  for (const body of thin) {
    const [[i0, i1], [j0, j1], [k0, k1]] = extent(body);
    for (let i = i0; i < i1; i++)
      for (let j = j0; j < j1; j++) eps.fill(thinPermittivity, i * sx + j * sy + k0, i * sx + j * sy + k1);
  }
  // A quarter of each cell belongs to each of its four edges along an axis.
  const g = [new Float64Array(n), new Float64Array(n), new Float64Array(n)];
  const step = [sx, sy, 1];
  for (let i = 0; i + 1 < nx; i++)
    for (let j = 0; j + 1 < ny; j++)
      for (let k = 0; k + 1 < nz; k++) {
        const node = i * sx + j * sy + k;
        const d = [axes[0][i + 1] - axes[0][i], axes[1][j + 1] - axes[1][j], axes[2][k + 1] - axes[2][k]];
        for (let a = 0; a < 3; a++) {
          const [b, c] = [(a + 1) % 3, (a + 2) % 3];
          const quarter = (EPSILON0 * eps[node] * d[b] * d[c]) / d[a] / 4;
          for (const p of [0, step[b]]) for (const q of [0, step[c]]) g[a][node + p + q] += quarter;
        }
      }
  const diagonal = new Float64Array(n);
  for (let a = 0; a < 3; a++)
    for (let node = 0; node < n; node++) {
      if (g[a][node] === 0) continue;
      diagonal[node] += g[a][node];
      diagonal[node + step[a]] += g[a][node];
    }
  const times = (v: Float64Array, out: Float64Array) => {
    for (let node = 0; node < n; node++) out[node] = diagonal[node] * v[node];
    for (let a = 0; a < 3; a++)
      for (let node = 0; node < n; node++) {
        const link = g[a][node];
        if (link === 0) continue;
        out[node] -= link * v[node + step[a]];
        out[node + step[a]] -= link * v[node];
      }
  };
  // Incomplete Cholesky without fill: (D + L) D^-1 (D + L'), D from the diagonal alone.
  const pivot = new Float64Array(n);
  const free = (node: number) => electrode[node] === -1;
  for (let node = 0; node < n; node++) {
    if (!free(node)) continue;
    let d = diagonal[node];
    for (let a = 0; a < 3; a++) {
      const before = node - step[a];
      if (before >= 0 && free(before)) d -= g[a][before] * g[a][before] * pivot[before];
    }
    pivot[node] = 1 / d;
  }
  const [v, r, z, s, q] = Array.from({ length: 5 }, () => new Float64Array(n));
  const precondition = () => {
    z.fill(0);
    for (let node = 0; node < n; node++) {
      if (!free(node)) continue;
      let sum = r[node];
      for (let a = 0; a < 3; a++) if (node >= step[a]) sum += g[a][node - step[a]] * z[node - step[a]];
      z[node] = sum * pivot[node];
    }
    for (let node = n - 1; node >= 0; node--) {
      if (!free(node)) continue;
      let sum = 0;
      for (let a = 0; a < 3; a++) if (g[a][node] > 0) sum += g[a][node] * z[node + step[a]];
      z[node] += sum * pivot[node];
    }
  };
  const dot = (a: Float64Array, b: Float64Array) => {
    let sum = 0;
    for (let node = 0; node < n; node++) sum += a[node] * b[node];
    return sum;
  };
  for (let node = 0; node < n; node++) if (electrode[node] === 1) v[node] = 1;
  times(v, r);
  for (let node = 0; node < n; node++) r[node] = free(node) ? -r[node] : 0;
  precondition();
  s.set(z);
  let rz = dot(r, z);
  for (const goal = 1e-18 * rz; rz > goal;) {
    times(s, q);
    for (let node = 0; node < n; node++) if (!free(node)) q[node] = 0;
    const alpha = rz / dot(s, q);
    for (let node = 0; node < n; node++) {
      v[node] += alpha * s[node];
      r[node] -= alpha * q[node];
    }
    precondition();
    const next = dot(r, z);
    for (let node = 0; node < n; node++) s[node] = z[node] + (next / rz) * s[node];
    rz = next;
  }
  times(v, q);
  const charge = new Float64Array(electrodes);
  for (let node = 0; node < n; node++) if (!free(node)) charge[electrode[node]] -= q[node];
  return charge;
}

/** Lines through all of `given`, with cells that double from `least` at each of them; at the open end only from below. */
function graded(given: number[], least: number, isOpen: boolean): number[] {
  const lines = given.sort((a, b) => a - b);
  const all = [lines[0]];
  for (let i = 1; i < lines.length; i++) {
    const [from, to] = [lines[i - 1], lines[i]];
    const reach = isOpen && i === lines.length - 1 ? to - from : (to - from) / 2;
    const rising: number[] = [];
    for (let size = least, at = 0; at < reach; size *= 1.7) rising.push((at = Math.min(reach, at + size)));
    all.push(...rising.slice(0, -1).map((at) => from + at));
    if (reach < to - from)
      all.push(
        (from + to) / 2,
        ...rising
          .slice(0, -1)
          .map((at) => to - at)
          .reverse(),
      );
    all.push(to);
  }
  return all;
}
