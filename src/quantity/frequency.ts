/** A frequency in hertz. */
export type Hertz = number & { readonly unit: 'Hz' };

export const hertz = (value: number): Hertz => value as Hertz;

/** From–to along frequency, both ends included, in hertz. */
export interface FrequencyRange {
  readonly from: Hertz;
  readonly to: Hertz;
}

/** The frequency units a header or an option may name, as factors to hertz. */
const HERTZ_PER_UNIT: ReadonlyMap<string, number> = new Map([
  ['hz', 1],
  ['khz', 1e3],
  ['mhz', 1e6],
]);

/** Hertz per named unit (`Hz`, `kHz`, `MHz`, in any case); undefined for another word. */
export function hertzPerUnit(unit: string): number | undefined {
  return HERTZ_PER_UNIT.get(unit.trim().toLowerCase());
}

/** Reads `20 kHz`, `0.5MHz` or `8000 Hz`; a number without a unit is undefined, since nobody can tell what it means. */
export function parseFrequency(text: string): Hertz | undefined {
  const match = /^\s*(\d+(?:\.\d+)?(?:[eE][+-]?\d+)?)\s*([a-zA-Z]+)\s*$/.exec(text);
  if (match === null) return undefined;
  const factor = hertzPerUnit(match[2] as string);
  const value = Number(match[1]);
  return factor === undefined || !(value > 0) ? undefined : hertz(value * factor);
}

/** Reads `2 kHz..80 kHz`; undefined when an end has no unit or the ends are the wrong way round. */
export function parseRange(text: string): FrequencyRange | undefined {
  const ends = text.split('..');
  if (ends.length !== 2) return undefined;
  const from = parseFrequency(ends[0] as string);
  const to = parseFrequency(ends[1] as string);
  return from === undefined || to === undefined || from >= to ? undefined : { from, to };
}

/** A frequency as a person writes it: `250 Hz`, `31.5 kHz`, `1.2 MHz`; at most `digits` significant digits. */
export function frequencyText(frequency: number, digits = 4): string {
  const [divisor, unit] = frequency >= 1e6 ? [1e6, 'MHz'] : frequency >= 1e3 ? [1e3, 'kHz'] : [1, 'Hz'];
  return `${Number((frequency / divisor).toPrecision(digits))} ${unit}`;
}
