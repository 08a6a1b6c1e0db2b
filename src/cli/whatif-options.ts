import type { Command } from 'commander';
import type { LadderStep } from '../estimate/scatter-step.ts';
import { type FrequencyRange, frequencyText } from '../quantity/frequency.ts';
import { LADDER_STEPS, type StepFigure } from '../whatif/assumed-scatter.ts';
import { type BenchTimes, DEFAULT_TIMES } from '../whatif/costs.ts';
import { CRITERIA, type Criterion } from '../whatif/criterion.ts';
import type { UnitPair } from '../whatif/design.ts';
import { PATTERNS, type PatternName } from '../whatif/patterns.ts';
import { UsageError } from './usage-error.ts';
import {
  bandOf,
  FIGURE_EXPECTED,
  frequencyList,
  listOr,
  numberOf,
  pairOf,
  patternsOf,
  stepFigure,
  unitsOf,
} from './whatif-values.ts';

/** What the command line of `whatif` asks for. */
export interface WhatifRequest {
  readonly designs: readonly string[];
  readonly units: readonly string[] | undefined;
  readonly patterns: readonly PatternName[];
  readonly seatings: number;
  readonly repeats: number;
  readonly from: string | undefined;
  /** Of the run; absent for all frequencies. */
  readonly band: FrequencyRange | undefined;
  readonly model: 'auto' | 'reciprocal' | 'directional';
  /** Absent steps are assumed. */
  readonly scatter: Partial<Record<LadderStep, StepFigure>>;
  readonly effect: number | undefined;
  readonly times: BenchTimes;
  readonly timesAreAssumed: boolean;
  readonly add: number | undefined;
  readonly budget: number | undefined;
  readonly criterion: Criterion;
  readonly forbidden: readonly UnitPair[];
  readonly again: boolean;
  readonly order: boolean;
  /** Whether both units are mounted anew for every pair. */
  readonly fresh: boolean;
  readonly control: UnitPair | undefined;
  readonly sheet: string | undefined;
  /** Hertz. */
  readonly frequencies: readonly number[];
  readonly rehearse: number | undefined;
  /** dB; absent: twice the largest smallest shift. */
  readonly fault: number | undefined;
  readonly seed: number;
  readonly coverage: number;
  readonly risk: number;
  readonly out: string | undefined;
  readonly json: boolean;
  readonly quiet: boolean;
  /** As typed, for the record. */
  readonly typed: Readonly<Record<string, unknown>>;
}

/** Adds the options of `whatif`. */
export function addWhatifOptions(command: Command): Command {
  return command
    .argument('[DESIGN...]', 'CSV files of pairs: emitter, receiver, and seatings, repeats, minutes, forbidden, …')
    .option('--units <N|A,B,…>', 'how many units there are, or their names')
    .option('--pattern <NAME,…>', `designs by name: ${PATTERNS.join(', ')}`)
    .option('--seatings <M>', 'how often each pair is mounted (default: 1)')
    .option('--repeats <N>', 'takes of each seating (default: 1)')
    .option('--from <RESULT>', 'takes and scatter of an earlier run, which count as made')
    .option('--band <LO..HI>', "bands of the run that count, such as '2 kHz..80 kHz'")
    .option('--model <KIND>', 'reciprocal, directional or auto (default: auto)')
    .option('--repeat-db <DB>', "scatter of a pair taken again; or by bands: '2 kHz..20 kHz=0.1,20 kHz..80 kHz=0.2'")
    .option('--reseat-db <DB>', 'scatter of a pair mounted again; the same forms')
    .option('--partner-db <DB>', 'scatter of pairs about the additive model; the same forms')
    .option('--effect <DB>', 'partner effect whose chance to be found is wanted')
    .option('--add <K>', 'suggest the K best pairs to mount besides')
    .option('--budget-minutes <M>', 'suggest the best takes that fit into so many minutes')
    .option('--for <WHAT>', `best for ${CRITERIA.join(', ')} (default: mean)`)
    .option('--forbid <A>B,…>', 'pairs that cannot be taken; may be repeated', collect)
    .option('--again', 'suggested pairs may be mounted more than once')
    .option('--order', 'order the takes so that little is mounted between them')
    .option('--fresh', 'both units are mounted anew for every pair, even if one stands there already')
    .option('--control <A>B>', 'take this pair at start, middle and end as well')
    .option('--sheet <CSV>', 'write a run sheet, and a page to print beside it')
    .option('--at <FREQUENCIES>', "frequencies of the sheet, such as '1 kHz,2 kHz'; else each take names a file")
    .option('--rehearse <N>', 'simulate the design N times and solve it')
    .option('--fault <DB>', 'shift of one take that a rehearsal plants')
    .option('--take-minutes <MIN>', `minutes of a take (default: ${DEFAULT_TIMES.take})`)
    .option('--reseat-minutes <MIN>', `minutes to mount one unit (default: ${DEFAULT_TIMES.reseat})`)
    .option('--coverage <P>', 'coverage probability of a rehearsal (default: 0.95)')
    .option('--risk <P>', 'chance of a false alarm in a bench with nothing wrong (default: 0.05)')
    .option('--seed <N>', 'of searches and rehearsals; the same seed gives the same answer (default: 1)')
    .option('--out <DIR>', 'write the design and its figures as tables to this new folder')
    .option('--json', 'print JSON instead of text')
    .option('--quiet', 'no summary and no progress');
}

