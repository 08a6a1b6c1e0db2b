/** Sentences about designs: what they will deliver, what they rest on, what was suggested. */
import type { OpenFinding } from '../findings/examination.ts';
import { frequencyText } from '../quantity/frequency.ts';
import { roundedText } from '../quantity/rounding.ts';
import type { AssumedBand } from '../whatif/assumed-scatter.ts';
import { type Figure, figuresOf } from '../whatif/compare.ts';
import type { BenchCost } from '../whatif/costs.ts';
import type { Criterion, Merit } from '../whatif/criterion.ts';
import type { PlannedSeating } from '../whatif/design.ts';
import { type BandPrediction, DETECTABILITY, type Prediction, type UnitPrediction } from '../whatif/predict.ts';
import { placedUnit } from './response-name.ts';
import type { SuggestedTakes, WhatifResult } from './whatif-result.ts';
import { bandText, counted, FEW_NAMES, hasHave, isAre, listText, type Statement } from './wording.ts';

/** A standard uncertainty or an effect in dB with two digits; `none` where there is none. */
export function figureText(value: number): string {
  return Number.isNaN(value) ? 'none' : roundedText(value, value);
}

/** `45 min`, `2 h 5 min`. */
export function minutesText(minutes: number): string {
  const whole = Math.round(minutes);
  const [hours, rest] = [Math.floor(whole / 60), whole % 60];
  return hours === 0 ? `${rest} min` : rest === 0 ? `${hours} h` : `${hours} h ${rest} min`;
}

export function costText({ takes, mountings, minutes }: BenchCost): string {
  return `${counted(takes, 'take')}, ${counted(mountings, 'mounting')} of a unit, ${minutesText(minutes)}`;
}

/** `S1 > S2`, with what tells it from other seatings of the pair. */
export function seatingText({ emitter, receiver, emitterMount, receiverMount, path }: PlannedSeating): string {
  const pair = `${placedUnit({ unit: emitter, mount: emitterMount })} > ${placedUnit({ unit: receiver, mount: receiverMount })}`;
  return path === '' ? pair : `${pair} over ${path}`;
}

/** `S1` where one response serves both roles, else `S1 emit`. */
export function unitText(unit: Pick<UnitPrediction, 'unit' | 'mount' | 'role'>): string {
  return unit.role === 'both' ? placedUnit(unit) : `${placedUnit(unit)} ${unit.role}`;
}

/** What the design is, in one sentence. */
export function designSentence({ bench, cost }: Prediction): string {
  const { seatings } = bench.design;
  const made = seatings.filter(({ kind }) => kind === 'made').reduce((sum, { repeats }) => sum + repeats, 0);
  const pairs = new Set(seatings.map(({ emitter, receiver }) => JSON.stringify([emitter, receiver].sort()))).size;
  const parts = [counted(bench.design.units.length, 'unit'), counted(pairs, 'pair')];
  const done = made === 0 ? '' : `${counted(made, 'take')} made already; `;
  return `Design ${bench.design.name}: ${parts.join(', ')}; ${done}${made > 0 ? 'to come: ' : ''}${costText(cost)}.`;
}

/** The verdict on a design, most important first. */
export function designVerdict(prediction: Prediction): Statement[] {
  const band = prediction.bands[prediction.worstBand]!;
  return [toldStatement(band), checkedStatement(prediction, band), partnerStatement(band)];
}

function toldStatement({ units, mean, worst, scatter }: BandPrediction): Statement {
  const open = units.filter(({ status }) => status === 'open');
  const where = Number.isNaN(scatter.from) ? '' : ` at ${bandText(scatter)}, the worst band`;
  const figures = `u ${figureText(mean)} dB typical, ${figureText(worst)} dB worst, as seated${where}`;
  if (open.length === units.length) return { text: 'Nothing can be told apart with this design.', tone: 'bad' };
  if (open.length > 0) {
    const names = listText(open.map(unitText), FEW_NAMES);
    return {
      text: `${open.length} of ${counted(units.length, 'response')} would have no level: ${names}. The others: ${figures}.`,
      tone: 'bad',
    };
  }
  const isDatum = units.some(({ status }) => status === 'datum');
  const datum = isDatum ? ' Levels rest on a datum, since takes tell only sums of emit and receive.' : '';
  return { text: `All ${counted(units.length, 'response')} can be told apart: ${figures}.${datum}`, tone: 'good' };
}

