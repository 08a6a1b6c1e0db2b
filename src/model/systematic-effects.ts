import { InputError, type InputFault } from '../quantity/input-fault.ts';
import type { BudgetLine, BudgetTarget } from '../readings/budget-lines.ts';
import type { Take, TakeSet } from '../takes/take-set.ts';
import { unknownUnit } from './unknown-unit.ts';

/** One systematic effect: an unknown amount in dB, the same wherever it reaches, that the takes do not tell. */
export interface SystematicEffect {
  readonly line: BudgetLine;
  /** For each take, how often the effect is in its level: 0, 1, or 2 where it belongs to a unit that is at both ends. */
  readonly factors: Float64Array;
  /** Whether it reaches a frequency. */
  readonly reaches: readonly boolean[];
}

/**
 * The effects of a budget on these takes: one a line, or one for every emitter, receiver, session, path or unit where the
 * line names the kind only.
 * @throws InputError for units, sessions and paths that no take names.
 */
export function systematicEffects(set: TakeSet, lines: readonly BudgetLine[]): SystematicEffect[] {
  const faults: InputFault[] = [];
  const effects = lines.flatMap((line) => {
    const reaches = Array.from(set.frequencies, (frequency) => isWithin(frequency, line, lines));
    return labelsOf(set, line, faults).map((label) => ({
      line,
      factors: Float64Array.from(set.takes, (take) => factorIn(take, line.target, label)),
      reaches,
    }));
  });
  if (faults.length > 0) throw new InputError(faults);
  return effects;
}

// Where two ranges of one name meet, the frequency belongs to the upper one.
function isWithin(frequency: number, line: BudgetLine, lines: readonly BudgetLine[]): boolean {
  if (!(frequency >= line.from && frequency <= line.to)) return false;
  return frequency < line.to || !lines.some(({ name, from }) => name === line.name && from === line.to);
}

function labelsOf(set: TakeSet, { target, label, place }: BudgetLine, faults: InputFault[]): string[] {
  if (target === 'all') return [''];
  const known = [...new Set(set.takes.flatMap((take) => labelsIn(take, target)))];
  if (label === '') return known;
  if (known.includes(label)) return [label];
  const at = { ...place, column: 'applies_to' };
  if (target === 'session' || target === 'path') {
    faults.push({
      place: at,
      found: `the ${target} ${label}, which no take names`,
      expected: `one of ${known.map((name) => name || '(none named)').join(', ')}`,
      remedy: 'Check its spelling against the files.',
    });
  } else faults.push(unknownUnit(at, label, known));
  return [];
}

function labelsIn(take: Take, target: Exclude<BudgetTarget, 'all'>): string[] {
  switch (target) {
    case 'emitter':
      return [take.emitter];
    case 'receiver':
      return [take.receiver];
    case 'session':
      return [take.session];
    case 'path':
      return [take.path];
    case 'unit':
      return [take.emitter, take.receiver];
  }
}

function factorIn(take: Take, target: BudgetTarget, label: string): number {
  return target === 'all' ? 1 : labelsIn(take, target).filter((name) => name === label).length;
}
