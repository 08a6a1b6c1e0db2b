import type { InputFault } from '../quantity/input-fault.ts';
import type { Reference } from '../readings/references.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { interpolateOverLog } from './interpolate.ts';
import type { ModelChoice, Prior, Response } from './model.ts';
import { unknownUnit } from './unknown-unit.ts';

/**
 * Certificate values as priors of response links, by link: interpolated over log frequency, and none beyond the ends of
 * the certificate.
 */
export function referencePriors(
  set: TakeSet,
  choice: ModelChoice,
  responses: readonly Response[],
  references: readonly Reference[],
  faults: InputFault[],
): Map<number, Prior> {
  const priors = new Map<number, Prior>();
  for (const reference of references) {
    const response = responseOf(reference, choice, responses, faults);
    if (response === undefined) continue;
    if (priors.has(response.link)) {
      faults.push({
        place: { ...reference.place, column: 'unit' },
        found: `a second certificate for the response of ${reference.unit}`,
        expected: 'one certificate a response; look-alikes have one response together',
        remedy: 'Keep the one to be used.',
      });
      continue;
    }
    const value = interpolateOverLog(reference.frequency, reference.level, set.frequencies);
    const uncertainty = interpolateOverLog(reference.frequency, reference.uncertainty, set.frequencies);
    if (value.every(Number.isNaN)) {
      faults.push({
        place: { ...reference.place, column: 'frequency_hz' },
        found: `a certificate of ${reference.unit} that reaches none of the frequencies of the takes`,
        expected: 'at least two frequencies with a frequency of the takes between them, or the same frequencies',
        remedy: 'Check the unit of frequency in the certificate, or take it away.',
      });
      continue;
    }
    priors.set(response.link, { kind: 'known', value, uncertainty });
  }
  return priors;
}

function responseOf(
  reference: Reference,
  choice: ModelChoice,
  responses: readonly Response[],
  faults: InputFault[],
): Response | undefined {
  const fault = (column: 'mount' | 'role', found: string, expected: string, remedy: string) => {
    faults.push({ place: { ...reference.place, column }, found, expected, remedy });
    return undefined;
  };
  const ofUnit = responses.filter((response) => response.unit === reference.unit);
  if (ofUnit.length === 0) {
    faults.push(
      unknownUnit(
        { ...reference.place, column: 'unit' },
        reference.unit,
        responses.map(({ unit }) => unit),
      ),
    );
    return undefined;
  }
  const mounts = [...new Set(ofUnit.map((response) => response.mount))];
  if (reference.mount === '' && mounts.length > 1) {
    return fault(
      'mount',
      `a reference for ${reference.unit} without a mount`,
      `one of its mounts: ${mounts.join(', ')}`,
      'Add a column `mount` to the references.',
    );
  }
  const mounted = ofUnit.filter((response) => reference.mount === '' || response.mount === reference.mount);
  if (mounted.length === 0) {
    return fault(
      'mount',
      `a reference for ${reference.unit} mounted ${reference.mount}`,
      `one of its mounts in the takes: ${mounts.map((mount) => mount || '(none named)').join(', ')}`,
      'Use the same mount labels in takes and references.',
    );
  }
  if (reference.role !== 'both') {
    if (choice.kind === 'reciprocal') {
      return fault(
        'role',
        `a reference for ${reference.unit} in the role ${reference.role} with the reciprocal model`,
        'a reference without a role, for its one response',
        'Leave the column `role` out, or use --model directional.',
      );
    }
    const inRole = mounted.find((response) => response.role === reference.role);
    return (
      inRole ??
      fault(
        'role',
        `a reference for ${reference.unit} in the role ${reference.role}`,
        `the role it has in the takes, ${mounted.map((response) => response.role).join(' and ')}`,
        'Correct the column `role`.',
      )
    );
  }
  if (new Set(mounted.map((response) => response.link)).size > 1) {
    return fault(
      'role',
      `a reference for ${reference.unit} without a role, while it both emits and receives`,
      'the role emit or receive',
      'Add a column `role` to the references.',
    );
  }
  return mounted[0];
}
