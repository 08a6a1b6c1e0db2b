import { thirdOctaves } from '../estimate/third-octaves.ts';
import type { Model } from '../model/model.ts';
import { holmAdjusted } from '../numeric/multiple-testing.ts';
import { type AdditivityTest, tukeyAdditivity } from '../numeric/tukey-additivity.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { type EndSlope, endSlope } from './end-slope.ts';
import { type PairBand, pairBands, residualsIn, wholeRange } from './pair-bands.ts';
import { DEFAULT_RISK } from './thresholds.ts';

/** An end of the level range with its verdict. */
export interface JudgedEnd extends EndSlope {
  /** Corrected for the ends of the same kind (Holm 1979) and for the number of kinds: of bands, of bands together, of takes. */
  readonly pAdjusted: number;
  readonly isShown: boolean;
}

/**
 * `saturation`: the strongest are compressed; `noise floor`: the weakest are lifted; `not testable`: fewer than two degrees
 * of freedom, all at one level, or no scatter at all.
 */
export type LevelVerdict = 'saturation' | 'noise floor' | 'both' | 'none shown' | 'not testable';

/** What the level of a pair does to its misfit in one third-octave band. */
export interface BandMisfit {
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  /** Pairs with a complete take in the band, and degrees of freedom of their means over the additive model. */
  readonly pairs: number;
  readonly dof: number;
  /** Non-additivity over all levels of the band; p not corrected. */
  readonly additivity: AdditivityTest;
  /** Corrected for the number of bands (Holm 1979). */
  readonly additivityAdjusted: number;
  readonly upper: JudgedEnd;
  readonly lower: JudgedEnd;
  readonly verdict: LevelVerdict;
}

export interface LevelMisfit {
  readonly bands: readonly BandMisfit[];
  /**
   * The ends of the level range of all bands together, from several levels on: what a recorder does depends on the level
   * alone, and in a single band only a few pairs may be strong or weak enough.
   */
  readonly together: readonly JudgedEnd[];
  /**
   * The ends of the range of whole takes, each as its mean over all frequencies: what overdrives a recorder may be the
   * whole of a broadband signal.
   */
  readonly takes: readonly JudgedEnd[];
  /** Of all ends. */
  readonly verdict: LevelVerdict;
}

export interface LevelMisfitOptions {
  /** Takes to leave out; none where absent, since a strong pair that is compressed may have been flagged for it. */
  readonly without?: ReadonlySet<number>;
  /** Chance that a set without level-dependent misfit shows any; `DEFAULT_RISK` where absent. */
  readonly risk?: number;
}

/** Part of the pairs that makes an end of a band. */
const BAND_END = 1 / 3;
/** Part of the pairs and bands that makes an end of all bands together, and part of the pairs for whole takes. */
const TOGETHER_ENDS = [1 / 3, 1 / 10, 1 / 30];
const TAKE_ENDS = [1 / 3, 1 / 10];

/**
 * Looks for misfit that depends on the level. Units of analysis are means over the takes of a pair and over the
 * frequencies of a third-octave band, so that neither repeats nor neighbouring frequencies count as independent.
 * Source: Tukey 1949 (see `tukeyAdditivity`) over all levels, one more term at each end (see `endSlope`).
 */
export function levelMisfit(set: TakeSet, model: Model, options: LevelMisfitOptions = {}): LevelMisfit {
  const { without = new Set<number>(), risk = DEFAULT_RISK } = options;
  const bands = pairBands(set, model, thirdOctaves(set.frequencies), without);
  const additivity = bands.map(additivityIn);
  const corrected = holmAdjusted(additivity.map(({ p }) => p));
  const bothEnds = (of: readonly PairBand[], part: number) => [
    endSlope(of, 'upper', part),
    endSlope(of, 'lower', part),
  ];
  const inBands = bands.flatMap((band) => bothEnds([band], BAND_END));
  // With a single band there is nothing to take together.
  const isSingle = bands.length < 2;
  const together = isSingle ? [] : TOGETHER_ENDS.flatMap((part) => bothEnds(bands, part));
  const range = isSingle ? [] : pairBands(set, model, wholeRange(set), without);
  const takes = isSingle ? [] : TAKE_ENDS.flatMap((part) => bothEnds(range, part));
  // Each kind of end has its part of the risk, so that many bands do not drown the few ends of whole takes.
  const kinds = [inBands, together, takes].filter((kind) => kind.length > 0);
  const ends = kinds.flatMap((kind) => judged(kind, kinds.length, risk));
  return {
    bands: bands.map(({ from, to, levels, dof }, b) => ({
      from,
      to,
      pairs: levels.length,
      dof,
      additivity: additivity[b]!,
      additivityAdjusted: corrected[b]!,
      upper: ends[2 * b]!,
      lower: ends[2 * b + 1]!,
      verdict: verdictOf(ends.slice(2 * b, 2 * b + 2)),
    })),
    together: ends.slice(inBands.length, inBands.length + together.length),
    takes: ends.slice(inBands.length + together.length),
    verdict: verdictOf(ends),
  };
}

function additivityIn(band: PairBand): AdditivityTest {
  return tukeyAdditivity(band, (response) => residualsIn(band, response));
}

/**
 * An end must stand at this risk when any one of its loudest pairs is left out. Not corrected for the number of ends, which
 * would hide half of the compressed takes; 5 % would call one pair in six that is 4 dB off in all bands a question of
 * level, where 1 % calls one in twenty (seen in simulation: 8 units, all pairs, third-octaves over five octaves).
 */
const WITHOUT_PAIR_RISK = 0.01;

function judged(ends: readonly EndSlope[], kinds: number, risk: number): JudgedEnd[] {
  const adjusted = holmAdjusted(ends.map(({ pValue }) => pValue)).map((p) => Math.min(1, kinds * p));
  return ends.map((end, k) => ({
    ...end,
    pAdjusted: adjusted[k]!,
    isShown: adjusted[k]! <= risk && end.pWithoutPair <= WITHOUT_PAIR_RISK,
  }));
}

function verdictOf(ends: readonly JudgedEnd[]): LevelVerdict {
  const shown = new Set(ends.filter(({ isShown }) => isShown).map(({ end }) => end));
  if (shown.size === 2) return 'both';
  if (shown.has('upper')) return 'saturation';
  if (shown.has('lower')) return 'noise floor';
  return ends.every(({ pValue }) => Number.isNaN(pValue)) ? 'not testable' : 'none shown';
}
