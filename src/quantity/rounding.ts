/** More places than this no number is written with. */
const MOST_PLACES = 100;

/**
 * Decimal places at which a value is shown so that its uncertainty keeps two significant digits.
 * Source: JCGM 100:2008, 7.2.6 (two digits are enough for a standard uncertainty).
 * An absent, zero or infinite uncertainty gives `fallback` places.
 */
export function decimalPlaces(uncertainty: number, fallback = 2): number {
  if (!(uncertainty > 0) || !Number.isFinite(uncertainty)) return fallback;
  const leading = Math.floor(Math.log10(uncertainty));
  // 0.0996 rounds to 0.100, which would show three digits.
  const carries = Number((uncertainty / 10 ** leading).toPrecision(2)) >= 10 ? 1 : 0;
  return Math.min(Math.max(0, 1 - leading - carries), MOST_PLACES);
}

/** A value as a person reads it, rounded to its uncertainty; never `-0.0`. */
export function roundedText(value: number, uncertainty: number, fallback = 2): string {
  const places = decimalPlaces(uncertainty, fallback);
  const text = value.toFixed(places);
  return Number(text) === 0 ? (0).toFixed(places) : text;
}