function collect(value: string, before: readonly string[] | undefined): readonly string[] {
  return [...(before ?? []), value];
}

const MOST_TIMES = 100;
const MOST_ADDED = 400;
const MOST_RUNS = 10_000;

/**
 * Checks what was typed.
 * @throws UsageError with everything that cannot be understood.
 */
export function readWhatifRequest(
  designs: readonly string[],
  values: Readonly<Record<string, unknown>>,
): WhatifRequest {
  const said: string[] = [];
  const say = (name: string, found: unknown, expected: string, example: string) =>
    said.push(`--${name}: found ${JSON.stringify(found)}; expected ${expected}. Example: --${name} ${example}`);
  const number = (name: string, key: string, isFit: (value: number) => boolean, expected: string, example: string) => {
    const typed = values[key];
    if (typed === undefined) return undefined;
    const value = numberOf(typed);
    if (value !== undefined && isFit(value)) return value;
    say(name, typed, expected, example);
    return undefined;
  };
  const whole = (name: string, key: string, least: number, most: number, example: string) =>
    number(
      name,
      key,
      (value) => Number.isInteger(value) && value >= least && value <= most,
      `a whole number from ${least} to ${most}`,
      example,
    );
  const word = <Word extends string>(name: string, key: string, words: readonly Word[], otherwise: Word): Word => {
    const typed = values[key];
    if (typed === undefined) return otherwise;
    const found = words.find((candidate) => candidate === typed);
    if (found === undefined) say(name, typed, listOr(words), words[0]!);
    return found ?? otherwise;
  };
  const name = (option: string, key: string, example: string) => {
    const typed = values[key];
    if (typeof typed !== 'string') return undefined;
    if (typed.trim() !== '' && !typed.startsWith('--')) return typed;
    say(option, typed, 'a name', example);
    return undefined;
  };
  const minutes = (option: string, key: string) =>
    number(option, key, (value) => value >= 0, 'minutes, 0 or more', '5');

  const scatter: Partial<Record<LadderStep, StepFigure>> = {};
  for (const step of LADDER_STEPS) {
    const typed = values[`${step}Db`];
    if (typeof typed !== 'string') continue;
    const figure = stepFigure(typed);
    if (figure === undefined) say(`${step}-db`, typed, FIGURE_EXPECTED, `'2 kHz..20 kHz=0.1,20 kHz..80 kHz=0.2'`);
    else scatter[step] = figure;
  }
  const take = minutes('take-minutes', 'takeMinutes');
  const reseat = minutes('reseat-minutes', 'reseatMinutes');
  const units = unitsOf(values.units, say);
  const patterns = patternsOf(values.pattern, say);
  const control = typeof values.control === 'string' ? pairOf(values.control) : undefined;
  if (values.control !== undefined && control === undefined) {
    say('control', values.control, 'two different units with > between them', "'S1>S2'");
  }
  const forbidden: UnitPair[] = [];
  for (const text of (values.forbid as readonly string[] | undefined) ?? []) {
    for (const part of text.split(',')) {
      const pair = pairOf(part);
      if (pair === undefined) say('forbid', part, 'two different units with > between them', "'S1>S2,S1>S3'");
      else forbidden.push(pair);
    }
  }
  const band = bandOf(values.band, say);
  const frequencies = typeof values.at === 'string' ? frequencyList(values.at) : [];
  if (frequencies === undefined) say('at', values.at, 'different frequencies with their units', "'1 kHz,2 kHz,4 kHz'");
  const request: WhatifRequest = {
    designs,
    units,
    patterns,
    seatings: whole('seatings', 'seatings', 1, MOST_TIMES, '2') ?? 1,
    repeats: whole('repeats', 'repeats', 1, MOST_TIMES, '2') ?? 1,
    from: name('from', 'from', 'result'),
    band,
    model: word('model', 'model', ['auto', 'reciprocal', 'directional'] as const, 'auto'),
    scatter,
    effect: number('effect', 'effect', (value) => value > 0, 'an effect in dB, above 0', '1'),
    times: { take: take ?? DEFAULT_TIMES.take, reseat: reseat ?? DEFAULT_TIMES.reseat },
    timesAreAssumed: take === undefined || reseat === undefined,
    add: whole('add', 'add', 1, MOST_ADDED, '3'),
    budget: number('budget-minutes', 'budgetMinutes', (value) => value > 0, 'minutes, above 0', '240'),
    criterion: word('for', 'for', CRITERIA, 'mean'),
    forbidden,
    again: values.again === true,
    order: values.order === true,
    fresh: values.fresh === true,
    control,
    sheet: name('sheet', 'sheet', 'sheet.csv'),
    frequencies: frequencies ?? [],
    rehearse: whole('rehearse', 'rehearse', 1, MOST_RUNS, '100'),
    fault: number('fault', 'fault', (value) => value > 0, 'a shift in dB, above 0', '3'),
    seed: whole('seed', 'seed', 0, 2 ** 31 - 1, '1') ?? 1,
    coverage:
      number('coverage', 'coverage', (p) => p > 0 && p < 1, 'a probability above 0 and below 1', '0.95') ?? 0.95,
    risk: number('risk', 'risk', (p) => p > 0 && p < 0.5, 'a probability above 0 and below 0.5', '0.05') ?? 0.05,
    out: name('out', 'out', 'plan'),
    json: values.json === true,
    quiet: values.quiet === true,
    typed: Object.fromEntries(Object.entries({ designs, ...values }).filter(([, value]) => value !== undefined)),
  };
  said.push(...togetherTroubles(request));
  if (said.length > 0) throw new UsageError(said);
  return request;
}

