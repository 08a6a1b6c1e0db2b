import type { Model } from '../model/model.ts';
import { testReciprocity } from '../model/reciprocity.ts';
import { holmAdjusted } from '../numeric/multiple-testing.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { DEFAULT_RISK } from './thresholds.ts';

/** Whether the two directions of pairs agree in one third-octave band. */
export interface ReciprocityBand {
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  /** Root mean square of level(a>b) − level(b>a) over the pairs, in dB; NaN where no pair has both. */
  readonly rmsDifference: number;
  /** Unit terms of the difference against what they leave; NaN where pairs taken both ways close no chain, as the p values are. */
  readonly f: number;
  readonly unitDof: number;
  readonly restDof: number;
  readonly pValue: number;
  /** Corrected for the number of bands (Holm 1979). */
  readonly pAdjusted: number;
  /** `emit and receive differ`: unit terms explain the difference; `not shown`: they do not. */
  readonly verdict: 'not shown' | 'emit and receive differ' | 'not testable';
}

export interface ReciprocityFindings {
  /** Pairs taken both ways; of these, pairs of which only takes in different seatings could be compared. */
  readonly pairs: number;
  readonly differentSeatings: number;
  /** Ascending; empty where no pair was taken both ways. */
  readonly bands: readonly ReciprocityBand[];
  /** The model in use holds emit and receive of a unit to be one, and some band shows that they are not. */
  readonly speaksAgainstModel: boolean;
}

/** Tests reciprocity band by band; see `testReciprocity`. Cost: linear in the readings, plus links³ a band. */
export function reciprocityFindings(set: TakeSet, model: Model, risk: number = DEFAULT_RISK): ReciprocityFindings {
  const { pairs, differentSeatings, bands: raw } = testReciprocity(set);
  const adjusted = holmAdjusted(raw.map(({ pValue }) => pValue));
  const tested = raw.map((band, b): ReciprocityBand => {
    const pAdjusted = adjusted[b]!;
    const isShown = pAdjusted <= risk;
    const verdict = Number.isNaN(pAdjusted) ? 'not testable' : isShown ? 'emit and receive differ' : 'not shown';
    return { ...band, pAdjusted, verdict };
  });
  const bands = pairs === 0 ? [] : tested;
  const differs = bands.some(({ verdict }) => verdict === 'emit and receive differ');
  return { pairs, differentSeatings, bands, speaksAgainstModel: differs && model.choice.kind === 'reciprocal' };
}
