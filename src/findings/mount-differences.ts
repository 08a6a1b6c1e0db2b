import { LINK_STATUS, type Solution } from '../estimate/solution.ts';
import type { Model, Response } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';

/** The difference of a unit's responses in two mounts, by frequency. */
export interface MountDifference {
  readonly unit: string;
  readonly role: Response['role'];
  /** The difference is that of mount a less that of mount b. */
  readonly mountA: string;
  readonly mountB: string;
  readonly points: readonly MountPoint[];
}

export interface MountPoint {
  /** Hertz. */
  readonly frequency: number;
  /** Decibels; NaN where one of the two is open. */
  readonly difference: number;
  /** Standard and expanded uncertainty in dB, with what both responses have in common taken out; NaN where there is none. */
  readonly uncertainty: number;
  readonly expanded: number;
  /** `agree`: the difference is within its expanded uncertainty; `not testable` without one. */
  readonly verdict: 'agree' | 'differ' | 'not testable';
}

/**
 * Difference spectra between the mounts of each unit. Levels that rest on a datum are compared only where both move alike
 * with it; otherwise the difference would be one of conventions.
 * Source: JCGM 100:2008, 5.2.2 (correlated input quantities).
 * @param factorOf coverage factor by degrees of freedom.
 */
export function mountDifferences(
  set: TakeSet,
  model: Model,
  solution: Solution,
  factorOf: (dof: number) => number,
): MountDifference[] {
  const differences: MountDifference[] = [];
  model.responses.forEach((a, i) => {
    for (const b of model.responses.slice(i + 1)) {
      if (a.unit !== b.unit || a.role !== b.role || a.mount === b.mount || a.link === b.link) continue;
      const points = differencePoints(set, model, solution, a, b, factorOf);
      differences.push({ unit: a.unit, role: a.role, mountA: a.mount, mountB: b.mount, points });
    }
  });
  return differences;
}

function differencePoints(
  set: TakeSet,
  model: Model,
  solution: Solution,
  a: Response,
  b: Response,
  factorOf: (dof: number) => number,
): MountPoint[] {
  const n = model.linksPerFrequency;
  const points: MountPoint[] = [];
  for (const { frequencies, scales, matrix, common } of solution.covariance) {
    const variance = (cells: Float64Array | undefined) =>
      cells === undefined
        ? 0
        : cells[a.link * n + a.link]! + cells[b.link * n + b.link]! - 2 * cells[a.link * n + b.link]!;
    frequencies.forEach((f, k) => {
      const [cellA, cellB] = [f * n + a.link, f * n + b.link];
      const isKnown = isComparable(solution, f, a.link, b.link);
      const difference = isKnown ? solution.estimates[cellA]! - solution.estimates[cellB]! : Number.NaN;
      const uncertainty = isKnown
        ? Math.sqrt(Math.max(0, scales[k]! * variance(matrix) + variance(common)))
        : Number.NaN;
      const dof = Math.min(solution.dof[cellA]!, solution.dof[cellB]!);
      const expanded = Number.isNaN(uncertainty) ? Number.NaN : uncertainty * factorOf(dof);
      const isTested = expanded > 0;
      const verdict = !isTested ? 'not testable' : Math.abs(difference) <= expanded ? 'agree' : 'differ';
      points.push({ frequency: set.frequencies[f]!, difference, uncertainty, expanded, verdict });
    });
  }
  return points.sort((one, other) => one.frequency - other.frequency);
}

function isComparable({ status, patterns, patternOf }: Solution, f: number, a: number, b: number): boolean {
  const { directions, status: links } = patterns[patternOf[f]!]!.separability;
  const open = LINK_STATUS.indexOf('open');
  const n = links.length;
  if (status[f * n + a] === open || status[f * n + b] === open) return false;
  return directions.every(({ movement }) => Math.abs(movement[a]! - movement[b]!) < 1e-9);
}
