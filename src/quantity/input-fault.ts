import { type Place, placeText } from './place.ts';

/** Something in the user's input that cannot be used: where, what was found, what was expected, what to do. */
export interface InputFault {
  readonly place: Place;
  readonly found: string;
  readonly expected: string;
  readonly remedy: string;
}

export function faultText(fault: InputFault): string {
  return `${placeText(fault.place)}: found ${fault.found}; expected ${fault.expected}. ${fault.remedy}`;
}

/** Stops a run because of the user's input. Carries every fault that was collected until then, never only the first. */
export class InputError extends Error {
  readonly faults: readonly InputFault[];

  constructor(faults: readonly InputFault[]) {
    super(faults.map(faultText).join('\n'));
    this.name = 'InputError';
    this.faults = faults;
  }
}
