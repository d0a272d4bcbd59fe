import pc from 'picocolors';
import { brief, shapeInWords } from '../index.js';
import type { Capacitor, Drawn, Finding, Floorplan, Metrics } from '../index.js';
import { shown } from './fault.js';
import type { Io } from './io.js';
import { neighbourhoodInWords } from './neighbourhood.js';

type Line = readonly [label: string, text: string, colour?: (text: string) => string];

/** Texts as lines, each with its end. */
export const lines = (texts: readonly string[]): string => texts.map((text) => `${text}\n`).join('');

/** Labels and texts as lines, the texts below each other. */
export const labelled = (rows: readonly (readonly [label: string, text: string])[]): readonly string[] =>
  rows.map(([label, text]) => `${label.padEnd(14)}${text}`);

const counted = (count: number, noun: string): string => `${count} ${noun}${count === 1 ? '' : 's'}`;

const lsb = (figures: { readonly inl_lsb: number; readonly dnl_lsb?: number | undefined }): string =>
  `INL ${brief(figures.inl_lsb)} LSB` + (figures.dnl_lsb === undefined ? '' : `, DNL ${brief(figures.dnl_lsb)} LSB`);

// Rows that would fill more than a screen are better looked at in the picture.
const mostRows = 40;
const signs = '0123456789abcdefghijklmnopqrstuvwxyz';

/**
 * The core drawn in characters, bit k as the k-th digit or letter, the termination as T, fill as a dot; top row first.
 * Empty where it is larger than `columns` characters a line or a screen of lines.
 */
export function coreInCharacters(floorplan: Floorplan, columns: number): readonly string[] {
  const signOf = new Map<string, string>([['-', '.']]);
  let next = 0;
  for (const { name, role } of floorplan.capacitors) {
    const sign = role === 'termination' ? 'T' : signs[next++];
    if (sign === undefined) return [];
    signOf.set(name, sign);
  }
  const width = floorplan.core.columns;
  if (floorplan.core.rows > mostRows || width > columns) return [];
  const gap = 2 * width - 1 <= columns ? ' ' : '';
  return floorplan.cells.map((row) => row.map((name) => signOf.get(name) ?? '?').join(gap));
}

function gradientInWords(floorplan: Floorplan): string {
  const gradient = floorplan.array?.gradient ?? floorplan.technology?.gradient;
  if (gradient === undefined) return '';
  const parts: string[] = [];
  if (gradient.linear_ppm_per_um !== undefined) {
    const direction = gradient.direction_deg === undefined ? '' : ` at ${gradient.direction_deg} degrees`;
    parts.push(`${gradient.linear_ppm_per_um} ppm/um${direction}`);
  }
  const quadratic = gradient.quadratic_ppm_per_um2;
  if (typeof quadratic === 'number') parts.push(`${quadratic} ppm/um2`);
  else if (quadratic !== undefined) {
    parts.push(`xx ${quadratic.xx}, xy ${quadratic.xy}, yy ${quadratic.yy} ppm/um2`);
  }
  return parts.length === 0 ? '' : ` under ${parts.join(' and ')}`;
}

function gradientLines(floorplan: Floorplan, { gradient }: Metrics): readonly Line[] {
  const { first, second, own } = gradient;
  const lines: Line[] = [];
  if (own !== undefined) lines.push(['gradient', `${lsb(own)}${gradientInWords(floorplan)}`]);
  const scale = 'at 1 % to the farthest cell';
  const firstWorst =
    first.worstDirection_deg === undefined ? '' : `, worst at ${brief(first.worstDirection_deg)} degrees`;
  lines.push([
    'first order',
    first.inl_lsb === 0 && (first.dnl_lsb ?? 0) === 0
      ? 'exactly 0 in every direction'
      : `${lsb(first)} ${scale}${firstWorst}`,
  ]);
  const secondWorst = second.worstShape === undefined ? '' : `, worst under ${shapeInWords(second.worstShape)}`;
  lines.push(['second order', `${lsb(second)} ${scale}${secondWorst}`]);
  const bound = second.lowerBound_inl_lsb;
  if (bound !== undefined) {
    const ratio = bound > 0 ? `; reached ${(second.inl_lsb / bound).toFixed(3)} times that` : '';
    lines.push(['lower bound', `INL ${brief(bound)} LSB for any placement without first order${ratio}`]);
  }
  return lines;
}

