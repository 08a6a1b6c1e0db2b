import type { Examination, ExtraTake, TakeFinding } from '../findings/examination.ts';
import type { ExplainedTake, Explanation } from '../findings/explanations.ts';
import { coverageFactors } from '../numeric/student-t.ts';
import { frequencyText } from '../quantity/frequency.ts';
import { placeText } from '../quantity/place.ts';
import { roundedText } from '../quantity/rounding.ts';
import type { Take } from '../takes/take-set.ts';
import { extraTakeText } from './open-wording.ts';
import type { Result } from './result.ts';
import { bandText, listText } from './wording.ts';

/** Explanations that the data do not tell from the best one, best first; the best one alone where it stands out. */
export function likelyExplanations({ ranked }: ExplainedTake): Explanation[] {
  const likely = ranked.filter(({ isEquallyGood }) => isEquallyGood).map(({ explanation }) => explanation);
  const [slope, gain] = (['slope', 'moved gain'] as const).map((kind) =>
    likely.findIndex((explanation) => explanation.kind === kind),
  ) as [number, number];
  // A slope that is no better than a constant shift is read as one: the plain reading comes first.
  if (slope >= 0 && gain > slope) likely.splice(slope, 0, ...likely.splice(gain, 1));
  return likely;
}

/** `moved gain, +3.08 dB ± 0.26 dB, or …`; empty where the take was not explained. ± is the expanded uncertainty. */
export function readsLike({ explained }: TakeFinding, coverage: number): string {
  if (explained === undefined) return '';
  const likely = likelyExplanations(explained);
  const labels = likely.filter(isLabel).length;
  const texts = likely.map((explanation) =>
    isLabel(explanation) && labels > MOST_LABELS
      ? `another unit's label (${labels} of them fit)`
      : explanationText(explanation, coverage),
  );
  return [...new Set(texts)].join(', or ');
}

/** Where more labels fit than this, naming them helps nobody. */
const MOST_LABELS = 2;

function isLabel({ kind }: Explanation): boolean {
  return kind === 'another label';
}

function explanationText(explanation: Explanation, coverage: number): string {
  const factorOf = coverageFactors(coverage);
  const level = (value: number, uncertainty: number, dof = Number.POSITIVE_INFINITY) => {
    if (Number.isNaN(uncertainty)) return signed(value, Math.abs(value));
    const expanded = uncertainty * factorOf(dof);
    return `${signed(value, expanded)} ± ${roundedText(expanded, expanded)} dB`;
  };
  switch (explanation.kind) {
    case 'moved gain':
      return `moved gain, ${level(explanation.shift, explanation.uncertainty, explanation.dof)}`;
    case 'slope':
      return `slope along frequency, ${level(explanation.perDecade, explanation.uncertainty)} a decade, with ${signed(explanation.shift, explanation.uncertainty * factorOf(Number.POSITIVE_INFINITY))} in the middle`;
    case 'local':
      return `${explanation.height < 0 ? 'dip' : 'bump'} at ${frequencyText(explanation.centre, 3)} (${bandText(explanation)}), ${level(explanation.height, explanation.uncertainty)}`;
    case 'scatter':
      return `scatter, ${explanation.factor.toPrecision(2)} times that of other takes`;
    case 'another label':
      return `another unit's label: ${explanation.unit} as ${explanation.end}`;
    case 'direction reversed':
      return 'direction reversed';
  }
}

/** An explanation in a few words without figures, for a legend. */
export function explanationName(explanation: Explanation): string {
  switch (explanation.kind) {
    case 'another label':
      return `${explanation.unit} as ${explanation.end}`;
    case 'local':
      return explanation.height < 0 ? 'dip' : 'bump';
    case 'scatter':
      return 'scatter around the rest';
    default:
      return explanation.kind;
  }
}

/** `+3.08 dB`, rounded to its uncertainty. */
function signed(value: number, uncertainty: number): string {
  const text = roundedText(value, uncertainty);
  return `${Number(text) > 0 ? '+' : ''}${text} dB`;
}

/** What to do about a take, in one sentence; empty where it agrees or was not tested. */
export function adviceText(result: Pick<Result, 'set'>, finding: TakeFinding): string {
  const take = result.set.takes[finding.take]!;
  if (finding.verdict === 'uncheckable') {
    return finding.cure === undefined ? '' : `Nothing checks this take; ${cureText(finding.cure, take)} would.`;
  }
  if (finding.verdict === 'tied') {
    const others = finding.tiedWith.map((t) => result.set.takes[t]!.id);
    return `Take ${pairText(take)} again, mounted anew: if it comes out different, ${take.id} was at fault; if not, ${remainingText(others)}.`;
  }
  if (finding.verdict !== 'flagged') return '';
  const again = `take ${pairText(take)} again`;
  if (finding.explained === undefined) return `${again[0]!.toUpperCase()}${again.slice(1)}.`;
  const likely = likelyExplanations(finding.explained);
  const isVague = likely.filter(isLabel).length > MOST_LABELS;
  const checks = likely.map((explanation) =>
    isVague && isLabel(explanation) ? 'the labels' : checkText(explanation, take),
  );
  return `Check ${[...new Set(checks)].join(', then ')}; ${isVague && isLabel(likely[0]!) ? 'correct a wrong one, else ' : correctionText(likely[0]!)}${again}.`;
}

