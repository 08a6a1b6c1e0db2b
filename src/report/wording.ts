/**
 * Findings become sentences here and in the `…-wording.ts` files, and nowhere else. Sentences go to terminals and files
 * alike and carry the user's own labels.
 */
import type { Model } from '../model/model.ts';
import { frequencyText } from '../quantity/frequency.ts';
import { roundedText } from '../quantity/rounding.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { BenchCounts } from './bench-counts.ts';
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
export const MOST_NAMES = 40;
/** Names listed where the sentence says the rest. */
export const FEW_NAMES = 6;

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

/** `71–89 kHz`, `890 Hz–1.1 kHz`: two digits an edge, enough to find a band again. */
export function bandText({ from, to }: { readonly from: number; readonly to: number }): string {
  const [low, high] = [frequencyText(from, 2), frequencyText(to, 2)];
  const [figure, unit] = low.split(' ') as [string, string];
  return high.endsWith(` ${unit}`) ? `${figure}–${high}` : `${low}–${high}`;
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

/** What the levels mean: the model and why, and what they still hold. */
export function modelSentences(model: Model): string[] {
  const { kind, reason } = model.choice;
  if (kind === 'directional') return [`Directional model: emit and receive of a unit are told apart. ${reason}`];
  return [
    `Reciprocal model: one response a unit, the same for emitting and receiving. ${reason}`,
    'Differences between units stand on their own; along frequency each level holds half of the path, and half of what lies between emitting and receiving.',
  ];
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

export function isAre(count: number): string {
  return count === 1 ? 'is' : 'are';
}

export function hasHave(count: number): string {
  return count === 1 ? 'has' : 'have';
}
