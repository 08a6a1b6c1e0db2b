/** The one place where findings become sentences. Sentences go to terminals and files alike and carry the user's own labels. */
import type { ExtraTake, OpenFinding, UnitFinding, WholeFinding } from '../findings/examination.ts';
import { THIRD_UNIT } from '../findings/examination.ts';
import type { Model } from '../model/model.ts';
import { frequencyText } from '../quantity/frequency.ts';
import { roundedText } from '../quantity/rounding.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { BenchCounts } from './bench-counts.ts';
import type { UnitStructure } from './bench-structure.ts';
import { placedUnit, responseName } from './response-name.ts';
import type { InputSummary, Result } from './result.ts';

/** A sentence, or a few, with how it bears on the reader's trust. */
export interface Statement {
  readonly text: string;
  readonly tone: 'plain' | 'good' | 'warning' | 'bad';
}

export const CAUTIONS: readonly string[] = [
  'Relative bench results are not an accredited calibration.',
  'Drive voltages on piezo units can shock; units can charge when heated or struck.',
  'Air-borne ultrasound and strong sound can harm hearing.',
  'Decisions on pressure equipment or structures belong to the applicable code, accredited calibration and licensed practice.',
];

/** Names listed in a sentence about something open: all of a usual bench, so that nobody has to look further. */
const MOST_NAMES = 40;
/** Names listed where the sentence says the rest. */
const FEW_NAMES = 6;

/** Residuals this far from what the uncertainties say are worth a word: a quarter, in amplitude. Common practice, no source. */
const NOTEWORTHY_RATIO = 0.25;
/** … and this many standard deviations of chance, which for √(χ²/ν) is about 1/√(2ν) (Fisher's approximation, from memory). */
const NOTEWORTHY_DEVIATIONS = 3;
/** Residuals below this many dB are rounding. */
const ROUNDING = 1e-6;
/** Degrees of freedom below this are rounding: nothing is spare. */
const NONE_SPARE = 1e-6;

/** `1 take`, `3 takes`. */
export function counted(count: number, singular: string, plural = `${singular}s`): string {
  return `${count} ${count === 1 ? singular : plural}`;
}

/** `A`, `A and B`, `A, B and C`, `A, B and 7 more`. */
export function listText(names: readonly string[], most = MOST_NAMES): string {
  if (names.length > most) return `${names.slice(0, most).join(', ')} and ${names.length - most} more`;
  return names.length < 2 ? names.join() : `${names.slice(0, -1).join(', ')} and ${names.at(-1)}`;
}

/** `95 %`, `99.7 %`. */
export function percentText(share: number): string {
  return `${Number((100 * share).toPrecision(6))} %`;
}

/** `at 1 kHz`, `at every frequency`, `at 12 of 500 frequencies (1 kHz to 2.5 kHz)`. */
export function atFrequencies(indices: readonly number[], frequencies: Float64Array): string {
  const text = (index: number) => frequencyText(frequencies[index]!);
  if (indices.length === 1) return `at ${text(indices[0]!)}`;
  if (indices.length === frequencies.length) return 'at every frequency';
  return `at ${indices.length} of ${frequencies.length} frequencies (${text(indices[0]!)} to ${text(indices.at(-1)!)})`;
}

/** What was read, in one sentence. */
export function readSentence(input: InputSummary, counts: BenchCounts): string {
  const range =
    counts.frequencies === 1
      ? `at ${frequencyText(counts.from)}`
      : `${counts.frequencies} frequencies from ${frequencyText(counts.from)} to ${frequencyText(counts.to)}`;
  const parts = [
    counted(input.files.length, 'file'),
    counted(counts.takes, 'take'),
    counted(counts.units, 'unit'),
    counted(counts.pairs, 'pair'),
    counted(counts.sessions, 'session'),
    range,
  ];
  return `Read ${parts.join(', ')}.`;
}