function mismatchLines({ mismatch }: Metrics): readonly Line[] {
  if (mismatch?.inlSigma_lsb === undefined) return [];
  const { inlSigma_lsb: inl_lsb, dnlSigma_lsb: dnl_lsb, placement } = mismatch;
  const perUnit = [placement.inlSigma_perUnitSigma, placement.dnlSigma_perUnitSigma].flatMap((v) => v ?? []).map(brief);
  const alone = `the placement alone: ${perUnit.join(' and ')} times a unit's sigma`;
  return [['mismatch', `sigma ${lsb({ inl_lsb, dnl_lsb })} at the worst code; ${alone}`]];
}

/** A share of nearly all in as many digits as tell it from all. */
function percent(share: number): string {
  const lost = 1 - share;
  const digits = lost > 0 && lost < 0.01 ? Math.min(12, 1 - Math.floor(Math.log10(lost))) : 2;
  return `${(100 * share).toFixed(Math.max(2, digits - 1))} %`;
}

function yieldLines(floorplan: Floorplan, { yield: found }: Metrics): readonly Line[] {
  if (found === undefined) return [];
  const { share, low, high, samples, method, randomOnly, withoutGradient, withoutWiring } = found;
  const { inl_lsb, dnl_lsb } = floorplan.array?.limits ?? {};
  const limits = [
    ...(inl_lsb === undefined ? [] : [`INL ${brief(inl_lsb)}`]),
    ...(dnl_lsb === undefined ? [] : [`DNL ${brief(dnl_lsb)}`]),
  ].join(' and ');
  const how = method === 'tail' ? 'from the tail' : `${samples} arrays drawn`;
  const without = withoutWiring === undefined ? '' : `, ${percent(withoutWiring)} without the wires`;
  return [
    ['yield', `${percent(share)} within ${limits} LSB; 95 % interval ${percent(low)} to ${percent(high)}, ${how}`],
    ['', `${percent(withoutGradient)} without the gradient${without}, ${percent(randomOnly)} with mismatch alone`],
  ];
}

const classes = {
  'zero-first-order': 'all placements without first order',
  'point-reflected': 'all point-reflected placements',
};

function placementLine({ placement }: Floorplan): readonly Line[] {
  if (placement === undefined) return [];
  const { method, status, proof, work } = placement;
  if (status === undefined || work === undefined) return [['placement', method]];
  const trials = `${method}, ${work} trials`;
  if (status === 'proved' && proof !== undefined) {
    return [['placement', `proved least ${proof.figure} of ${classes[proof.class]} (${trials})`]];
  }
  const words = { proved: 'proved', 'effort-spent': 'effort spent, not proved least', interrupted: 'interrupted' };
  return [['placement', `${words[status]} (${trials})`]];
}

function hookupLines({ technology }: Floorplan, { hookup, area_um2 }: Metrics): readonly Line[] {
  const places = technology?.hookup === 'under-plate' ? ' below a column at most' : ' a channel';
  const counts: readonly (readonly [number | undefined, string, string?])[] = [
    [hookup.trunks, 'trunk'],
    [hookup.tracksPerChannel, 'track', places],
    [hookup.crossovers, 'crossover'],
    [hookup.bends, 'bend'],
    [hookup.vias, 'via'],
  ];
  const parts = counts.flatMap(([count, noun, rest = '']) =>
    count === undefined ? [] : [`${counted(count, noun)}${rest}`],
  );
  if (hookup.wireLength_um !== undefined) parts.push(`${brief(hookup.wireLength_um)} um of wire`);
  if (parts.length === 0) parts.push(`${counted(hookup.columnNets, 'pair')} of a column and a bit in it`);
  const lines: Line[] = [['hookup', `${parts.join(', ')}${hookupJudged(hookup)}`]];
  if (area_um2 !== undefined) lines.push(['area', `${brief(area_um2)} um2, rings and buses included`]);
  return lines;
}

function couplingLines({ metrics: { parasitic }, parasitics }: Drawn): readonly Line[] {
  if (parasitic === undefined || parasitics === undefined) return [];
  const { attenuation_percent, topToGround_fF } = parasitic;
  return [
    ['coupling', `${lsb(parasitic)} as drawn; the INL to within ${brief(parasitics.inlError_lsb)} LSB`],
    [
      'TOP',
      `${brief(topToGround_fF)} fF to ground: ${brief(attenuation_percent)} % less signal, with what hangs on it`,
    ],
  ];
}

