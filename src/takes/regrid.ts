import { type Hertz, hertz } from '../quantity/frequency.ts';
import { bandHolding, type OctaveBand, octaveBand } from '../quantity/octave-bands.ts';

/** One take's spectrum: frequencies ascending in hertz, levels in dB, standard uncertainties in dB (NaN where not given). */
export interface Spectrum {
  readonly frequency: readonly number[];
  readonly level: readonly number[];
  readonly uncertainty: readonly number[];
}

/** A spectrum on a new grid, with the number of grid points that had to stay empty inside the take's range, by reason. */
export interface Regridded extends Spectrum {
  readonly empty: number;
}

/**
 * Power mean of the readings in each whole band of 1/`fraction` octave.
 * A band counts as whole when the take reaches both of its edges to within half the spacing of its readings, so that
 * nothing is extrapolated; bands without a reading stay empty. The uncertainty takes the readings as independent:
 * u² = Σ (share of power)² u².
 * Source of the bands: IEC 61260-1:2014; of the uncertainty: JCGM 100:2008, equation 10.
 */
export function toOctaveBands(spectrum: Spectrum, fraction: number): Regridded {
  const { frequency, level, uncertainty } = spectrum;
  const result = emptySpectrum();
  const count = frequency.length;
  if (count === 0) return { ...result, empty: 0 };
  const reachDown = frequency[0]! / halfStep(frequency, 0);
  const reachUp = frequency[count - 1]! * halfStep(frequency, count - 2);
  let empty = 0;
  let i = 0;
  const last = bandHolding(hertz(frequency[count - 1]!), fraction).index;
  for (let index = bandHolding(hertz(frequency[0]!), fraction).index; index <= last; index++) {
    const band = octaveBand(index, fraction);
    const from = i;
    while (i < count && frequency[i]! < band.to) i++;
    if (from === i || !isWhole(band, reachDown, reachUp)) {
      empty++;
      continue;
    }
    const mean = bandMean(level, uncertainty, from, i);
    result.frequency.push(band.mid);
    result.level.push(mean.level);
    result.uncertainty.push(mean.uncertainty);
  }
  return { ...result, empty };
}

function isWhole(band: OctaveBand, reachDown: number, reachUp: number): boolean {
  const rounding = 1e-9;
  return reachDown <= band.from * (1 + rounding) && reachUp >= band.to * (1 - rounding);
}

// Half the ratio to the neighbour; a single reading reaches nowhere beyond itself.
function halfStep(frequency: readonly number[], at: number): number {
  return frequency.length < 2 ? 1 : Math.sqrt(frequency[at + 1]! / frequency[at]!);
}

function bandMean(level: readonly number[], uncertainty: readonly number[], from: number, to: number) {
  let top = Number.NEGATIVE_INFINITY;
  for (let i = from; i < to; i++) top = Math.max(top, level[i]!);
  let power = 0;
  let variance = 0;
  for (let i = from; i < to; i++) {
    const share = 10 ** ((level[i]! - top) / 10);
    power += share;
    variance += (share * uncertainty[i]!) ** 2;
  }
  return { level: top + 10 * Math.log10(power / (to - from)), uncertainty: Math.sqrt(variance) / power };
}

/** A gap wider than this many typical steps of the take is a hole: nothing is interpolated across it. Common practice, no source. */
const WIDEST_GAP_STEPS = 3;

/**
 * Level interpolated linearly over log frequency at 1000 · 10^(k / `points`) Hz; never beyond the take's ends, nor
 * across a hole in it. The uncertainty takes both neighbours as independent (JCGM 100:2008, equation 10).
 */
export function toPointsPerDecade(spectrum: Spectrum, points: number): Regridded {
  const { frequency, level, uncertainty } = spectrum;
  const result = emptySpectrum();
  const count = frequency.length;
  if (count === 0) return { ...result, empty: 0 };
  const widest = WIDEST_GAP_STEPS * Math.max(typicalStep(frequency), Math.LN10 / points);
  let empty = 0;
  let i = 0;
  const rounding = 1e-9;
  const first = Math.ceil(points * Math.log10(frequency[0]! / 1000) - rounding);
  const last = Math.floor(points * Math.log10(frequency[count - 1]! / 1000) + rounding);
  for (let k = first; k <= last; k++) {
    const target = decadePoint(k, points);
    while (i + 1 < count && frequency[i + 1]! <= target * (1 + rounding)) i++;
    const atReading = Math.abs(frequency[i]! - target) <= rounding * target;
    if (!atReading && (i + 1 >= count || Math.log(frequency[i + 1]! / frequency[i]!) > widest)) {
      empty++;
      continue;
    }
    const t = atReading ? 0 : Math.log(target / frequency[i]!) / Math.log(frequency[i + 1]! / frequency[i]!);
    const next = atReading ? i : i + 1;
    result.frequency.push(target);
    result.level.push((1 - t) * level[i]! + t * level[next]!);
    result.uncertainty.push(Math.hypot((1 - t) * uncertainty[i]!, t * uncertainty[next]!));
  }
  return { ...result, empty };
}

/** Grid point k of `points` per decade. */
export function decadePoint(k: number, points: number): Hertz {
  return hertz(1000 * 10 ** (k / points));
}

function typicalStep(frequency: readonly number[]): number {
  const steps = frequency.slice(1).map((value, i) => Math.log(value / frequency[i]!));
  steps.sort((a, b) => a - b);
  return steps[Math.floor(steps.length / 2)] ?? 0;
}

function emptySpectrum(): { frequency: number[]; level: number[]; uncertainty: number[] } {
  return { frequency: [], level: [], uncertainty: [] };
}
