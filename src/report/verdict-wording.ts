import type { TakeFinding, UnitFinding } from '../findings/examination.ts';
import type { Model } from '../model/model.ts';
import { roundedText } from '../quantity/rounding.ts';
import type { UnitStructure } from './bench-structure.ts';
import { FIRST_LOOK, failingStatement, failsInEveryBand, holdStatement } from './hold-wording.ts';
import { placedUnit } from './response-name.ts';
import type { Result } from './result.ts';
import { flaggedTakes, tieGroups } from './take-wording.ts';
import { counted, FEW_NAMES, hasHave, isAre, listText, percentText, type Statement } from './wording.ts';

/** Residuals this far from what the uncertainties say are worth a word: a quarter, in amplitude. Common practice, no source. */
const NOTEWORTHY_RATIO = 0.25;
/** … and this many standard deviations of chance, which for √(χ²/ν) is about 1/√(2ν) (Fisher's approximation, from memory). */
const NOTEWORTHY_DEVIATIONS = 3;
/** Residuals below this many dB are rounding. */
const ROUNDING = 1e-6;
/** Degrees of freedom below this are rounding: nothing is spare. */
const NONE_SPARE = 1e-6;

/** The verdict, most important first: what fails, what is determined and how well, whether takes agree, and where units hold. */
export function verdict(result: Result): Statement[] {
  const { model, examination, coverage } = result;
  const failing = failures(result);
  const determined = determinedStatement(unitCounts(model, examination.units));
  if (determined.tone === 'bad') return [...failing, determined, agreementStatement(result)];
  return [
    ...failing,
    // Beside a model that fails nothing is good.
    failing.length > 0 && determined.tone === 'good' ? { ...determined, tone: 'plain' } : determined,
    ...takeStatements(result),
    ...holdStatements(result),
    typicalUncertainty(examination.units, coverage),
    agreementStatement(result),
  ];
}
/** What makes the result as a whole untrustworthy. */
function failures(result: Result): Statement[] {
  const { takes, whole } = result.examination;
  const inBands = failingStatement(result);
  const statements = inBands === undefined ? [] : [inBands];
  if (!whole.isModelFailing) return statements;
  const flagged = takes.filter(({ verdict }) => verdict === 'flagged').length;
  const text = `THE ADDITIVE MODEL FAILS: ${flagged} of ${counted(takes.length, 'take')} disagree with the rest, more than can be left out, so that all are in. No level below can be relied on.`;
  return [...statements, { text: inBands === undefined ? `${text} ${FIRST_LOOK}` : text, tone: 'bad' }];
}

/** How many takes agree, which do not, and what became of them. */
function takeStatements({ set, examination }: Result): Statement[] {
  const { takes, whole } = examination;
  // Said in other words already: nothing is spare, or the model fails.
  if (whole.degreesOfFreedom < NONE_SPARE || whole.isModelFailing) return [];
  if (takes.every(({ verdict }) => verdict === 'not tested')) {
    return [{ text: 'No take could be tested: nothing tells how much takes that agree may differ.', tone: 'warning' }];
  }
  const names = (wanted: readonly TakeFinding[]) =>
    listText(
      wanted.map(({ take }) => set.takes[take]!.id),
      FEW_NAMES,
    );
  const flagged = flaggedTakes(examination);
  const kept = flagged.filter(({ isLeftOut }) => !isLeftOut);
  const ties = tieGroups(examination);
  const all = counted(takes.length, 'take');
  const statements: Statement[] = [];
  if (flagged.length > 0) {
    const one = flagged.length === 1;
    const left = kept.length === 0 ? `${one ? 'was' : 'were'} left out` : `all but ${names(kept)} were left out`;
    const text =
      kept.length === flagged.length
        ? `${flagged.length} of ${all} ${one ? 'disagrees' : 'disagree'} with the rest, and ${one ? 'is' : 'are'} still in: ${names(flagged)}.`
        : `${flagged.length} of ${all} ${one ? 'disagrees' : 'disagree'} with the rest and ${left}: ${names(flagged)}.`;
    statements.push({ text, tone: 'bad' });
  }
  for (const tie of ties) {
    statements.push({ text: `${names(tie)} are tied: one of them is at fault, and nothing tells which.`, tone: 'bad' });
  }
  const unchecked = takes.filter(({ verdict }) => verdict === 'uncheckable').length;
  if (statements.length === 0 && examination.failing.length > 0) {
    statements.push({ text: 'No single take stands out from that.', tone: 'plain' });
  } else if (statements.length === 0) {
    const rest = unchecked === 0 ? '' : `; nothing checks ${unchecked} of ${all}`;
    statements.push({ text: `No take disagrees with the rest${rest}.`, tone: unchecked === 0 ? 'good' : 'plain' });
  }
  return statements;
}

/** Nothing where the model fails in every band, or nothing is spare: that says it. */
function holdStatements(result: Result): Statement[] {
  const isSaid = failsInEveryBand(result);
  return isSaid || result.examination.whole.degreesOfFreedom < NONE_SPARE ? [] : [holdStatement(result)];
}

/** What can be told apart, before anything is solved. */
export function structureVerdict(units: readonly UnitStructure[]): Statement {
  return determinedStatement(units.map(({ frequencies, ...unit }) => ({ name: placedUnit(unit), ...frequencies })));
}

