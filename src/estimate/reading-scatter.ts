import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { ChainLayout } from './chain-groups.ts';
import { dofOfLinks } from './dof-of-links.ts';
import { noiseOverRepeats } from './reading-uncertainty.ts';
import type { LevelScatter } from './scatter-of-level.ts';
import type { SharedSeatings } from './shared-seatings.ts';
import { isGiven, type ReadingUncertainty } from './solution.ts';

/** Scatter of one band, for the frequencies in it. */
export interface ScatterBand {
  /** Indices of the frequencies. */
  readonly frequencies: readonly number[];
  readonly scatter: LevelScatter;
}

/** What seatings and partners add to the uncertainty of responses, at each frequency. F × L, entry (f, l) at f · L + l. */
export interface ScatterOfUses {
  /** Variance (dB²) that one more seating of the unit brings; NaN where no pair was seated twice. */
  readonly seating: Float64Array;
  readonly seatingDof: Float64Array;
  /** Variance that another partner brings; NaN where it cannot be told. */
  readonly partner: Float64Array;
  readonly partnerDof: Float64Array;
  /** Degrees of freedom of the response's own variance. */
  readonly dof: Float64Array;
}

/** Readings with all their scatter: repeats, seatings and partners. T × F arrays as in TakeSet, in dB. */
export interface ReadingScatter {
  /** Standard deviation of one reading about the additive model. */
  readonly total: Float64Array;
  /** The standard uncertainty of an independent reading that would carry the same weight. */
  readonly independent: Float64Array;
  readonly uses: ScatterOfUses;
  /** Standard deviation of one reading within its seating. */
  readonly single: Float64Array;
  readonly layout: ChainLayout;
  /** Scatter at each frequency; undefined where it cannot be told apart. */
  readonly levelOf: readonly (LevelScatter | undefined)[];
  readonly shared: SharedSeatings;
  /** F × shared seatings, standard deviation in dB of what each of them adds; above 0. */
  readonly sharedDeviation: Float64Array;
  /** Whether `single` is what the readings' source says of each, or the pooled scatter of repeats. */
  readonly readingSource: ReadingUncertainty['source'];
}

/**
 * What a shared seating counts as at least, relative to one reading: its link needs a prior, and this is far below
 * anything that shows, and far above what rounding could spoil.
 */
const LEAST_PART = 1e-3;
/** The same in dB where readings have no uncertainty. */
const LEAST_DEVIATION = 1e-3;

/**
 * Weighs readings that share seatings and partners. Seatings that serve several pairs are left to the solution as links of
 * their own (`SharedSeatings`); the rest is done here in closed form. All takes of a chain have the same row x in the model, so that
 * generalised least squares with the full covariance V is weighted least squares with the weight of take t equal to the
 * t-th entry of V⁻¹1 of its chain: XᵀV⁻¹X = Σ x xᵀ (1ᵀV⁻¹1) and XᵀV⁻¹y = Σ x (1ᵀV⁻¹ y).
 * For a seating with Σ 1/u² = p under the seating variance s² the entry is (1/u²)/p · c with c = 1/(s² + 1/p), and with the
 * partner variance q² it is divided by 1 + q² Σ c.
 * Source: Henderson's equivalence of generalised least squares and mixed-model equations; Searle, Casella & McCulloch,
 * Variance Components, 1992, section 7.1.
 * @param reading uncertainty of one reading by itself; used where it is known before anything is solved.
 * @returns undefined where neither repeats nor seatings tell the scatter apart.
 */
