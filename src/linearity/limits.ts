import type { Limits } from '../spec/converter.js';
import type { TotalFigures } from './total.js';

/**
 * The limits that an array does not keep; a sentence each. Where a yield is asked for it decides; else all errors together at three sigma do.
 * @param share found, of a yield
 */
export function missedLimits(
  { inl_lsb, dnl_lsb, yield: wanted }: Limits,
  share: number,
  total: TotalFigures,
): readonly string[] {
  if (wanted !== undefined)
    return share < wanted ? [`The yield is ${percent(share)}; the limit is ${percent(wanted)}.`] : [];
  const beyond = (what: string, found: number | undefined, limit: number | undefined): string[] =>
    found !== undefined && limit !== undefined && found > limit
      ? [`${what} with all errors at three sigma is ${digits(found)} LSB; the limit is ${digits(limit)} LSB.`]
      : [];
  return [...beyond('INL', total.inl3Sigma_lsb, inl_lsb), ...beyond('DNL', total.dnl3Sigma_lsb, dnl_lsb)];
}

const digits = (value: number): number => Number(value.toPrecision(4));
const percent = (share: number): string => `${digits(100 * share)} %`;
