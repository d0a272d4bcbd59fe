import { bitsOf } from '../linearity/expected-units.js';
import type { Covariances } from '../linearity/mismatch.js';
import { sigmaCurves } from '../linearity/sigma-curves.js';
import type { Floorplan } from '../spec/floorplan.js';
import { figure } from '../core/figure.js';
import { drawChart } from './chart.js';
import { bitColours } from './palette.js';
import { counted, plainText } from './picture-text.js';

const curvesOf = ({ capacitors }: Floorplan, covariances: Covariances) =>
  sigmaCurves(
    bitsOf(capacitors).map(({ weight }) => weight),
    covariances,
  );

/** Sigma of INL and DNL code by code as CSV; the step to the first code is empty. */
export function writeMismatchCsv(floorplan: Floorplan, covariances: Covariances): string {
  const { level, inl, inlLeastSquares, dnl } = curvesOf(floorplan, covariances);
  const text = (value: number): string => (Number.isFinite(value) ? String(figure(value)) : '');
  const rows = Array.from(level, (code, i) => [code, text(inl[i]), text(inlLeastSquares[i]), text(dnl[i])].join(','));
  return ['code,inlSigma_lsb,inlSigmaLeastSquares_lsb,dnlSigma_lsb', ...rows, ''].join('\n');
}

/** The same as a picture. @returns an SVG file; same floorplan, same bytes. */
export function drawMismatchSvg(floorplan: Floorplan, covariances: Covariances): Promise<string> {
  const { level, inl, inlLeastSquares, dnl } = curvesOf(floorplan, covariances);
  const most = [inl, inlLeastSquares, dnl].reduce(
    (all, values) => values.reduce((largest, value) => (value > largest ? value : largest), all),
    0,
  );
  const largest = (values: Float64Array) =>
    `${Number(values.reduce((a, b) => (b > a ? b : a), 0).toPrecision(4))} LSB at most`;
  const bits = floorplan.capacitors.filter(({ role }) => role === 'bit').length;
  const name = plainText(floorplan.name ?? '') || 'array';
  return drawChart({
    title: `${name}: random mismatch`,
    subtitle: `sigma of every code in LSB · ${counted(bits, 'bit')}`,
    description: 'Sigma of DNL and of INL against the code, from the line through both ends and from least squares.',
    x: { label: 'code', from: 0, to: Math.max(1, level[level.length - 1]) },
    y: { label: 'sigma, LSB', from: 0, to: most > 0 ? most * 1.08 : 1 },
    curves: [
      { name: 'DNL', note: largest(dnl), colour: bitColours[2], kind: 'bars', x: level, y: dnl },
      { name: 'INL, end points', note: largest(inl), colour: bitColours[3], kind: 'line', x: level, y: inl },
      {
        name: 'INL, least squares',
        note: largest(inlLeastSquares),
        colour: bitColours[1],
        kind: 'dashes',
        x: level,
        y: inlLeastSquares,
      },
    ],
  });
}