/** What each option allows and another one does not. */
function togetherTroubles(request: WhatifRequest): string[] {
  const { designs, patterns, from, band, add, budget, sheet, frequencies, rehearse, control, order, fresh, fault } =
    request;
  const said: string[] = [];
  const suggests = add !== undefined || budget !== undefined;
  const named = designs.length + patterns.length;
  for (const file of designs) {
    if (file.trim() === '') said.push(`DESIGN: found ${JSON.stringify(file)}; expected a file name.`);
  }
  const hasUnits = request.typed.units !== undefined;
  if (named === 0 && from === undefined && !(hasUnits && suggests)) {
    said.push(
      !hasUnits
        ? 'DESIGN: found none; expected a CSV of pairs, --units with --pattern, or --from. Example: oddloop whatif --units 6 --pattern all'
        : '--units: found no pattern with it; expected --pattern, --add or --budget-minutes. Example: oddloop whatif --units 6 --pattern all',
    );
  }
  if (patterns.length > 0 && !hasUnits) {
    said.push('--pattern: found no number of units; expected --units. Example: --units 6 --pattern all');
  }
  if (add !== undefined && budget !== undefined) {
    said.push('--add and --budget-minutes: found both; expected one of them: a number of takes, or minutes to fill.');
  }
  const single = [
    ...(add === undefined ? [] : ['--add']),
    ...(budget === undefined ? [] : ['--budget-minutes']),
    ...(sheet === undefined ? [] : ['--sheet']),
    ...(order ? ['--order'] : []),
    ...(control === undefined ? [] : ['--control']),
    ...(rehearse === undefined ? [] : ['--rehearse']),
  ];
  if (named > 1 && single.length > 0) {
    said.push(`${single.join(', ')}: found ${named} designs; expected one, since this is about a single design.`);
  }
  if (from !== undefined && named > 0) {
    said.push('--from: found a design beside it; expected the run alone. Leave DESIGN and --pattern out.');
  }
  if (band !== undefined && from === undefined) {
    said.push('--band: found no run; expected --from, whose bands it chooses from.');
  }
  if (frequencies.length > 0 && sheet === undefined) {
    said.push('--at: found no sheet; expected --sheet. Example: --sheet sheet.csv --at 1kHz,2kHz');
  }
  if (sheet !== undefined && !sheet.toLowerCase().endsWith('.csv')) {
    said.push(`--sheet: found ${JSON.stringify(sheet)}; expected a name that ends in .csv. Example: --sheet sheet.csv`);
  }
  if (order && fresh) {
    said.push(
      '--order and --fresh: found both; expected one of them: with every unit mounted anew no order is better.',
    );
  }
  if (fault !== undefined && rehearse === undefined) {
    said.push('--fault: found no rehearsal; expected --rehearse. Example: --rehearse 100 --fault 3');
  }
  return said;
}

/** A stretch that a step has no figure for, in words. */
export function missingText(step: LadderStep, from: number, to: number): string {
  return `--${step}-db: found no figure for ${frequencyText(from)} to ${frequencyText(to)}; expected one for every band that another step has.`;
}