/** A unit with its numbers of frequencies by status. */
interface UnitCounts {
  readonly name: string;
  readonly ok: number;
  readonly datum: number;
  readonly open: number;
}

/** A unit is as good as the worse of its roles, so that the counts of its responses may be summed. */
function unitCounts(model: Model, findings: readonly UnitFinding[]): UnitCounts[] {
  const units = new Map<string, UnitCounts>();
  for (const { response, counts } of findings) {
    const name = placedUnit(model.responses[response]!);
    const { ok, datum, open } = units.get(name) ?? { ok: 0, datum: 0, open: 0 };
    units.set(name, { name, ok: ok + counts.ok, datum: datum + counts.datum, open: open + counts.open });
  }
  return [...units.values()];
}

function determinedStatement(units: readonly UnitCounts[]): Statement {
  const namesWhere = (holds: (unit: UnitCounts) => boolean) => units.filter(holds).map(({ name }) => name);
  const determined = namesWhere((unit) => unit.datum + unit.open === 0);
  const onDatum = namesWhere((unit) => unit.datum > 0 && unit.open === 0);
  const partly = namesWhere((unit) => unit.open > 0 && unit.ok + unit.datum > 0);
  const open = namesWhere((unit) => unit.open > 0 && unit.ok + unit.datum === 0);
  const all = units.length;
  const allUnits = all === 1 ? 'The unit' : `All ${all} units`;
  if (determined.length === all) {
    return { text: `${allUnits} ${isAre(all)} determined at every frequency.`, tone: 'good' };
  }
  if (onDatum.length === all) {
    return { text: `${allUnits} ${hasHave(all)} a level; it rests on a datum, named below.`, tone: 'good' };
  }
  if (open.length === all) return { text: `No level can be told: ${listText(open)} ${isAre(all)} open.`, tone: 'bad' };
  const groups = [
    determined.length === 0
      ? `None of ${all} units is determined at every frequency`
      : `${determined.length} of ${all} units ${isAre(determined.length)} determined at every frequency`,
    ...(onDatum.length > 0 ? [`${onDatum.length} ${onDatum.length === 1 ? 'rests' : 'rest'} on a datum`] : []),
    ...(partly.length > 0 ? [`open at some frequencies ${isAre(partly.length)} ${listText(partly)}`] : []),
    ...(open.length > 0 ? [`open throughout ${isAre(open.length)} ${listText(open)}`] : []),
  ];
  return { text: `${groups.join('; ')}.`, tone: partly.length + open.length > 0 ? 'warning' : 'good' };
}

function typicalUncertainty(findings: readonly UnitFinding[], coverage: number): Statement {
  const known = findings.map((finding) => finding.medianExpanded).filter((value) => !Number.isNaN(value));
  if (known.length === 0) return { text: 'No uncertainty can be given.', tone: 'warning' };
  const [least, most] = [Math.min(...known), Math.max(...known)].map((value) => roundedText(value, value));
  const range = least === most ? `${least} dB` : `${least} dB to ${most} dB`;
  return { text: `Typical expanded uncertainty of a level (${percentText(coverage)}): ${range}.`, tone: 'plain' };
}

function agreementStatement({ examination, solution }: Result): Statement {
  const { whole, takes } = examination;
  if (whole.degreesOfFreedom < NONE_SPARE) {
    return { text: 'No take is spare, so that nothing checks these levels.', tone: 'warning' };
  }
  const deviation = whole.residualDeviation;
  if (deviation < ROUNDING) return { text: 'The fit leaves nothing unexplained.', tone: 'plain' };
  const left = `The fit leaves ${roundedText(deviation, deviation)} dB (standard deviation) unexplained.`;
  if (Number.isNaN(whole.chiSquarePerDof)) return { text: left, tone: 'plain' };
  const ratio = Math.sqrt(whole.chiSquarePerDof);
  const figure = `chi-square per degree of freedom ${twoDigits(whole.chiSquarePerDof)}`;
  const chance = NOTEWORTHY_DEVIATIONS / Math.sqrt(2 * whole.degreesOfFreedom);
  const noteworthy = Math.abs(ratio - 1) > Math.max(NOTEWORTHY_RATIO, chance);
  if (!noteworthy) {
    return { text: `${left} The uncertainties of the readings allow for that (${figure}).`, tone: 'good' };
  }
  const times = `${left} That is ${twoDigits(ratio)} times what the uncertainties of the readings say (${figure})`;
  if (ratio < 1) return { text: `${times}: they look too large, and with them those of the levels.`, tone: 'warning' };
  if (solution.readingUncertainty.source === 'scatter') {
    const text = `${times}: what new mountings and partners add comes on top. It is in the uncertainties of the levels.`;
    return { text, tone: 'plain' };
  }
  const isTested = takes.every(
    ({ verdict, isLeftOut }) => verdict === 'agrees' || verdict === 'uncheckable' || isLeftOut,
  );
  const why =
    solution.readingUncertainty.source === 'repeats'
      ? 'repeats do not show what a new mounting or another partner changes'
      : 'they are too small, or responses depend on the partner';
  return {
    text: `${times}: ${why}${isTested ? '' : ', or some takes disagree'}. The uncertainties of the levels are then too small as well.`,
    tone: 'warning',
  };
}

/** `0.12`, `4.0`, `150`: two significant digits, without an exponent. */
function twoDigits(value: number): string {
  return value < 100 ? value.toPrecision(2) : String(Number(value.toPrecision(2)));
}
