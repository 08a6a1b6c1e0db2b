import type { InputFault } from '../quantity/input-fault.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { unknownUnit } from './unknown-unit.ts';

/** Which units count as one and the same. */
export interface UnitClasses {
  /** `A = B` for declared look-alikes, else the unit's own name. */
  readonly nameOf: (unit: string) => string;
}

/** Groups that share a member are joined. Units that no take names, or a group of one, are faults. */
export function classesOf(set: TakeSet, groups: readonly (readonly string[])[], faults: InputFault[]): UnitClasses {
  const known = new Set(set.takes.flatMap((take) => [take.emitter, take.receiver]));
  const groupOf = new Map<string, Set<string>>();
  for (const group of groups) {
    if (new Set(group).size < 2) {
      faults.push({
        place: { file: '--lookalikes' },
        found: `"${group.join('=')}"`,
        expected: 'at least two different units, as in A=B',
        remedy: 'Name the units that share one response.',
      });
    }
    const joined = new Set<string>();
    for (const unit of group) {
      if (!known.has(unit)) faults.push(unknownUnit({ file: '--lookalikes' }, unit, known));
      for (const member of groupOf.get(unit) ?? [unit]) joined.add(member);
    }
    for (const unit of joined) groupOf.set(unit, joined);
  }
  // In the order of the takes, so that the name does not depend on how the option was written.
  const names = new Map<Set<string>, string>();
  for (const group of new Set(groupOf.values())) {
    names.set(group, [...known].filter((unit) => group.has(unit)).join(' = '));
  }
  return {
    nameOf: (unit) => {
      const group = groupOf.get(unit);
      return group === undefined ? unit : names.get(group)!;
    },
  };
}