function checkedStatement(prediction: Prediction, { takes }: BandPrediction): Statement {
  const { uncheckable, shift } = figuresOf(prediction);
  const found = `a constant shift of ${figureText(shift)} dB in any ${uncheckable > 0 ? 'other' : ''} take would be found`;
  if (uncheckable === takes.length) return { text: 'Nothing checks any of the takes.', tone: 'warning' };
  if (uncheckable > 0) {
    return {
      text: `Nothing checks ${uncheckable} of ${counted(takes.length, 'take')}; ${found.replace('  ', ' ')}.`,
      tone: 'warning',
    };
  }
  return { text: `Every take is checked by others: ${found.replace('  ', ' ')}.`, tone: 'good' };
}

function partnerStatement({ units }: BandPrediction): Statement {
  const testable = units.filter(({ smallestEffect }) => !Number.isNaN(smallestEffect));
  if (testable.length === 0) {
    return {
      text: 'Whether units depend on their partner cannot be tested: that takes pairs mounted more than once, and more pairs than units.',
      tone: 'warning',
    };
  }
  const worst = Math.max(...testable.map(({ smallestEffect }) => smallestEffect));
  const rest = units.length - testable.length;
  const but = rest === 0 ? '' : ` (not testable for ${counted(rest, 'response')})`;
  return {
    text: `A unit that changes by ${figureText(worst)} dB from partner to partner would be found${but}.`,
    tone: 'plain',
  };
}

/** What the figures rest on; assumptions are called so. */
export function scatterSentence(bands: readonly AssumedBand[]): string {
  const first = bands[0]!;
  if (bands.length > 1) {
    const some = bands.filter(({ assumed }) => assumed.length > 0).length;
    const assumed = some === 0 ? '' : ` In ${counted(some, 'band')} a step is an assumption, marked *.`;
    return `Scatter band by band, as in the table.${assumed}`;
  }
  const steps = (['repeat', 'reseat', 'partner'] as const).map((step) => {
    const mark = first.assumed.includes(step) ? ' (assumption)' : '';
    return `${step} ${figureText(first[step])} dB${mark}`;
  });
  const how =
    first.assumed.length === 0
      ? ''
      : ` Give ${listText(first.assumed.map((step) => `--${step}-db`))} where you know better.`;
  return `Scatter of a pair: ${steps.join(', ')}.${how}`;
}

/** What the minutes rest on. */
export function timesSentence({ times, timesAreAssumed }: Pick<WhatifResult, 'times' | 'timesAreAssumed'>): string {
  const figures = `${times.take} min a take, ${times.reseat} min a mounting of one unit`;
  return `Time: ${figures}${timesAreAssumed ? ' (assumption; --take-minutes, --reseat-minutes)' : ''}.`;
}

const WANTED: Readonly<Record<Criterion, string>> = {
  mean: 'the smallest typical u',
  worst: 'the smallest u of the worst unit',
  differences: 'the smallest u of differences',
  checks: 'the smallest shift that is found in every take',
};

/** How the pairs of a plan without an order are mounted; empty where none is to come. */
function freshSentence(seatings: readonly PlannedSeating[]): string {
  const isToCome = seatings.some(({ kind }) => kind !== 'made');
  return isToCome ? 'Both units of every pair to come are taken as mounted anew for it.' : '';
}

