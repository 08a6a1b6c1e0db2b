import type { ChainLayout } from '../estimate/chain-groups.ts';
import type { LevelScatter } from '../estimate/scatter-of-level.ts';
import { fUpper, fUpperQuantile } from '../numeric/f-distribution.ts';
import type { AssumedBand } from './assumed-scatter.ts';

/** What a design could find of a unit whose response depends on its partner. */
export interface PartnerTest {
  /**
   * Standard deviation over partners, in dB, that would be found with the chance `power`; NaN where the design cannot test
   * it.
   */
  readonly smallest: number;
  /** Chance to find the effect that was asked for; NaN where none was, or it cannot be tested. */
  readonly chance: number;
}

export interface PartnerTestOptions {
  /** Chance that a unit without any partner effect is said to have one. */
  readonly risk: number;
  readonly power: number;
  /** dB; absent where none is asked for. */
  readonly effect: number | undefined;
}

/** Fewer degrees of freedom than this say nothing of a unit's share: as in the test of a run. Common practice, no source. */
const FEWEST_DOF = 2;
/** A redundancy below this is rounding. */
const UNCHECKED = 1e-6;

const NOT_TESTABLE: PartnerTest = { smallest: Number.NaN, chance: Number.NaN };

/**
 * The F test of a unit's partner scatter as `holds.csv` makes it, for one independent frequency: what the unit's chains
 * leave over the additive model against what mounting again lets expect. Only pairs that are mounted more than once tell
 * partner scatter from reseat scatter; without any the effect cannot be tested.
 * A partner effect of standard deviation E makes the mean square (E² + expected)/expected times as large; power of a test
 * of variances: Scheffé, The Analysis of Variance, 1959, section 7.2 (recalled from memory).
 * @param links those of the unit.
 */
export function partnerTest(
  layout: ChainLayout,
  { fitted }: LevelScatter,
  { partner }: AssumedBand,
  links: ReadonlySet<number>,
  { risk, power, effect }: PartnerTestOptions,
): PartnerTest {
  const below = layout.groups.reduce((sum, { seatings }) => sum + seatings.length - 1, 0);
  if (below === 0) return NOT_TESTABLE;
  let dof = 0;
  let expected = 0;
  let share = 0;
  layout.groups.forEach(({ ends }, chain) => {
    const own = ends.filter((end) => links.has(end)).length;
    const left = 1 - fitted.chainWeight[chain]! * fitted.leverageFactor[chain]!;
    if (own === 0 || left < UNCHECKED) return;
    dof += left;
    // The other end's share belongs to what is expected, the unit's own does not.
    expected += left * (1 / fitted.chainPrecision[chain]! + ((2 - own) * partner ** 2) / 2);
    share += left * own;
  });
  if (dof < FEWEST_DOF || !(expected > 0)) return NOT_TESTABLE;
  const limit = fUpperQuantile(risk, dof, below);
  const scale = limit / fUpperQuantile(power, dof, below);
  const chance = effect === undefined ? Number.NaN : fUpper(limit / (1 + (share * effect ** 2) / expected), dof, below);
  return { smallest: Math.sqrt(Math.max(0, ((scale - 1) * expected) / share)), chance };
}
