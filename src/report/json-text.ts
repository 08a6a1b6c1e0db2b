/**
 * Numbers and text of JSON files. `null` means 'not available', and a word beside it says why; JSON knows no infinity, so
 * that an infinite figure is the word `inf`.
 */

/** A record as JSON text. @throws RangeError for a number that JSON cannot hold: it would become `null` without a word. */
export function jsonText(record: unknown): string {
  return `${JSON.stringify(record, refuseNonFinite, 2)}\n`;
}

/** A level in dB to a microdecibel. */
export function jsonLevel(value: number): number | null {
  if (Number.isNaN(value)) return null;
  const rounded = Number(value.toFixed(6));
  return rounded === 0 ? 0 : rounded;
}

/** A figure to `digits` significant digits. */
export function jsonFigure(value: number, digits = 6): number | 'inf' | null {
  if (Number.isNaN(value)) return null;
  if (!Number.isFinite(value)) return 'inf';
  const rounded = Number(value.toPrecision(digits));
  return rounded === 0 ? 0 : rounded;
}

/** `available`, or `not available` where the number beside it is `null`. */
export function availability(value: number): 'available' | 'not available' {
  return Number.isNaN(value) ? 'not available' : 'available';
}

function refuseNonFinite(key: string, value: unknown): unknown {
  if (typeof value === 'number' && !Number.isFinite(value))
    throw new RangeError(`${key} is ${value}, which JSON lacks`);
  return value;
}
