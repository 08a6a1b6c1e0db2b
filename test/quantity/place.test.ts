import { describe, expect, it } from 'vitest';
import { faultText, InputError } from '../../src/quantity/input-fault.ts';
import { placeText } from '../../src/quantity/place.ts';

describe('places and faults', () => {
  it('says as much of a place as is known', () => {
    expect(placeText({ file: 'bench.csv' })).toBe('bench.csv');
    expect(placeText({ file: 'bench.csv', line: 12 })).toBe('bench.csv:12');
    expect(placeText({ file: 'bench.csv', line: 12, column: 'level_db' })).toBe('bench.csv:12 level_db');
    expect(placeText({ file: 'bench.csv', column: 'level_db' })).toBe('bench.csv level_db');
  });

  it('tells place, what was found, what was expected and what to do', () => {
    const fault = { place: { file: 'a.csv', line: 3 }, found: '"x"', expected: 'a number', remedy: 'Correct it.' };
    expect(faultText(fault)).toBe('a.csv:3: found "x"; expected a number. Correct it.');
  });

  it('an error carries every fault, in order', () => {
    const fault = (file: string) => ({ place: { file }, found: 'a', expected: 'b', remedy: 'c.' });
    const error = new InputError([fault('a.csv'), fault('b.csv')]);
    expect(error.faults).toHaveLength(2);
    expect(error.message.split('\n')).toEqual(['a.csv: found a; expected b. c.', 'b.csv: found a; expected b. c.']);
    expect(error.name).toBe('InputError');
  });
});
