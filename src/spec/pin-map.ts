/** Pin names of one's own for the files that other programs read: stream file, netlists, abstract, pictures. */
export interface PinMap {
  readonly format: 'steelyard/pins';
  readonly version: 1;
  readonly pins: readonly { readonly pin: string; readonly name: string }[];
}

/** What every one of those files can hold. */
export const pinName = {
  pattern: '^[A-Za-z_][A-Za-z0-9_]{0,30}(\\[[0-9]{1,5}\\]|<[0-9]{1,5}>)?$',
  words: 'a letter or _, then letters, digits or _, 31 at most; then perhaps an index as [3] or <3>',
};

/** Netlists make no difference between capitals and small letters. */
export const foldCase = (name: string): string => name.toLowerCase();

/** Some circuit simulators take these words for their own node 0. */
export const isNodeZero = (name: string): boolean => /^(gnd|ground)$/i.test(name);

/** The name that a pin bears: the map's, else its own. */
export function pinNamer(map: PinMap | undefined): (pin: string) => string {
  const names = new Map(map?.pins.map(({ pin, name }) => [pin, name]));
  return (pin) => names.get(pin) ?? pin;
}
