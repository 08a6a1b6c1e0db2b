import type { HoldFinding } from '../findings/holds.ts';
import { roundedText } from '../quantity/rounding.ts';
import { bandsWith, type HeldRun, joinedBands, type UnitHold, unitHolds } from './held-bands.ts';
import type { Result } from './result.ts';
import { bandText, counted, FEW_NAMES, listText, type Statement } from './wording.ts';

type Verdict = HoldFinding['verdict'];

/** Wider than this no cell is: beyond it, bands are counted. */
const WIDEST_CELL = 30;

/** The bands in which a unit holds, for a cell: `all`, `all but 71–89 kHz`, `1–4 kHz`, `none`, `not testable`. */
export function holdsCell(hold: UnitHold | undefined): string {
  if (hold === undefined) return 'not testable';
  const { runs } = hold;
  const [holding, all] = [bandsWith(hold, 'holds'), runs.reduce((sum, { bands }) => sum + bands, 0)];
  if (holding === all) return 'all';
  if (bandsWith(hold, 'not testable') === all) return 'not testable';
  if (holding === 0) return 'none';
  const texts = [
    `all but ${bandsText(runs.filter(({ verdict }) => verdict !== 'holds'))}`,
    bandsText(runs.filter(({ verdict }) => verdict === 'holds')),
  ];
  const shortest = texts.reduce((best, text) => (text.length < best.length ? text : best));
  return shortest.length <= WIDEST_CELL ? shortest : `${holding} of ${counted(all, 'band')}`;
}

/** `56–71 kHz and 89–110 kHz`; neighbours are joined. */
export function bandsText(runs: readonly { readonly from: number; readonly to: number }[]): string {
  return listText(joinedBands(runs).map(bandText), FEW_NAMES);
}

/** Where mounting independence holds and where it breaks. */
export function holdStatement({ examination, tolerance }: Result): Statement {
  const units = unitHolds(examination.holds);
  const testable = units.filter(({ runs }) => runs.some(({ verdict }) => verdict !== 'not testable'));
  if (testable.length === 0) {
    return {
      text: 'Whether a response depends on its partner cannot be tested; more partners, and takes repeated as they sit or mounted anew, would tell.',
      tone: 'warning',
    };
  }
  const whole = units.filter((unit) => bandsWith(unit, 'holds') === bandsWith(unit, ...ALL));
  const limit = `${tolerance} dB`;
  if (whole.length === units.length) {
    return {
      text: `Mounting independence holds: no response depends on its partner by more than ${limit}, in any band.`,
      tone: 'good',
    };
  }
  const broken = units.filter((unit) => bandsWith(unit, 'broken') > 0);
  const parts = [
    ...(whole.length > 0 ? [`holds in every band for ${whole.length} of ${counted(units.length, 'unit')}`] : []),
    ...named(broken, 'broken', 'breaks'),
    // A broken unit is strained beside its broken bands as well; its own sentence says so.
    ...named(
      units.filter((unit) => !broken.includes(unit)),
      'strained',
      'is strained',
    ),
    ...named(units, 'not testable', 'cannot be judged').map((text) => `${text}, where further partners would tell`),
  ];
  return { text: `Mounting independence ${parts.join('; it ')}.`, tone: broken.length > 0 ? 'bad' : 'warning' };
}

const ALL: readonly Verdict[] = ['holds', 'strained', 'broken', 'not testable'];

/** Units of a sentence that are told with their bands; more are told by name only. */
const FEW_UNITS = 3;

