import { type FrequencyRange, parseFrequency, parseRange } from '../quantity/frequency.ts';
import type { StepFigure } from '../whatif/assumed-scatter.ts';
import type { UnitPair } from '../whatif/design.ts';
import { FEWEST_UNITS, namedUnits, PATTERNS, type PatternName } from '../whatif/patterns.ts';

/** Says what is wrong with an option: its name, what was found, what was expected, and an example of its value. */
export type Say = (name: string, found: unknown, expected: string, example: string) => void;

/** More units than this are no bench. Common practice, no source. */
const MOST_UNITS = 200;

export const FIGURE_EXPECTED = 'a standard deviation in dB, 0 or more, or figures by bands that do not overlap';

/** `0.3`, or `2 kHz..20 kHz=0.1,20 kHz..80 kHz=0.2`; undefined for anything else. */
export function stepFigure(text: string): StepFigure | undefined {
  const single = numberOf(text);
  if (single !== undefined) return single;
  const bands = text.split(',').map((part) => {
    const [range, figure, ...rest] = part.split('=');
    const band = rest.length > 0 || range === undefined ? undefined : parseRange(range);
    const value = figure === undefined ? undefined : numberOf(figure);
    return band === undefined || value === undefined ? undefined : { from: band.from, to: band.to, value };
  });
  if (!bands.every((band) => band !== undefined)) return undefined;
  const sorted = [...bands].sort((a, b) => a.from - b.from);
  return sorted.some((band, b) => b > 0 && band.from < sorted[b - 1]!.to) ? undefined : sorted;
}

/** `1 kHz,2 kHz`, ascending; undefined where one is no frequency or comes twice. */
export function frequencyList(text: string): number[] | undefined {
  const found = text.split(',').map(parseFrequency);
  if (!found.every((frequency) => frequency !== undefined)) return undefined;
  return new Set(found).size === found.length ? found.sort((a, b) => a - b) : undefined;
}

/** A number from 0 on, with a decimal point. */
export function numberOf(typed: unknown): number | undefined {
  const text = typeof typed === 'string' ? typed.trim() : '';
  return /^(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(text) && Number.isFinite(Number(text)) ? Number(text) : undefined;
}

/** The range that `--band` names; says where it cannot be read. */
export function bandOf(typed: unknown, say: Say): FrequencyRange | undefined {
  if (typed === undefined) return undefined;
  const band = typeof typed === 'string' ? parseRange(typed) : undefined;
  if (band === undefined) say('band', typed, 'two frequencies with their units, the lower first', "'2 kHz..80 kHz'");
  return band;
}

export function unitsOf(typed: unknown, say: Say): readonly string[] | undefined {
  if (typeof typed !== 'string') return undefined;
  const enough = `at least ${FEWEST_UNITS} units, as a number or by name; three are the fewest that takes alone tell apart`;
  const count = numberOf(typed);
  if (count !== undefined) {
    if (Number.isInteger(count) && count >= FEWEST_UNITS && count <= MOST_UNITS) return namedUnits(count);
    say('units', typed, `${enough}, and at most ${MOST_UNITS}`, '6');
    return undefined;
  }
  const names = typed.split(',').map((text) => text.trim());
  if (names.length >= FEWEST_UNITS && names.every((text) => text !== '') && new Set(names).size === names.length) {
    return names;
  }
  say('units', typed, `${enough}, each name once`, 'S1,S2,S3');
  return undefined;
}

export function patternsOf(typed: unknown, say: Say): PatternName[] {
  if (typeof typed !== 'string') return [];
  const found: PatternName[] = [];
  for (const text of typed.split(',')) {
    const pattern = PATTERNS.find((candidate) => candidate === text.trim());
    if (pattern === undefined) say('pattern', text, listOr(PATTERNS), 'all');
    else found.push(pattern);
  }
  return found;
}

export function pairOf(text: string): UnitPair | undefined {
  const [one = '', other = '', ...rest] = text.split('>').map((part) => part.trim());
  return rest.length > 0 || one === '' || other === '' || one === other ? undefined : [one, other];
}

export function listOr(words: readonly string[]): string {
  return `${words.slice(0, -1).join(', ')} or ${words.at(-1)}`;
}