/** What to look at first, as the object of 'check'. */
function checkText(explanation: Explanation, { emitter, receiver }: Take): string {
  switch (explanation.kind) {
    case 'moved gain':
      return 'the gain settings';
    case 'slope':
      return 'cables and couplant';
    case 'local':
      return 'the mounting and couplant of both units';
    case 'scatter':
      return 'for loose contacts and noise';
    case 'another label':
      return `whether it was ${explanation.unit} that stood in the place of ${explanation.end === 'emitter' ? emitter : receiver}`;
    case 'direction reversed':
      return `whether ${receiver} was driven and ${emitter} listened`;
  }
}

/** What the file can be corrected by, where somebody knows. */
function correctionText({ kind }: Explanation): string {
  if (kind === 'moved gain') return 'if a known gain moved, give it as gain_db, else ';
  if (kind === 'another label') return 'if so, correct the label, else ';
  if (kind === 'direction reversed') return 'if so, exchange the labels, else ';
  return '';
}

/** An extra take in words; the same pair once more needs a new mounting to tell anything. */
export function cureText(cure: ExtraTake, { emitter, receiver, path }: Take): string {
  const isSame = cure.emitter === emitter && cure.receiver === receiver && cure.path === path;
  return isSame ? `${extraTakeText(cure)} mounted anew` : extraTakeText(cure);
}

function pairText({ emitter, receiver }: Take): string {
  return `${emitter} > ${receiver}`;
}

/** The takes that settle a tie, one after the other: each clears or convicts one of the tied takes. */
export function tieSteps({ set }: Pick<Result, 'set'>, group: readonly TakeFinding[]): string {
  const [first, ...rest] = group.map(({ take }) => set.takes[take]!);
  return `Take ${pairText(first!)} again, mounted anew: if it comes out different, ${first!.id} was at fault; if not, ${remainingText(rest.map(({ id }) => id))}.`;
}

function remainingText(ids: readonly string[]): string {
  return ids.length === 1 ? `it was ${ids[0]}` : `go on with ${listText(ids)}`;
}

/** `T130 (N06 > N09)`. */
export function takeName(take: Take): string {
  return `${take.id} (${pairText(take)})`;
}

/** A flagged take in a few paragraphs: which, by how much and where, what it reads like, what to do. */
export function flaggedParagraphs(result: Result, finding: TakeFinding): string[] {
  const take = result.set.takes[finding.take]!;
  const { rmsResidual, worst } = finding;
  const labels = [pairText(take), take.path && `over ${take.path}`, take.session].filter((label) => label !== '');
  const where = worst === undefined ? '' : `, most at ${bandText(worst)} (${signed(worst.level, worst.level)})`;
  const against = finding.isLeftOut ? 'what the others say of it' : 'the fit';
  const reading = readsLike(finding, result.coverage);
  return [
    `${take.id}: ${labels.join(', ')}; ${placeText(take)}`,
    `${roundedText(rmsResidual, rmsResidual)} dB (rms) off ${against}${where}.`,
    ...(reading === '' ? [] : [`Reads like: ${reading}.`]),
    adviceText(result, finding),
  ];
}

/** Flagged takes, worst first. */
export function flaggedTakes({ takes }: Examination): TakeFinding[] {
  return takes.filter(({ verdict }) => verdict === 'flagged').sort((a, b) => a.pValue - b.pValue || a.take - b.take);
}

/** Each tie once, with its takes in the order of the file, worst tie first. */
export function tieGroups({ takes }: Examination): TakeFinding[][] {
  const groups = new Map<string, TakeFinding[]>();
  const tied = takes.filter(({ verdict }) => verdict === 'tied').sort((a, b) => a.pValue - b.pValue || a.take - b.take);
  for (const { take, tiedWith } of tied) {
    const members = [take, ...tiedWith].sort((a, b) => a - b);
    groups.set(
      members.join(),
      members.map((t) => takes[t]!),
    );
  }
  return [...groups.values()];
}

/** A tie: which takes could be at fault, what each would read like, and the one take that settles it. */
export function tieSentence(result: Result, group: readonly TakeFinding[]): string {
  const { set, coverage } = result;
  const names = group.map(({ take }) => takeName(set.takes[take]!));
  const readings = group
    .map((finding) => ({ id: set.takes[finding.take]!.id, text: readsLike(finding, coverage) }))
    .filter(({ text }) => text !== '')
    .map(({ id, text }) => `${id} would read like ${text}.`);
  const settles = tieSteps(result, group);
  return [`Tied: the takes cannot tell which of ${listText(names)} is at fault; all stay in.`, ...readings, settles]
    .filter((sentence) => sentence !== '')
    .join(' ');
}
