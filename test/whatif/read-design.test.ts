import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/quantity/input-fault.ts';
import { type DesignDefaults, readDesign } from '../../src/whatif/read-design.ts';
import { memorySource } from '../readings/memory-source.ts';

const DEFAULTS: DesignDefaults = { seatings: 1, repeats: 1, units: undefined };

function read(text: string, defaults: Partial<DesignDefaults> = {}) {
  return readDesign(memorySource('plan.csv', text), { ...DEFAULTS, ...defaults });
}

async function faultsOf(text: string, units?: readonly string[]): Promise<string[]> {
  try {
    await read(text, units === undefined ? {} : { units });
  } catch (error) {
    if (error instanceof InputError) return error.message.split('\n');
    throw error;
  }
  return [];
}

describe('readDesign', () => {
  it('reads pairs with seatings, repeats, mounts, sessions and minutes, in any separator', async () => {
    const { design } = await read(
      'Emitter;Receiver;seatings;repeats;emitter mount;session;minutes;forbidden\nA;B;2;3;bare;am;1,5;\nA;C;;;;am;;no\nB;C;;;;;;x\n',
    );
    expect(design.units).toEqual(['A', 'B', 'C']);
    expect(design.forbidden).toEqual([['B', 'C']]);
    // Round by round: what is mounted again comes last.
    expect(design.seatings.map((s) => `${s.emitter}>${s.receiver}`)).toEqual(['A>B', 'A>C', 'A>B']);
    expect(design.seatings[0]).toMatchObject({ repeats: 3, emitterMount: 'bare', session: 'am', minutes: 1.5 });
    expect(design.seatings[1]).toMatchObject({ repeats: 1, emitterMount: '', minutes: undefined });
  });

  it('takes seatings and repeats that the table does not give from the command line', async () => {
    const { design } = await read('emitter,receiver\nA,B\n', { seatings: 2, repeats: 3 });
    expect(design.seatings.map(({ repeats }) => repeats)).toEqual([3, 3]);
  });

  it.each([
    ['emitter,receiver\nA,\n', 'plan.csv:2 receiver: found a blank'],
    ['emitter,receiver,seatings\nA,B,0\n', 'plan.csv:2 seatings: found `0`; expected a whole number from 1 to 100'],
    ['emitter,receiver,repeats\nA,B,1.5\n', 'plan.csv:2 repeats: found `1.5`'],
    ['emitter,receiver,minutes\nA,B,-1\n', 'plan.csv:2 minutes: found `-1`'],
    ['emitter,receiver,forbidden\nA,B,perhaps\n', 'plan.csv:2 forbidden: found `perhaps`'],
    ['emitter,receiver,forbidden\nA,B,\nB,A,yes\n', 'plan.csv:2: found the pair A > B, which line 3 forbids'],
    ['emitter,receiver,frequency_hz,level_db\nA,B,1000,-20\n', 'as in a file of readings'],
    ['from,to\nA,B\n', 'no header that is known'],
  ])('says what is wrong with %j', async (text, said) => {
    expect((await faultsOf(text)).join('\n')).toContain(said);
  });

  it('says which unit is not among those named, each with its line', async () => {
    const faults = await faultsOf('emitter,receiver\nA,B\nB,X\nY,A\n', ['A', 'B']);
    expect(faults).toHaveLength(2);
    expect(faults[0]).toContain('plan.csv:3: found the unit X, which --units does not name; expected one of A, B');
    expect(faults[1]).toContain('plan.csv:4: found the unit Y');
  });
});
