/**
 * Text of numbers in tables for programs: always a decimal point, never grouping, never `NaN`, never `-0`.
 * An empty text means 'not available'.
 */

/** Decimal places of levels, in dB. A microdecibel is far below any bench, and above the rounding of the computation. */
const LEVEL_PLACES = 6;
/** Significant digits of uncertainties and other positive figures. */
const FIGURE_DIGITS = 6;
/** Significant digits of frequencies: unit conversion leaves the last bits of a double open (see `frequencyTable`). */
const FREQUENCY_DIGITS = 12;

/** A level or a difference of levels with a fixed number of decimals. @throws RangeError for an infinite value. */
export function levelCell(value: number, places: number = LEVEL_PLACES): string {
  if (Number.isNaN(value)) return '';
  if (!Number.isFinite(value)) throw new RangeError(`no text for the level ${value}`);
  const text = value.toFixed(places);
  // A small negative value leaves its sign on a row of zeros.
  return text.startsWith('-') && Number(text) === 0 ? text.slice(1) : text;
}

/** An uncertainty, a factor, degrees of freedom: six significant digits, trailing zeros left out; `inf` when infinite. */
export function figureCell(value: number): string {
  if (Number.isNaN(value)) return '';
  if (!Number.isFinite(value)) return value > 0 ? 'inf' : '-inf';
  const text = value.toPrecision(FIGURE_DIGITS);
  return text.includes('e') ? String(Number(text)) : withoutTrailingZeros(text);
}

/** A frequency in hertz, in its shortest form. */
export function frequencyCell(value: number): string {
  return String(roundedFrequency(value));
}

/** A frequency in hertz without the last bits that unit conversion leaves open. */
export function roundedFrequency(value: number): number {
  return Number(value.toPrecision(FREQUENCY_DIGITS));
}

/** A formatter that remembers its last value: along a take, most figures stay the same from frequency to frequency. */
export function rememberingLast(format: (value: number) => string): (value: number) => string {
  let last = Number.NaN;
  let text = format(last);
  return (value) => {
    if (value !== last) {
      last = value;
      text = format(value);
    }
    return text;
  };
}

// By hand, since a regular expression or a way through Number costs more than the formatting itself.
function withoutTrailingZeros(text: string): string {
  if (!text.includes('.')) return text === '-0' ? '0' : text;
  let end = text.length;
  while (text[end - 1] === '0') end--;
  if (text[end - 1] === '.') end--;
  const short = text.slice(0, end);
  return short === '-0' ? '0' : short;
}