/** What was suggested, how surely it is the best, and which constraints it does not meet. */
export function suggestionSentences({ suggestion, criterion, budget, isCheapest }: SuggestedTakes): string[] {
  const { steps, isExhaustive, tried, hasAgain } = suggestion;
  const last = steps.at(-1)!.merit;
  const within = budget === undefined ? '' : ` within ${minutesText(budget)}`;
  const surely = isCheapest
    ? 'Only the quickest set fits: it was not chosen for how well it does.'
    : isExhaustive
      ? `The best of all ${tried} possible sets: every one was tried.`
      : `The best that an exchange from ${tried} starts found; there may be a better one.`;
  return [
    `Suggested: ${counted(steps.length, 'mounted pair')}${within}, for ${WANTED[criterion]}. ${surely}`,
    'The search takes both units of every pair as mounted anew for it.',
    ...(hasAgain ? ['New pairs alone were not enough, or --again was given: pairs are mounted again.'] : []),
    ...(last.open > 0
      ? [`CANNOT BE MET: with these takes ${counted(last.open, 'unit')} still ${hasHave(last.open)} no level.`]
      : []),
    ...(last.open === 0 && last.uncheckable > 0
      ? [
          `CANNOT BE MET: ${counted(last.uncheckable, 'pair')} ${isAre(last.uncheckable)} still checked by nothing. More takes, or repeats, would.`,
        ]
      : []),
  ];
}

/** The figure a suggestion went for, in dB, after one of its takes. */
export function meritValue({ open, uncheckable, value }: Merit, criterion: Criterion): number {
  if (open > 0) return Number.NaN;
  if (criterion !== 'checks') return value;
  return uncheckable > 0 || !Number.isFinite(value) ? Number.NaN : DETECTABILITY * value;
}

/** What a design leaves open. Without frequencies of its own, what is open is so at every one. */
export function openAsTold({ open, bench: { set } }: Prediction): {
  readonly open: readonly OpenFinding[];
  readonly frequencies: Float64Array;
} {
  if (set.frequencies.length > 1) return { open, frequencies: set.frequencies };
  const both = Float64Array.from([0, 1], (k) => set.frequencies[0]! + k);
  return { open: open.map((finding) => ({ ...finding, frequencies: [0, 1] })), frequencies: both };
}

/** `10 kHz to 20 kHz`; `all frequencies` where one figure serves all. */
export function stretchText({ from, to }: AssumedBand): string {
  return Number.isNaN(from) ? 'all frequencies' : `${frequencyText(from, 3)} to ${frequencyText(to, 3)}`;
}

/** What the figures that designs are compared by are called. */
export const COMPARED_NAMES: Readonly<Record<Figure, string>> = {
  open: 'responses without a level',
  mean: 'u typical, dB',
  worst: 'u of the worst unit, dB',
  reseated: 'u reseated, dB',
  partner: 'u on another partner, dB',
  difference: 'u of differences, dB',
  uncheckable: 'takes that nothing checks',
  shift: 'smallest shift found, dB',
  effect: 'smallest partner effect, dB',
  takes: 'takes to come',
  mountings: 'mountings of a unit',
  minutes: 'time',
};
const COUNTS: ReadonlySet<Figure> = new Set(['open', 'uncheckable', 'takes', 'mountings']);

/** A compared figure with its digits. */
export function comparedText(figure: Figure, value: number): string {
  if (COUNTS.has(figure)) return String(value);
  return figure === 'minutes' ? minutesText(value) : figureText(value);
}

/** How the takes are ordered; without an order, how the pairs are mounted. */
export function orderSentence({ ordered, predictions }: Pick<WhatifResult, 'ordered' | 'predictions'>): string {
  const { seatings } = predictions.at(-1)!.bench.design;
  if (ordered === undefined) return freshSentence(seatings);
  const { mountings, given, isOptimal } = ordered;
  const saved =
    given > mountings ? `, ${given - mountings} fewer than in the order given` : ', as many as in the order given';
  const best = isOptimal ? 'No order needs fewer.' : 'There may be an order with fewer.';
  return `In order: ${counted(mountings, 'mounting')} of a unit${saved}, since a unit that is needed next stays mounted. ${best} Pairs that share a seating share its error: u counts that in; --fresh mounts both units anew for every pair.`;
}
