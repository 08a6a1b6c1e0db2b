import type { HoldFinding } from '../findings/holds.ts';
import { placedUnit } from './response-name.ts';

/** Bands side by side with the same verdict. */
export interface HeldRun {
  readonly verdict: HoldFinding['verdict'];
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  readonly bands: number;
  /** Of the band with the largest partner scatter; in dB, NaN where there is no figure. */
  readonly partner: number;
  readonly low: number;
  readonly high: number;
}

/** One unit, in one mount, along frequency. */
export interface UnitHold {
  /** As a reader names it: `N01`, `N01@clamped`. */
  readonly name: string;
  /** Ascending; they cover all its bands. */
  readonly runs: readonly HeldRun[];
}

/** The findings a unit, neighbours with the same verdict joined; in the order of the findings. */
export function unitHolds(holds: readonly HoldFinding[]): UnitHold[] {
  const units = new Map<string, { name: string; runs: HeldRun[] }>();
  for (const hold of holds) {
    const name = placedUnit(hold);
    const { runs } = units.get(name) ?? units.set(name, { name, runs: [] }).get(name)!;
    const last = runs.at(-1);
    if (last?.verdict !== hold.verdict || last.to !== hold.from) {
      const { verdict, from, to, partner, low, high } = hold;
      runs.push({ verdict, from, to, bands: 1, partner, low, high });
      continue;
    }
    const { partner, low, high } = hold.partner > last.partner || Number.isNaN(last.partner) ? hold : last;
    runs[runs.length - 1] = { ...last, to: hold.to, bands: last.bands + 1, partner, low, high };
  }
  return [...units.values()];
}

/** Bands in order, neighbours joined. */
export function joinedBands(
  bands: readonly { readonly from: number; readonly to: number }[],
): { from: number; to: number }[] {
  const joint: { from: number; to: number }[] = [];
  for (const { from, to } of bands) {
    const last = joint.at(-1);
    if (last?.to === from) last.to = to;
    else joint.push({ from, to });
  }
  return joint;
}

/** How many bands of a unit have one of the verdicts. */
export function bandsWith({ runs }: UnitHold, ...verdicts: readonly HoldFinding['verdict'][]): number {
  return runs.filter(({ verdict }) => verdicts.includes(verdict)).reduce((sum, { bands }) => sum + bands, 0);
}
