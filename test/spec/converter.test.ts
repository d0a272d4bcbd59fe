import { describe, expect, it } from 'vitest';
import { converterOptions, resolveConverter } from '../../src/spec/converter-options.js';
import { tableMarkdown } from '../../src/spec/option-table.js';
import { parseConverter } from '../../src/spec/parse-converter.js';
import { schema } from '../../src/spec/schema.js';
import { linesOf, valueOf } from './kiln4.js';

const text = (keys: object): string => JSON.stringify({ format: 'steelyard/converter', version: 1, ...keys });
const problems = (keys: object): string[] => linesOf(parseConverter(text(keys), 'c'));

describe('a converter file', () => {
  it('may say nothing, or everything', () => {
    expect(problems({})).toEqual([]);
    const all = {
      ...{ bits: 12, fullScale_Vpp: 1.2, differential: true, sampling: 'top-plate', switching: 'vcmBased' },
      ...{ temperature_K: 358, sampleRate_MHz: 20, thermalToQuantization: 0.3, comparatorNoise_uV: 90 },
      ...{ comparatorOffset_uV: -400, drive: { switch_ohm: [900, 500], reference_ohm: 3 }, topLoad_fF: 40 },
      mismatch: { coefficient_percent_um: 0.7, of: 'pair' },
      ...{ technology: 'mine.technology.json', limits: { inl_lsb: 1, dnl_lsb: 0.5, yield: 0.998 } },
      ...{ samples: 4096, seed: 7 },
    };
    expect(problems(all)).toEqual([]);
    expect(resolveConverter(valueOf(parseConverter(text(all), 'c')))).toEqual({
      format: 'steelyard/converter',
      version: 1,
      ...all,
    });
    expect(Object.keys(all).sort()).toEqual(converterOptions.map(({ key }) => key).sort());
  });

  it('has defaults for what it does not say, none of them for what a coefficient is of', () => {
    const { format: _format, version: _version, ...rest } = resolveConverter(valueOf(parseConverter(text({}), 'c')));
    expect(rest).toEqual({
      ...{ fullScale_Vpp: 1, differential: false, sampling: 'bottom-plate', switching: 'conventional' },
      ...{ temperature_K: 300, thermalToQuantization: 0.5, comparatorNoise_uV: 0, comparatorOffset_uV: 0 },
      ...{ topLoad_fF: 0, samples: 16384, seed: 1 },
    });
    expect(problems({ mismatch: { coefficient_percent_um: 0.7 } })).toEqual([
      '/mismatch | no key "of" | "of": "single" or "pair"',
    ]);
  });

  it('is refused with all its problems at once', () => {
    const wrong = { bits: 40, fullscale_Vpp: 1, sampling: 'bottom', samples: 1000, limits: { yield: 1 } };
    expect(problems({ ...wrong, switching: 'monotone', temperature_K: 0, drive: { switch_ohm: -1 } }).sort()).toEqual(
      [
        '/bits | 40 | a whole number from 2 to 15',
        '/fullscale_Vpp | unknown key "fullscale_Vpp" | "fullScale_Vpp", the nearest known key',
        '/sampling | "bottom" | "bottom-plate" or "top-plate"',
        '/samples | 1000 | a power of two: the spectrum of a record needs it',
        '/limits | "yield" alone | "inl_lsb", "dnl_lsb" or both beside it: what is counted',
        '/limits/yield | 1 | less than 1: no share of what is made is all of it',
        '/switching | "monotone" | "conventional", "splitMsb", "monotonic" or "vcmBased"',
        '/temperature_K | 0 | a number above 0',
        '/drive/switch_ohm | -1 | a number of 0 or more or a list of 0 to 20 numbers',
      ].sort(),
    );
  });

  it.each(['', '[]', '{"format": "steelyard/array"}', '{"format": "steelyard/converter", "version": 1, "bits": null}'])(
    'is not %s',
    (given) => {
      expect(parseConverter(given, 'c').ok).toBe(false);
    },
  );
});

describe('the table of converter keys', () => {
  it('is the schema: the same keys, and each documented', () => {
    const keys = converterOptions.map(({ key }) => key);
    expect(Object.keys(schema('converter').properties ?? {})).toEqual(['$schema', 'format', 'version', ...keys]);
    const rows = tableMarkdown(converterOptions).split('\n');
    for (const { key, help } of converterOptions)
      expect(rows.find((row) => row.startsWith(`| \`${key}\` |`))).toContain(help);
  });

  it('gives defaults that its own schema takes', () => {
    expect(linesOf(parseConverter(JSON.stringify(resolveConverter({ format: 'steelyard/converter', version: 1 })), 'c'))).toEqual([]); // prettier-ignore
  });
});
