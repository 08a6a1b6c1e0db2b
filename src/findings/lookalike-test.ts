import { LINK_STATUS, type Solution } from '../estimate/solution.ts';
import { buildModel } from '../model/build-model.ts';
import type { Model, Response } from '../model/model.ts';
import type { ModelOptions } from '../model/model-options.ts';
import { coverageFactors } from '../numeric/student-t.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { type SettleOptions, settle } from './settle.ts';

/** Two units declared look-alikes, compared where the takes tell them apart without the declaration. */
export interface LookalikeFinding {
  readonly one: string;
  readonly other: string;
  readonly mount: string;
  readonly role: Response['role'];
  /** Frequencies at which both can be told apart with an uncertainty, and those of them where they differ by more than U. */
  readonly frequencies: number;
  readonly beyond: number;
  /** Median of one less other, and of its expanded uncertainty, in dB; NaN without such frequencies. */
  readonly difference: number;
  readonly expanded: number;
  readonly verdict: 'agree' | 'differ' | 'not testable';
}

/** Times the part of frequencies that chance puts beyond U, from which on it is not chance. Common practice, no source. */
const TIMES_CHANCE = 3;

/**
 * Tests declarations of look-alikes: solves once more with every unit for itself, and holds the units of each group against
 * each other. Nothing can be said where the declaration is what makes them solvable.
 */
export async function testLookalikes(
  set: TakeSet,
  options: ModelOptions,
  kind: Model['choice']['kind'],
  how: SettleOptions & { readonly coverage: number },
): Promise<LookalikeFinding[]> {
  if (options.lookalikes.length === 0) return [];
  const model = buildModel(set, { ...options, model: kind, lookalikes: [] });
  const { solution } = await settle(set, model, how);
  return options.lookalikes.flatMap((group) => {
    const own = model.responses.filter(({ unit }) => group.includes(unit));
    return own.flatMap((one, k) =>
      own
        .slice(k + 1)
        .filter((other) => other.unit !== one.unit && other.role === one.role && other.mount === one.mount)
        .map((other) => compared(model, solution, one, other, how.coverage)),
    );
  });
}

function compared(
  model: Model,
  solution: Solution,
  one: Response,
  other: Response,
  coverage: number,
): LookalikeFinding {
  const n = model.linksPerFrequency;
  const factorOf = coverageFactors(coverage);
  const [a, b] = [one.link, other.link];
  const differences: number[] = [];
  const limits: number[] = [];
  let beyond = 0;
  for (const { frequencies, scales, matrix, common } of solution.covariance) {
    frequencies.forEach((f, k) => {
      const isOpen = [a, b].some((link) => LINK_STATUS[solution.status[f * n + link]!] === 'open');
      const { directions } = solution.patterns[solution.patternOf[f]!]!.separability;
      const isFree = directions.some(({ movement }) => Math.abs(movement[a]! - movement[b]!) > 1e-9);
      if (isOpen || isFree) return;
      const of = (cells: Float64Array) => cells[a * n + a]! + cells[b * n + b]! - 2 * cells[a * n + b]!;
      const variance = scales[k]! * of(matrix) + (common === undefined ? 0 : of(common));
      if (!(variance > 0)) return;
      const dof = Math.min(solution.dof[f * n + a]!, solution.dof[f * n + b]!);
      const difference = solution.estimates[f * n + a]! - solution.estimates[f * n + b]!;
      const limit = Math.sqrt(variance) * factorOf(dof);
      differences.push(difference);
      limits.push(limit);
      if (Math.abs(difference) > limit) beyond++;
    });
  }
  const frequencies = differences.length;
  const chance = Math.max(1, TIMES_CHANCE * (1 - coverage) * frequencies);
  const verdict = frequencies === 0 ? 'not testable' : beyond >= chance ? 'differ' : 'agree';
  return {
    one: one.unit,
    other: other.unit,
    mount: one.mount,
    role: one.role,
    frequencies,
    beyond,
    difference: median(differences),
    expanded: median(limits),
    verdict,
  };
}

function median(values: readonly number[]): number {
  const sorted = Float64Array.from(values).sort();
  return sorted[sorted.length >> 1] ?? Number.NaN;
}
