import { comparedFigures } from './figures.js';
import type { ComparedFigure, ComparedFigures } from './figures.js';
import { brief, compact, shapeInWords } from './wording.js';

type Pair = readonly [better: string, worse: string];

const listed = (words: readonly string[]): string =>
  words.length < 2 ? (words[0] ?? '') : `${words.slice(0, -1).join(', ')} and ${words[words.length - 1]}`;

/** What hurts a floorplan most, for the figures that have such a thing. */
function causeOf({ key }: ComparedFigure, { gradient: { first, second } }: ComparedFigures): string {
  const on = (code: readonly string[] | undefined): string => (code === undefined ? '' : ` with ${listed(code)} on`);
  if (key === 'gradient.first.inl_lsb_per_ppm_per_um' && first.worstDirection_deg !== undefined)
    return `, worst along ${brief(first.worstDirection_deg)} degrees${on(first.worstCode)}`;
  if (key === 'gradient.second.inl_lsb_per_ppm_per_um2' && second.worstShape !== undefined)
    return `, worst under ${shapeInWords(second.worstShape)}${on(second.worstCode)}`;
  return '';
}

/** The figures that decide and in which `a` is below `b`. */
const ahead = (a: ComparedFigures, b: ComparedFigures): ComparedFigure[] =>
  comparedFigures.filter(({ decides, of }) => decides && (of(a) ?? NaN) < (of(b) ?? NaN));

function because(figure: ComparedFigure, a: ComparedFigures, b: ComparedFigures): string {
  const [mine, other] = [figure.of(a) ?? NaN, figure.of(b) ?? NaN].map(compact);
  const unit = figure.unit === '' ? '' : ` ${figure.unit}`;
  return `${figure.label} ${mine} against ${other}${unit}${causeOf(figure, b)}`;
}

/**
 * One sentence for every pair of a floorplan and one that it dominates, those left out that follow from two others; then what sets
 * apart those that none dominates.
 */
export function sentencesOn(floorplans: readonly ComparedFigures[], dominates: readonly Pair[]): string[] {
  const named = new Map(floorplans.map((each) => [each.name, each]));
  const isPair = new Set(dominates.map((pair) => pair.join(' > ')));
  const direct = dominates.filter(
    ([a, b]) => !floorplans.some(({ name }) => isPair.has(`${a} > ${name}`) && isPair.has(`${name} > ${b}`)),
  );
  const sentences = direct.flatMap(([better, worse]) => {
    const [a, b] = [named.get(better), named.get(worse)];
    if (a === undefined || b === undefined) return [];
    const reasons = ahead(a, b).map((figure) => because(figure, a, b));
    return [`${better} dominates ${worse}: ${reasons.join('; ')}.`];
  });
  const first = floorplans.filter(({ name }) => !dominates.some(([, worse]) => worse === name));
  if (floorplans.length < 2) return sentences;
  // The one that is left is above all others: who is dominated at all is so by one that is not.
  if (first.length === 1)
    return floorplans.length > 2 ? [...sentences, `${first[0].name} dominates all others.`] : sentences;
  const strengths = first.map((a) => {
    const best = comparedFigures.filter(
      (figure) =>
        figure.decides &&
        first.some((b) => ahead(a, b).includes(figure)) &&
        !first.some((b) => ahead(b, a).includes(figure)),
    );
    return best.length === 0
      ? `${a.name} leads in nothing and is behind each of them somewhere else`
      : `${a.name} has the least ${listed(best.map(({ label }) => label))}`;
  });
  const differ = first.some((a) => first.some((b) => ahead(a, b).length > 0));
  const names = listed(first.map(({ name }) => name));
  const none = first.length === 2 ? `Neither of ${names} dominates the other` : `None of ${names} dominates another`;
  return [
    ...sentences,
    differ ? `${none}: ${strengths.join('; ')}.` : `${none}: they are equal in every figure that decides.`,
  ];
}