/** The bit that is last to settle, or, without a drive, the one whose wires are slowest. */
function delayLines({ parasitic }: Metrics): readonly Line[] {
  const timed = (parasitic?.bits ?? []).flatMap(({ name, elmore_ps, settling_ps }) =>
    elmore_ps === undefined ? [] : [{ name, elmore_ps, settling_ps, last: settling_ps ?? elmore_ps }],
  );
  if (timed.length === 0) return [];
  const { name, elmore_ps, settling_ps } = timed.reduce((a, b) => (b.last > a.last ? b : a));
  return settling_ps === undefined
    ? [['delay', `Elmore ${brief(elmore_ps)} ps through the wires of ${name}, the slowest, with TOP held`]]
    : [
        [
          'settling',
          `${brief(settling_ps)} ps for ${name}, the slowest, Elmore delay ${brief(elmore_ps)} ps with TOP held`,
        ],
      ];
}

function totalLines({ total }: Metrics): readonly Line[] {
  if (total === undefined) return [];
  const figures = { inl_lsb: total.inl3Sigma_lsb, dnl_lsb: total.dnl3Sigma_lsb };
  return [['together', `${lsb(figures)} at the worst code: gradient, wires and three sigma of mismatch`]];
}

function hookupJudged({ status, lowerBound, tracksPerChannel }: Metrics['hookup']): string {
  if (status === 'proved') return '; the best on as many tracks, proved';
  if (lowerBound === undefined) return '';
  const tracks =
    lowerBound.tracksPerChannel === tracksPerChannel ? '' : `${counted(lowerBound.tracksPerChannel, 'track')}, `;
  return `; no hookup has fewer than ${tracks}${counted(lowerBound.trunks, 'trunk')}, ${counted(lowerBound.crossovers, 'crossover')}`;
}

/** "10 bits" for binary weights, else the weights. */
export function arrayInWords(capacitors: readonly Capacitor[]): string {
  const weights = capacitors.filter(({ role }) => role === 'bit').map(({ weight }) => weight);
  return weights.every((weight, bit) => weight === 2 ** bit)
    ? `${weights.length} bits`
    : `weights ${weights.join(' ')}`;
}

/** One finding a line: rule, layer, place, what was found against the limit, in words. */
export const findingLines = (findings: readonly Finding[]): readonly string[] => {
  const rows = findings.map(({ rule, layer, at_um: [x, y], text }) => [rule, layer, `${x}, ${y}`, text]);
  // There may be more of them than a call takes arguments.
  const widths = [0, 1, 2].map((column) => rows.reduce((most, row) => Math.max(most, row[column]?.length ?? 0), 0));
  return rows.map((row) => row.map((cell, column) => cell.padEnd(widths[column] ?? 0)).join('  '));
};

/** The summary of a finished run as lines of text, without line ends. */
export function summaryOf(
  drawn: Drawn,
  files: readonly string[],
  io: Pick<Io, 'columns' | 'colour'>,
): readonly string[] {
  const colours = pc.createColors(io.colour);
  const { floorplan, metrics, findings } = drawn;
  const { rows, columns, pitch_um } = metrics.core;
  const head = [
    metrics.name,
    arrayInWords(floorplan.capacitors),
    `${rows} rows x ${columns} columns`,
    `pitch ${pitch_um.join(' x ')} um`,
    ...(floorplan.technology === undefined ? [] : [floorplan.technology.name]),
  ].join(', ');
  const picture = coreInCharacters(floorplan, io.columns - 2);
  const lines: Line[] = [
    ...gradientLines(floorplan, metrics),
    ...mismatchLines(metrics),
    ...yieldLines(floorplan, metrics),
    ...placementLine(floorplan),
    ...hookupLines(floorplan, metrics),
    ...couplingLines(drawn),
    ...delayLines(metrics),
    ...totalLines(metrics),
  ];
  if (drawn.polygons !== undefined) {
    const { length } = findings;
    lines.push(length === 0 ? ['check', 'no findings'] : ['check', counted(length, 'finding'), colours.red]);
  }
  if (drawn.neighbourhood !== undefined) lines.push(['neighbourhood', neighbourhoodInWords(drawn.neighbourhood)]);
  for (const limit of drawn.missed) lines.push(['limit missed', limit, colours.red]);
  for (const note of drawn.notes) lines.push(['note', note]);
  for (const warning of drawn.warnings) lines.push(['warning', warning, colours.yellow]);
  files.forEach((file, index) => lines.push([index === 0 ? 'files' : '', file]));
  return [
    colours.bold(shown(head)),
    '',
    ...(picture.length === 0 ? [] : [...picture.map((row) => `  ${row}`), '']),
    ...lines.map(([label, text, colour = String]) => colour(`${label.padEnd(14)}${shown(text)}`)),
    ...findingLines(findings).map(shown),
  ];
}
