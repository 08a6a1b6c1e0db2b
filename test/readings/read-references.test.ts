import { describe, expect, test } from 'vitest';
import { readReferences } from '../../src/readings/read-references.ts';
import { faultsOf, memorySource } from './memory-source.ts';

const read = (text: string) => readReferences(memorySource('refs.csv', text));

describe('certificates', () => {
  test('rows of a unit, mount and role belong together, frequencies ascending', async () => {
    const { references, file, notices } = await read(
      'unit,mount,role,frequency_khz,level_db,u_db\nA,bare,receive,2,-180,0.3\nB,,,1,0,0.5\nA,bare,Receive,1,-181,0.2\nA,,emit,1,120,0.4\n',
    );
    expect(file).toMatchObject({ name: 'refs.csv', layout: 'references', rows: 4 });
    expect(file.sha256).toMatch(/^[0-9a-f]{64}$/);
    expect(notices).toEqual([]);
    expect(references).toEqual([
      {
        unit: 'A',
        mount: 'bare',
        role: 'receive',
        place: { file: 'refs.csv', line: 2 },
        frequency: Float64Array.of(1000, 2000),
        level: Float64Array.of(-181, -180),
        uncertainty: Float64Array.of(0.2, 0.3),
      },
      {
        unit: 'B',
        mount: '',
        role: 'both',
        place: { file: 'refs.csv', line: 3 },
        frequency: Float64Array.of(1000),
        level: Float64Array.of(0),
        uncertainty: Float64Array.of(0.5),
      },
      {
        unit: 'A',
        mount: '',
        role: 'emit',
        place: { file: 'refs.csv', line: 5 },
        frequency: Float64Array.of(1000),
        level: Float64Array.of(120),
        uncertainty: Float64Array.of(0.4),
      },
    ]);
  });

  test('an expanded uncertainty is divided by its own k, row by row', async () => {
    const {
      references: [reference],
    } = await read(
      'unit;frequency_hz;level_db;expanded_db;k;u_db\nA;1000;-1,5;0,4;2;\nA;2000;-2,5;0,6;3;\nA;3000;-3,5;;;0,1\n',
    );
    expect([...reference!.uncertainty]).toEqual([0.2, 0.6 / 3, 0.1]);
    expect([...reference!.level]).toEqual([-1.5, -2.5, -3.5]);
  });

  const HEADER = 'unit,role,frequency_hz,level_db,u_db,expanded_db,k';
  test.each([
    ['expanded_db without k', 'A,emit,1000,1,,0.4,', 'k', /k missing/],
    ['no uncertainty', 'A,emit,1000,1,,,', 'u_db', /no uncertainty/],
    ['two uncertainties', 'A,emit,1000,1,0.2,0.4,2', 'expanded_db', /a standard and an expanded/],
    ['u of 0', 'A,emit,1000,1,0,,', 'u_db', /`0`/],
    ['a tiny u', 'A,emit,1000,1,1e-300,,', 'u_db', /`1e-300`.*0\.000001/],
    ['a huge u', 'A,emit,1000,1,,1e300,2', 'expanded_db', /`1e300`.*1000 dB/],
    ['a huge k', 'A,emit,1000,1,,0.1,1e300', 'expanded_db', /0\.000001/],
    ['a huge level', 'A,emit,1000,1e300,0.2,,', 'level_db', /1000 dB either way/],
    ['a huge frequency', 'A,emit,1e300,1,0.2,,', 'frequency_hz', /Hz/],
    ['a negative u', 'A,emit,1000,1,-1,,', 'u_db', /`-1`/],
    ['a negative expanded_db', 'A,emit,1000,1,,-1,2', 'expanded_db', /`-1`/],
    ['k of 0', 'A,emit,1000,1,,1,0', 'k', /`0`/],
    ['text for u', 'A,emit,1000,1,small,,', 'u_db', /small/],
    ['text for a level', 'A,emit,1000,loud,0.2,,', 'level_db', /loud/],
    ['a blank level', 'A,emit,1000,,0.2,,', 'level_db', /a blank/],
    ['a frequency of 0', 'A,emit,0,1,0.2,,', 'frequency_hz', /`0`/],
    ['an unknown role', 'A,speak,1000,1,0.2,,', 'role', /speak/],
    ['no unit', ',emit,1000,1,0.2,,', 'unit', /a blank/],
    ['too few fields', 'A,emit,1000', undefined, /3 fields/],
  ])('%s is a fault in its line and column', async (_, row, column, words) => {
    const faults = await faultsOf(read(`${HEADER}\nB,emit,1000,1,0.2,,\n${row}\n`));
    const fault = faults.find(({ place }) => place.column === column);
    expect(fault!.place).toEqual(
      column === undefined ? { file: 'refs.csv', line: 3 } : { file: 'refs.csv', line: 3, column },
    );
    expect(fault!.found).toMatch(words);
    expect(fault!.remedy).not.toBe('');
  });

  test('an unknown column and an assumed unit are told', async () => {
    const { notices } = await read('unit,frequency,level_db,u_db,laboratory\nA,1000,1,0.2,north\n');
    expect(notices).toEqual([
      'refs.csv: the column `frequency` names no unit; its numbers are taken as Hz.',
      'refs.csv: the column `laboratory` is not known here and is kept out.',
    ]);
  });

  test('all faults of a certificate are told at once', async () => {
    const faults = await faultsOf(read(`${HEADER}\nA,emit,1000,loud,0.2,,\nA,emit,2000,1,,,\n`));
    expect(faults.map(({ place }) => place.line)).toEqual([2, 3]);
  });

  test('a header with expanded_db and no k says so once', async () => {
    const faults = await faultsOf(read('unit,frequency_hz,level_db,expanded_db\nA,1000,1,0.4\nA,2000,1,0.4\n'));
    expect(faults).toHaveLength(1);
    expect(faults[0]!.found).toMatch(/k missing/);
  });

  test('a header without an uncertainty, a unit or a level is refused', async () => {
    expect((await faultsOf(read('unit,frequency_hz,level_db\nA,1000,1\n')))[0]!.found).toBe('no uncertainty');
    expect((await faultsOf(read('unit,frequency_hz,u_db\nA,1000,1\n')))[0]!.place.column).toBe('level_db');
  });

  test('a frequency that comes twice for one unit is a fault', async () => {
    const [fault] = await faultsOf(read('unit,frequency_hz,level_db,u_db\nA,1000,1,1\nB,1000,1,1\nA,1000,2,1\n'));
    expect(fault!.place.line).toBe(4);
    expect(fault!.found).toMatch(/first in line 2/);
  });
});
