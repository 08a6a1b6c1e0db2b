import type { PlannedSeating } from '../../whatif/design.ts';
import type { Prediction, TakePrediction } from '../../whatif/predict.ts';
import { seatingText } from '../whatif-wording.ts';

/** A take of a design, as tables and pictures name it. */
export interface PlannedTake extends TakePrediction {
  readonly id: string;
  readonly seating: PlannedSeating;
  /** `S1 > S2`, with mounts and path. */
  readonly pair: string;
  /** What fits beside a bar. */
  readonly label: string;
  /** Whether a shift of it would be found. */
  readonly isChecked: boolean;
}

/** The takes of the worst band, those first that are checked least; equals stay in the order of the design. */
export function takesByRedundancy({ bench, bands, worstBand }: Prediction): PlannedTake[] {
  const takes = bands[worstBand]!.takes.map((take): PlannedTake => {
    const seating = bench.design.seatings[bench.seatingOfTake[take.take]!]!;
    const { id } = bench.set.takes[take.take]!;
    const pair = seatingText(seating);
    return { ...take, id, seating, pair, label: `${id} ${pair}`, isChecked: !Number.isNaN(take.smallestShift) };
  });
  return takes.sort((one, other) => rankOf(one) - rankOf(other));
}

/** Decimals that count: beyond them equals differ by rounding. */
const DECIMALS = 9;

function rankOf({ isChecked, redundancy }: PlannedTake): number {
  return isChecked ? Number(redundancy.toFixed(DECIMALS)) : -1;
}
