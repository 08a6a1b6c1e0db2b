/** @throws RangeError unless dof is above 0 (infinite is allowed, fractions too). */
export function requireDof(dof: number): void {
  if (!(dof > 0)) throw new RangeError(`degrees of freedom must be above 0, got ${dof}`);
}

/** @throws RangeError unless p is from 0 to 1. */
export function requireProbability(p: number): void {
  if (!(p >= 0 && p <= 1)) throw new RangeError(`a probability must be from 0 to 1, got ${p}`);
}
