import { InputError, parseArray } from '../index.js';

/** A pitch given on the command line, judged by the rules of an array file. @param otherwise what might stand there instead, in words. */
export function pitchOf(text: string, otherwise = ''): readonly [number, number] {
  const pitch_um = text.split(',').map((part) => (/^\d{1,15}(\.\d{1,3})?$/.test(part) ? Number(part) : part));
  const whole = { format: 'steelyard/array', version: 1, bits: 8, core: { rows: 1, columns: 1, pitch_um } };
  const parsed = parseArray(JSON.stringify(whole), '');
  const pitch = parsed.ok ? parsed.value.core?.pitch_um : undefined;
  if (pitch !== undefined) return pitch;
  const wanted = parsed.ok ? '' : (parsed.issues[0]?.wanted ?? '');
  throw new InputError([
    {
      pointer: '--pitch',
      found: JSON.stringify(text),
      wanted: `${otherwise}X,Y in micrometres, such as 7.2,5.7: ${wanted}`,
    },
  ]);
}
