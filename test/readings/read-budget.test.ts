import { describe, expect, test } from 'vitest';
import { readBudget } from '../../src/readings/read-budget.ts';
import { faultsOf, memorySource } from './memory-source.ts';

const read = (text: string) => readBudget(memorySource('budget.csv', text));
const one = async (header: string, row: string) => (await read(`${header}\n${row}\n`)).lines[0]!;

describe('a budget of systematic effects', () => {
  test('a line with a standard uncertainty applies to all takes and frequencies, and counts as known and type B', async () => {
    const { lines, file, notices } = await read('name,u_db\nanalyser,0.05\n');
    expect(file).toMatchObject({ name: 'budget.csv', layout: 'budget', rows: 1 });
    expect(notices).toEqual([]);
    expect(lines).toEqual([
      {
        name: 'analyser',
        place: { file: 'budget.csv', line: 2 },
        uncertainty: 0.05,
        distribution: 'normal',
        dof: Number.POSITIVE_INFINITY,
        type: 'B',
        target: 'all',
        label: '',
        from: 0,
        to: Number.POSITIVE_INFINITY,
      },
    ]);
  });

  /** JCGM 100:2008, 4.3.7 (a/√3) and 4.3.9 (a/√6); JCGM 101:2008, 6.4.6 (a/√2). */
  test.each([
    ['rectangular', 0.3 / Math.sqrt(3)],
    ['triangular', 0.3 / Math.sqrt(6)],
    ['U-shaped', 0.3 / Math.sqrt(2)],
    ['u', 0.3 / Math.sqrt(2)],
  ])('a half-width of a %s distribution becomes a standard uncertainty', async (distribution, expected) => {
    const line = await one('name,half_width_db,distribution', `cable,0.3,${distribution}`);
    expect(line.uncertainty).toBeCloseTo(expected, 15);
  });

  test('a normal half-width is k standard uncertainties; without k it counts as 2, and that is said', async () => {
    const header = 'name,half_width_db,distribution,k';
    expect((await one(header, 'cable,0.3,normal,3')).uncertainty).toBeCloseTo(0.1, 15);
    const { lines, notices } = await read(`${header}\ncable,0.3,normal,\n`);
    expect(lines[0]!.uncertainty).toBeCloseTo(0.15, 15);
    expect(notices).toEqual(['budget.csv: a normal half-width without k counts as 2 u: cable.']);
  });

  test('degrees of freedom, type, target and range are read, in other units too', async () => {
    const header = 'name;u_db;dof;applies_to;from_khz;to_khz';
    expect(await one(header, 'drift;0,1;8;session day 2;2;20,5')).toMatchObject({
      dof: 8,
      type: 'A',
      target: 'session',
      label: 'day 2',
      from: 2000,
      to: 20_500,
    });
    expect(await one('name,u_db,dof,type', 'x,0.1,8,b')).toMatchObject({ dof: 8, type: 'B' });
  });

  test('ranges of one name may meet, and units may each have their own', async () => {
    const header = 'name,u_db,applies_to,from_hz,to_hz';
    const { lines } = await read(`${header}\nx,0.1,all,,2000\nx,0.2,all,2000,\ny,0.1,unit A,,\ny,0.2,unit B,,\n`);
    expect(lines).toHaveLength(4);
  });

  test.each([
    ['u_db', '-0.1', 'u_db', '`-0.1`: a standard uncertainty must be above 0'],
    ['u_db', '', 'u_db', 'no uncertainty'],
    [
      'u_db,half_width_db,distribution',
      '0.1,0.2,rectangular',
      'half_width_db',
      'a standard uncertainty and a half-width',
    ],
    ['half_width_db,distribution', '0.2,gaussian', 'distribution', '`gaussian`'],
    ['half_width_db', '0.2', undefined, 'a half-width without its distribution'],
    ['half_width_db,distribution', '0.2,', 'distribution', 'a half-width without its distribution'],
    ['u_db,dof', '0.1,0', 'dof', '`0` degrees of freedom'],
    ['u_db,dof', '0.1,-3', 'dof', '`-3` degrees of freedom'],
    ['u_db,type', '0.1,C', 'type', '`C`'],
    ['u_db,applies_to', '0.1,everything', 'applies_to', '`everything`'],
    ['u_db,applies_to', '0.1,all units', 'applies_to', '`all units`'],
    ['u_db,from_hz,to_hz', '0.1,2000,1000', 'from_hz', 'a frequency range from 2000 to 1000'],
  ])('%s of %s is an input fault at its column', async (header, cells, column, found) => {
    const [fault, ...more] = await faultsOf(read(`name,${header}\nx,${cells}\n`));
    expect(more).toEqual([]);
    expect(fault!.place).toEqual({ file: 'budget.csv', line: 2, ...(column === undefined ? {} : { column }) });
    expect(fault!.found).toContain(found);
  });

  test.each([
    'x,0.1,all,1000,3000\nx,0.1,all,2000,4000',
    'x,0.1,all,,\nx,0.1,unit A,,',
    'x,0.1,unit A,,\nx,0.1,unit A,,',
  ])('ranges of one name that overlap are an input fault: %s', async (rows) => {
    const [fault] = await faultsOf(read(`name,u_db,applies_to,from_hz,to_hz\n${rows}\n`));
    expect(fault!.place.line).toBe(3);
    expect(fault!.found).toMatch(/a second time, with a frequency range that overlaps that of line 2/);
  });
});
