/** Looks into parsed JSON of any shape: what is not there or of another type is empty, so that rules can go on to the next problem. */
export const record = (value: unknown): Readonly<Record<string, unknown>> =>
  typeof value === 'object' && value !== null && !Array.isArray(value) ? (value as Record<string, unknown>) : {};
export const items = (value: unknown): readonly unknown[] => (Array.isArray(value) ? (value as unknown[]) : []);
export const word = (value: unknown): string | undefined => (typeof value === 'string' ? value : undefined);
export const real = (value: unknown): number | undefined =>
  typeof value === 'number' && Number.isFinite(value) ? value : undefined;
export const integer = (value: unknown): number | undefined =>
  typeof value === 'number' && Number.isSafeInteger(value) ? value : undefined;
