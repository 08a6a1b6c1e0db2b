import type { SystematicEffect } from '../model/systematic-effects.ts';
import type { BudgetLine } from '../readings/budget-lines.ts';
import type { Block } from './blocks.ts';
import type { Sweep } from './sweep.ts';

/** What a systematic effect of 1 dB does to the solution. */
export interface EffectShifts {
  readonly effect: SystematicEffect;
  /** Shift of each link of a block in dB, at frequencies that the effect reaches and at those it does not. */
  shifts(block: number, isReached: boolean): Float64Array;
  /** Shift of each shared gain in dB. */
  readonly gains: Float64Array;
}

/**
 * What each effect does to links and gains: the estimate is linear in the readings, H = G y, so that an effect z on the
 * readings shifts it by G z exactly, whatever G's weights are. The effect's variance then adds u² (G z)(G z)ᵀ to the
 * covariance, units correlated as they have to be. It is no unknown of the solution: a constant common to all takes, say,
 * cannot be told from the takes, and where several effects could be told apart the takes are left to speak for themselves.
 * Gains that all frequencies share take up what effects on whole sessions do.
 * Source: JCGM 100:2008, 5.1.2 and F.1.2.4 (common effects); JCGM 102:2011, 6.2 (clause recalled from memory).
 */
export function systematicShifts(swept: Sweep, effects: readonly SystematicEffect[]): EffectShifts[] {
  return effects.map((effect) => {
    const gainSide = new Float64Array(swept.gains.values.length);
    const direct = swept.blocks.map(({ block, factored }) => {
      const { links, gains } = block.system;
      const { side, ofGains } = sidesOf(block, effect.factors, gains);
      const precision = block.frequencies.reduce(
        (sum, f) => sum + (effect.reaches[f]! ? 1 / swept.unitVariance[f]! : 0),
        0,
      );
      for (let g = 0; g < gains; g++) {
        let left = ofGains[g]!;
        for (let i = 0; i < links; i++) left -= factored.coupling[i * gains + g]! * side[i]!;
        gainSide[g] = gainSide[g]! + left * precision;
      }
      factored.solve(side);
      return side;
    });
    const count = gainSide.length;
    const gains = gainSide.map((_, g) => {
      let shift = 0;
      for (let h = 0; h < count; h++) shift += swept.gains.covariance[g * count + h]! * gainSide[h]!;
      return shift;
    });
    return {
      effect,
      gains,
      shifts: (block, isReached) => {
        const { coupling } = swept.blocks[block]!.factored;
        return direct[block]!.map((own, i) => {
          let shift = isReached ? own : 0;
          for (let g = 0; g < count; g++) shift -= coupling[i * count + g]! * gains[g]!;
          return shift;
        });
      },
    };
  });
}

/** Xᵀ W z, and what the effect adds to the right-hand side of the gains, Zᵀ W z. */
function sidesOf({ system }: Block, factors: Float64Array, gains: number) {
  const { take, start, link, factor, gain } = system.incidence;
  const side = new Float64Array(system.links);
  const ofGains = new Float64Array(gains);
  for (let r = 0; r < take.length; r++) {
    const weighted = system.weights[r]! * factors[take[r]!]!;
    if (weighted === 0) continue;
    for (let i = start[r]!; i < start[r + 1]!; i++) side[link[i]!] = side[link[i]!]! + factor[i]! * weighted;
    if (gain[r]! >= 0) ofGains[gain[r]!] = ofGains[gain[r]!]! + weighted;
  }
  return { side, ofGains };
}

/** A part of a variance (dB²) with its degrees of freedom. */
export interface VariancePart {
  readonly variance: number;
  readonly dof: number;
}

/** An effect with the shift of each link in dB for 1 dB of it. */
export interface Reaching {
  readonly effect: SystematicEffect;
  readonly shifts: Float64Array;
}

/** The frequencies of a block in groups that the same effects reach. */
export function reachedAlike(
  frequencies: readonly number[],
  effects: readonly EffectShifts[],
  block: number,
): { readonly frequencies: readonly number[]; readonly reaching: readonly Reaching[] }[] {
  if (effects.length === 0) return [{ frequencies, reaching: [] }];
  const groups = new Map<string, number[]>();
  for (const f of frequencies) {
    const key = effects.map(({ effect }) => (effect.reaches[f]! ? '1' : '0')).join('');
    const group = groups.get(key);
    if (group === undefined) groups.set(key, [f]);
    else group.push(f);
  }
  return [...groups].map(([key, members]) => ({
    frequencies: members,
    reaching: effects.map((own, k) => ({ effect: own.effect, shifts: own.shifts(block, key[k] === '1') })),
  }));
}

/** Adds what the effects bring to the covariance, in dB². */
export function withEffects(
  common: Float64Array | undefined,
  reaching: readonly Reaching[],
  n: number,
): Float64Array | undefined {
  if (reaching.length === 0) return common;
  const sum = common === undefined ? new Float64Array(n * n) : Float64Array.from(common);
  for (const { effect, shifts } of reaching) {
    const variance = effect.line.uncertainty ** 2;
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) sum[i * n + j] = sum[i * n + j]! + variance * shifts[i]! * shifts[j]!;
    }
  }
  return sum;
}

/** Effects of one line of the budget share its degrees of freedom. */
export function variancesOfLines(reaching: readonly Reaching[], link: number): VariancePart[] {
  const parts = new Map<BudgetLine, number>();
  for (const { effect, shifts } of reaching) {
    const own = (effect.line.uncertainty * shifts[link]!) ** 2;
    parts.set(effect.line, (parts.get(effect.line) ?? 0) + own);
  }
  return [...parts].map(([line, variance]) => ({ variance, dof: line.dof }));
}