function named(units: readonly UnitHold[], verdict: Verdict, verb: string): string[] {
  const concerned = units.filter((unit) => bandsWith(unit, verdict) > 0);
  const isAll = (unit: UnitHold) => bandsWith(unit, verdict) === bandsWith(unit, ...ALL);
  if (concerned.length === 0) return [];
  if (concerned.length > FEW_UNITS) {
    const where = concerned.every(isAll) ? '' : ' in some bands';
    const names = concerned.map(({ name }) => name);
    return [`${verb}${where} for ${names.length > FEW_NAMES ? counted(names.length, 'unit') : listText(names)}`];
  }
  const texts = concerned.map((unit) => {
    const bands = isAll(unit) ? 'every band' : bandsText(unit.runs.filter((run) => run.verdict === verdict));
    return `${unit.name} (${bands})`;
  });
  return [`${verb} for ${listText(texts)}`];
}

/** Bands in which the additive model itself fails; absent where there are none. */
export function failingStatement({ examination, tolerance }: Result): Statement | undefined {
  const failing = examination.failing;
  if (failing.length === 0) return undefined;
  const all = new Set(examination.holds.map(({ from }) => from)).size;
  const where = failing.length === all ? `in every band (${bandsText(failing)})` : `at ${bandsText(failing)}`;
  const below = failing.length === all ? 'No level below can be relied on' : 'No level there can be relied on';
  return {
    text: `THE ADDITIVE MODEL FAILS ${where}: a typical unit depends on its partner by ${Math.max(...failing.map(({ typical }) => typical)).toPrecision(2)} dB, more than the tolerance of ${tolerance} dB. ${below}; holds.csv tells unit by unit. ${FIRST_LOOK}`,
    tone: 'bad',
  };
}

/** Whether no band is left in which single units could be told apart from the rest. */
export function failsInEveryBand({ examination }: Result): boolean {
  const bands = new Set(examination.holds.map(({ from }) => from)).size;
  return bands > 0 && examination.failing.length === bands;
}

/** What to do where the model as a whole does not fit. */
export const FIRST_LOOK =
  'Look first for what changes from take to take and is not corrected for: distance, direction, coupling, gain, mounting.';

/** Units that depend on their partner, the most first, each with what that means for its use; none where all fail alike. */
export function dependenceSentences(result: Result): string[] {
  const { examination, tolerance } = result;
  if (failsInEveryBand(result)) return [];
  const worst = ({ runs }: UnitHold) => Math.max(0, ...runs.filter(isDependent).map(({ partner }) => partner));
  return unitHolds(examination.holds)
    .filter(({ runs }) => runs.some(isDependent))
    .sort((a, b) => worst(b) - worst(a))
    .map(({ name, runs }) => {
      const broken = runs.filter(({ verdict }) => verdict === 'broken');
      const strained = runs.filter(({ verdict }) => verdict === 'strained');
      const texts = [
        ...(broken.length > 0 ? [`${brokenText(broken)} ${ELSEWHERE}`] : []),
        ...(strained.length > 0 ? [strainedText(strained, tolerance)] : []),
      ];
      return `${name}: ${texts.join(' ')}`;
    });
}

const ELSEWHERE = 'Its level there is a mean over the partners of this bench only: do not carry it to another one.';

function isDependent({ verdict }: HeldRun): boolean {
  return verdict === 'broken' || verdict === 'strained';
}

function brokenText(runs: readonly HeldRun[]): string {
  const { partner, low, high } = largest(runs);
  const figure = (value: number) => roundedText(value, value);
  return `broken at ${bandsText(runs)}: it changes with its partner by ${figure(partner)} dB (standard deviation; ${figure(low)} dB to ${figure(high)} dB).`;
}

function strainedText(runs: readonly HeldRun[], tolerance: number): string {
  const { partner, low, high } = largest(runs);
  const figure = (value: number) => roundedText(value, value);
  const beside = high <= tolerance ? `within the tolerance of ${tolerance} dB` : `not surely beyond ${tolerance} dB`;
  return `Strained at ${bandsText(runs)}: up to ${figure(partner)} dB (${figure(low)} dB to ${figure(high)} dB), ${beside}; allow for it there.`;
}

function largest(runs: readonly HeldRun[]): HeldRun {
  return runs.reduce((most, run) => (run.partner > most.partner ? run : most));
}
