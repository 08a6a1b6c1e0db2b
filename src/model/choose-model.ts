import type { TakeSet } from '../takes/take-set.ts';
import type { ModelChoice } from './model.ts';
import type { ModelOptions } from './model-options.ts';
import { type ReciprocityTest, testReciprocity } from './reciprocity.ts';

/** Reciprocity is given up when pure chance would do as badly less often than this. Common practice, no source. */
export const RECIPROCITY_RISK = 0.001;

/** Chooses between the reciprocal and the directional model, and says why. Cost: linear in the readings, in `auto` only. */
export function chooseModel(set: TakeSet, options: ModelOptions): ModelChoice {
  if (options.model !== 'auto') return { kind: options.model, reason: 'The model was chosen by the user.' };
  if (options.reversible.length > 0) {
    return { kind: 'directional', reason: 'Units declared reversible are single ones among units that need not be.' };
  }
  const ofOneRole = options.references.find((reference) => reference.role !== 'both');
  if (ofOneRole !== undefined) {
    return {
      kind: 'directional',
      reason: `The reference for ${ofOneRole.unit} is for one role, which only the directional model tells apart.`,
    };
  }
  if (!someUnitHasBothRoles(set, options.lookalikes)) {
    return { kind: 'directional', reason: 'No unit is used in both roles, so that reciprocity would say nothing.' };
  }
  return choiceOf(testReciprocity(set));
}

// Look-alikes have one response together: what one emits and the other receives is one unit in both roles.
function someUnitHasBothRoles(set: TakeSet, lookalikes: ModelOptions['lookalikes']): boolean {
  const sameAs = (unit: string) => lookalikes.find((group) => group.includes(unit))?.[0] ?? unit;
  const end = (unit: string, mount: string) => JSON.stringify([sameAs(unit), mount]);
  const emitters = new Set(set.takes.map((take) => end(take.emitter, take.emitterMount)));
  return set.takes.some((take) => emitters.has(end(take.receiver, take.receiverMount)));
}

function choiceOf({ pairs, whole }: ReciprocityTest): ModelChoice {
  if (pairs === 0) {
    return { kind: 'reciprocal', reason: 'No pair was taken both ways: reciprocity is assumed, and not tested.' };
  }
  const bothWays = pairs === 1 ? '1 pair was' : `${pairs} pairs were`;
  if (Number.isNaN(whole.rmsDifference)) {
    return {
      kind: 'reciprocal',
      reason: `${bothWays} taken both ways, but not in the same third-octave: reciprocity is assumed, and not tested.`,
    };
  }
  const differ = `${bothWays} taken both ways and differ by ${whole.rmsDifference.toPrecision(2)} dB (root mean square)`;
  if (Number.isNaN(whole.pValue)) {
    return {
      kind: 'reciprocal',
      reason: `${differ}; they close no chain that would test reciprocity, which is assumed.`,
    };
  }
  const p = whole.pValue < 1e-4 ? 'p < 0.0001' : `p = ${whole.pValue.toPrecision(2)}`;
  return whole.pValue < RECIPROCITY_RISK
    ? {
        kind: 'directional',
        reason: `${differ}; unit terms explain it (F test, ${p}), so that emit and receive differ.`,
      }
    : { kind: 'reciprocal', reason: `${differ}; unit terms do not explain it (F test, ${p}).` };
}