/** The verdict, most important first: what is determined, how well, and whether the takes agree. */
export function verdict(result: Result): Statement[] {
  const { model, examination, solution, coverage } = result;
  const determined = determinedStatement(unitCounts(model, examination.units));
  return [
    determined,
    ...(determined.tone === 'bad' ? [] : [typicalUncertainty(examination.units, coverage)]),
    agreementStatement(examination.whole, solution.readingUncertainty.source === 'repeats'),
  ];
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

function agreementStatement(whole: WholeFinding, fromRepeats: boolean): Statement {
  if (whole.degreesOfFreedom < NONE_SPARE) {
    return { text: 'No take is spare, so that nothing checks these levels.', tone: 'warning' };
  }
  const deviation = whole.residualDeviation;
  if (deviation < ROUNDING) return { text: 'The fit leaves nothing unexplained.', tone: 'plain' };
  const left = `The fit leaves ${roundedText(deviation, deviation)} dB (standard deviation) unexplained.`;
  if (Number.isNaN(whole.chiSquarePerDof)) return { text: left, tone: 'plain' };
  const ratio = Math.sqrt(whole.chiSquarePerDof);
  const figure = `chi-square per degree of freedom ${whole.chiSquarePerDof.toPrecision(2)}`;
  const chance = NOTEWORTHY_DEVIATIONS / Math.sqrt(2 * whole.degreesOfFreedom);
  const noteworthy = Math.abs(ratio - 1) > Math.max(NOTEWORTHY_RATIO, chance);
  if (!noteworthy) {
    return { text: `${left} The uncertainties of the readings allow for that (${figure}).`, tone: 'good' };
  }
  const times = `${left} That is ${ratio.toPrecision(2)} times what the uncertainties of the readings say (${figure})`;
  if (ratio < 1) return { text: `${times}: they look too large, and with them those of the levels.`, tone: 'warning' };
  const why = fromRepeats
    ? 'repeats do not show what a new mounting or another partner changes, or some takes disagree'
    : 'they are too small, or some takes disagree';
  return { text: `${times}: ${why}. The uncertainties of the levels are then too small as well.`, tone: 'warning' };
}

/** What the levels mean: the model and why, and what they still hold. */
export function modelSentences(model: Model): string[] {
  const { kind, reason } = model.choice;
  if (kind === 'directional') return [`Directional model: emit and receive of a unit are told apart. ${reason}`];
  return [
    `Reciprocal model: one response a unit, the same for emitting and receiving. ${reason}`,
    'Differences between units stand on their own; along frequency each level holds half of the path, and half of what lies between emitting and receiving.',
  ];
}

/** A freedom in words: what is open or rests on a datum, what is known all the same, and the cure. */
export function openSentence(finding: OpenFinding, frequencies: Float64Array): string {
  const at = atFrequencies(finding.frequencies, frequencies);
  const isDatum = finding.status === 'datum';
  const responses = listText(finding.responses, isDatum ? FEW_NAMES : MOST_NAMES);
  const plural = finding.responses.length;
  const opening = isDatum
    ? `Datum ${at}: ${finding.convention}. Without it ${responses} would have no level`
    : `Open ${at}: ${responses} ${hasHave(plural)} no level`;
  const why: Record<OpenFinding['kind'], string> = {
    'no odd loop': ', since no odd loop ties them.',
    'not measured': ', since nothing was measured there.',
    'one constant': ', since the takes tell only sums of emit and receive.',
    path: ', since the takes do not tell the path from the units.',
    gain: ', since the takes do not tell it from the units.',
  };
  return [`${opening}${why[finding.kind]}`, knownSentence(finding), cureSentence(finding)]
    .filter((sentence) => sentence !== '')
    .join(' ');
}

function knownSentence({ kind, sides, status }: OpenFinding): string {
  const isTold = kind === 'no odd loop' || (kind === 'one constant' && status === 'open');
  if (sides === undefined || !isTold) return '';
  const [one, other] = [...sides].sort((a, b) => b.length - a.length) as [readonly string[], readonly string[]];
  if (other.length === 0) return '';
  if (one.length === 1) return `Known is the sum ${one[0]} + ${other[0]}.`;
  const differences = [one, other].filter((side) => side.length > 1).map((side) => listText(side, FEW_NAMES));
  return `Known are the differences among ${differences.join(', among ')}, and the sums of one of ${listText(one, FEW_NAMES)} with ${other.length === 1 ? '' : 'one of '}${listText(other, FEW_NAMES)}.`;
}

function cureSentence({ kind, extraTakes }: OpenFinding): string {
  const texts = extraTakes.map((take) => takeText(take, extraTakes.length > 1));
  // A take between two directional parts leaves one constant for both instead of one for each.
  const tie =
    kind === 'one constant' && texts.length > 0 ? `A take would tie them to the others: ${texts.join()}. ` : '';
  if (texts.length > 0 && tie === '') {
    return `${texts.length === 1 ? 'One take' : 'These takes together'} would settle it: ${listText(texts)}.`;
  }
  const cures: Record<OpenFinding['kind'], string> = {
    'no odd loop': 'A reference for one of them (--refs) would settle it.',
    'not measured': 'A take of it at these frequencies would settle it.',
    'one constant': 'A reference (--refs) or a reversible unit (--reversible) would settle it.',
    path: 'A known level of the path (--path FILE) would settle it.',
    gain: 'The same pairs in a second session, or a known gain (gain_db), would settle it.',
  };
  return tie + cures[kind];
}

/** `A > B`, with the path it must go over. */
function takeText({ emitter, receiver, path }: ExtraTake, isOneOfSeveral: boolean): string {
  const to = receiver === THIRD_UNIT && isOneOfSeveral ? `${THIRD_UNIT} (the same each time)` : receiver;
  return path === '' ? `${emitter} > ${to}` : `${emitter} > ${to} over ${path}`;
}

/** Units with a level that nothing checks; empty where every one is checked, and where none is (the verdict says so). */
export function uncheckedSentence(model: Model, findings: readonly UnitFinding[]): string {
  const told = findings.filter(({ counts }) => counts.ok + counts.datum > 0);
  const names = told.filter((unit) => unit.unchecked).map((unit) => responseName(model.responses[unit.response]!));
  if (names.length === 0 || names.length === told.length) return '';
  const one = names.length === 1;
  return `Nothing checks ${listText(names)}: every reading of ${one ? 'it' : 'them'} is needed for ${one ? 'its level' : 'their levels'}. A take with a further partner ${one ? '' : 'for each '}would.`;
}

/** Session gains as estimated, with their standard uncertainties; empty where there are none. */
export function gainSentence({ model, solution }: Pick<Result, 'model' | 'solution'>): string {
  const free = solution.gains.filter((gain) => gain.status === 'ok');
  if (free.length === 0) return '';
  const texts = free.map(({ link, value, uncertainty }) => {
    const u = Number.isNaN(uncertainty) ? '' : ` (u ${roundedText(uncertainty, uncertainty)} dB)`;
    return `${model.links[link]!.name} ${roundedText(value, uncertainty)} dB${u}`;
  });
  return `Gains: ${texts.join(', ')}.`;
}

/** How many rows could not be used; empty where all could. */
export function unusedSentence(input: InputSummary): string {
  const count = input.unused.length;
  return count === 0 ? '' : `${counted(count, 'row')} could not be used.`;
}

/** Notices of reading and gathering, each once. */
export function allNotices(input: InputSummary, set: TakeSet): string[] {
  return [...new Set([...input.notices, ...set.notices])];
}

function isAre(count: number): string {
  return count === 1 ? 'is' : 'are';
}

function hasHave(count: number): string {
  return count === 1 ? 'has' : 'have';
}
