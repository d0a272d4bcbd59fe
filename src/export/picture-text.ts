/** Text for pictures: names from files made harmless, and widths estimated, for there is no font to measure with. */

export const fontFamily = 'DejaVu Sans, Verdana, Helvetica, Arial, sans-serif';

const LONGEST = 32;

// Controls, invisible spaces and joiners, everything that turns the direction of writing, halves of pairs, tags and noncharacters.
// Written out, for the classes of an engine grow with its Unicode version.
const unwanted =
  /[\u0000-\u001f\u007f-\u009f\u00ad\u061c\u180e\u200b-\u200f\u2028-\u202e\u2060-\u206f\ud800-\udfff\ufdd0-\ufdef\ufeff\ufff0-\uffff\u{e0000}-\u{e0fff}]/u;

/** The text on one line, without characters that cannot be seen, cut to a length that a legend can hold. */
export function plainText(text: string): string {
  let plain = '';
  let length = 0;
  for (const character of text) {
    const shown = /\s/.test(character) ? ' ' : unwanted.test(character) ? '' : character;
    if (shown === '' || (shown === ' ' && plain.endsWith(' '))) continue;
    if (++length > LONGEST) return `${plain.trim()}…`;
    plain += shown;
  }
  return plain.trim();
}

/** Estimated width in units of the font size, on the wide side. */
export function textWidth(text: string, size: number, bold = false): number {
  let width = 0;
  for (const character of text) {
    if (/[ ilIjft.,:;'|!()[\]·-]/.test(character)) width += 0.38;
    else if (/[mwMW@%—]/.test(character)) width += 0.98;
    else if (/[A-Z&]/.test(character)) width += 0.72;
    else if (character.charCodeAt(0) < 0x2000) width += 0.64;
    else width += 1.05;
  }
  return Math.ceil(width * size * (bold ? 1.1 : 1));
}

/** At most three decimals, no trailing zeros. */
export const decimal = (value: number): string => String(Math.round(value * 1000) / 1000);

export const counted = (count: number, one: string): string => `${count} ${one}${count === 1 ? '' : 's'}`;