export function readingScatter(
  set: TakeSet,
  model: Model,
  layout: ChainLayout,
  bands: readonly ScatterBand[],
  reading: ReadingUncertainty,
): ReadingScatter | undefined {
  if (!bands.some(({ scatter }) => tellsApart(scatter))) return undefined;
  const width = set.frequencies.length;
  const links = model.linksPerFrequency;
  const perReading = () => new Float64Array(set.levels.length).fill(Number.NaN);
  const [total, independent, single] = [perReading(), perReading(), perReading()];
  const { shared } = layout;
  const levelOf = new Array<LevelScatter | undefined>(width).fill(undefined);
  const sharedDeviation = new Float64Array(width * shared.seatings.length).fill(LEAST_DEVIATION);
  const perLink = () => new Float64Array(width * links).fill(Number.NaN);
  const uses = { seating: perLink(), seatingDof: perLink(), partner: perLink(), partnerDof: perLink(), dof: perLink() };
  for (const { frequencies, scatter } of bands) {
    const isTold = tellsApart(scatter);
    const dof = isTold ? dofOfLinks(layout, scatter, links) : undefined;
    for (const f of frequencies) {
      if (isTold) levelOf[f] = scatter;
      for (let chain = 0; chain < layout.groups.length; chain++) {
        if (isTold) weighChain(set, layout, shared, scatter, chain, f, reading, { total, independent, single });
        else copyChain(layout, chain, f, width, reading, { total, independent, single });
      }
      shared.seatings.forEach(({ response }, s) => {
        if (!isTold) return;
        const least = LEAST_PART ** 2 * Math.max(scatter.repeatVariance, LEAST_DEVIATION ** 2);
        const cell = f * shared.seatings.length + s;
        sharedDeviation[cell] = Math.sqrt(Math.max(least, scatter.seating?.shares[response] ?? 0));
      });
      for (let link = 0; link < links && dof !== undefined; link++) {
        const cell = f * links + link;
        uses.dof[cell] = dof[link]!;
        uses.seating[cell] = scatter.seating?.shares[link] ?? Number.NaN;
        uses.seatingDof[cell] = scatter.seating?.dof[link] ?? Number.NaN;
        uses.partner[cell] = scatter.partner?.shares[link] ?? Number.NaN;
        uses.partnerDof[cell] = scatter.partner?.dof[link] ?? Number.NaN;
      }
    }
  }
  const { source: readingSource } = reading;
  return { total, independent, uses, single, layout, levelOf, shared, sharedDeviation, readingSource };
}

/** Repeats or seatings are what other scatter is told from. */
function tellsApart({ isKnown, seating, repeatDof }: LevelScatter): boolean {
  return isKnown && (seating !== undefined || (repeatDof > 0 && repeatDof < Number.POSITIVE_INFINITY));
}

interface PerReading {
  readonly total: Float64Array;
  readonly independent: Float64Array;
  readonly single: Float64Array;
}

/** Variance of a seating beyond its readings, of the ends that are seated for it alone. */
function ownSeatVariance({ ownEnds }: SharedSeatings, { seating }: LevelScatter, seat: number): number {
  return seating === undefined ? 0 : ownEnds[seat]!.reduce((sum, end) => sum + seating.shares[end]!, 0);
}

function weighChain(
  set: TakeSet,
  layout: ChainLayout,
  shared: SharedSeatings,
  scatter: LevelScatter,
  chain: number,
  f: number,
  reading: ReadingUncertainty,
  into: PerReading,
): void {
  const width = set.frequencies.length;
  const { fitted, repeatVariance } = scatter;
  const partnerVariance = fitted.chainPartner[chain]!;
  const isOwn = isGiven(reading.source);
  const variance = (cell: number) =>
    isOwn ? reading.values[cell]! ** 2 : repeatVariance * noiseOverRepeats(set, cell) ** 2;
  const [from, to] = [layout.seatStart[chain]!, layout.seatStart[chain + 1]!];
  let precision = 0;
  const ofSeat: { seat: number; precision: number; weight: number }[] = [];
  for (let seat = from; seat < to; seat++) {
    let own = 0;
    for (const t of layout.takes[seat]!) {
      const cell = t * width + f;
      if (!Number.isNaN(set.levels[cell]!)) own += 1 / variance(cell);
    }
    if (!(own > 0)) continue;
    const weight = 1 / (ownSeatVariance(shared, scatter, seat) + 1 / own);
    precision += weight;
    ofSeat.push({ seat, precision: own, weight });
  }
  for (const { seat, precision: own, weight } of ofSeat) {
    for (const t of layout.takes[seat]!) {
      const cell = t * width + f;
      if (Number.isNaN(set.levels[cell]!)) continue;
      const single = variance(cell);
      into.single[cell] = Math.sqrt(single);
      into.independent[cell] = Math.sqrt((single * own * (1 + partnerVariance * precision)) / weight);
      into.total[cell] = Math.sqrt(single + fitted.seatVariance[chain]! + partnerVariance);
    }
  }
}

// A band whose scatter is not known keeps what the readings say of themselves.
function copyChain(
  layout: ChainLayout,
  chain: number,
  f: number,
  width: number,
  { values }: ReadingUncertainty,
  { total, independent, single }: PerReading,
): void {
  for (let seat = layout.seatStart[chain]!; seat < layout.seatStart[chain + 1]!; seat++) {
    for (const t of layout.takes[seat]!) {
      const cell = t * width + f;
      total[cell] = values[cell]!;
      independent[cell] = values[cell]!;
      single[cell] = values[cell]!;
    }
  }
}
