import type { InputFault } from '../quantity/input-fault.ts';
import type { PathLevel } from '../readings/references.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { interpolateOverLog } from './interpolate.ts';
import type { Prior } from './model.ts';
import type { ModelOptions } from './model-options.ts';

/** What the paths add to the chains. */
export interface PathTerms {
  /** Paths that are links: free ones, and those with an uncertain level. */
  readonly links: readonly { readonly name: string; readonly prior: Prior | undefined }[];
  /** For each take an index into `links`, or −1. */
  readonly linkOf: Int32Array;
  /** For each take the exactly known level of its path in dB by frequency; absent where there is none. */
  readonly known: readonly (Float64Array | undefined)[];
}

/**
 * `free`: with one label only, the path is part of every level; with several, each is a free link. A table gives the
 * levels of the paths it names, interpolated over log frequency and not beyond its ends: with an uncertainty they are
 * known links, without one they are exact. Paths that the table does not name stay free.
 */
export function pathTerms(set: TakeSet, option: ModelOptions['path'], faults: InputFault[]): PathTerms {
  const labels = [...new Set(set.takes.map((take) => take.path))];
  const none = new Int32Array(set.takes.length).fill(-1);
  const unknown = set.takes.map(() => undefined);
  if (option === 'none') return { links: [], linkOf: none, known: unknown };
  const table = option === 'free' ? [] : option;
  if (option !== 'free' && !table.some((entry) => labels.includes(entry.path))) {
    faults.push(noSuchPath(table, labels));
  }
  if (table.length === 0 && labels.length < 2) return { links: [], linkOf: none, known: unknown };

  const exact = new Map<string, Float64Array>();
  const links: { name: string; prior: Prior | undefined }[] = [];
  const numberOf = new Map<string, number>();
  for (const label of labels) {
    const entry = table.find(({ path }) => path === label);
    if (entry?.uncertainty.every(Number.isNaN)) {
      exact.set(label, interpolateOverLog(entry.frequency, entry.level, set.frequencies));
      continue;
    }
    if (entry?.uncertainty.some(Number.isNaN)) faults.push(someWithoutUncertainty(entry));
    numberOf.set(label, links.length);
    links.push({ name: label === '' ? 'path without a name' : `path ${label}`, prior: entry && priorOf(entry, set) });
  }
  return {
    links,
    linkOf: Int32Array.from(set.takes, (take) => numberOf.get(take.path) ?? -1),
    known: set.takes.map((take) => exact.get(take.path)),
  };
}

function priorOf(entry: PathLevel, set: TakeSet): Prior {
  return {
    kind: 'known',
    value: interpolateOverLog(entry.frequency, entry.level, set.frequencies),
    uncertainty: interpolateOverLog(entry.frequency, entry.uncertainty, set.frequencies),
  };
}

function noSuchPath(table: readonly PathLevel[], labels: readonly string[]): InputFault {
  const named = labels.filter((label) => label !== '');
  return {
    place: table[0] === undefined ? { file: '--path' } : { ...table[0].place, column: 'path' },
    found: `levels for ${table.map(({ path }) => path).join(', ') || 'no path'}`,
    expected:
      named.length === 0
        ? 'takes with a `path` column: no take names its path'
        : `levels for some of ${named.join(', ')}`,
    remedy: 'Use the same names in the takes and in the table of path levels.',
  };
}

function someWithoutUncertainty({ path, place }: PathLevel): InputFault {
  return {
    place: { ...place, column: 'u_db' },
    found: `levels of the path ${path} of which some have an uncertainty and some have none`,
    expected: 'an uncertainty for all of them (a known path), or for none (an exact one)',
    remedy: 'Fill in `u_db` for this path, or leave it out.',
  };
}
