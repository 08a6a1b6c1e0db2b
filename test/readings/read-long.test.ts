import { describe, expect, test } from 'vitest';
import { readFiles } from '../../src/readings/read-files.ts';
import { faultsOf, memorySource } from './memory-source.ts';

const read = (text: string, levelFormula?: string) =>
  readFiles([memorySource('pairs.csv', text)], levelFormula === undefined ? {} : { levelFormula });
const faults = (text: string, levelFormula?: string) => faultsOf(read(text, levelFormula));
const HEADER = 'emitter,receiver,frequency_hz,level_db';

describe('long layout', () => {
  test('each row is a reading with its take and its line', async () => {
    const readings = await read(`# bench 4\n${HEADER}\nA,B,1000,-3\n\nA,B,2000,-4.5\nB,A,1000,-5\n`);
    expect(readings.count).toBe(3);
    expect([...readings.take]).toEqual([0, 0, 1]);
    expect([...readings.line]).toEqual([3, 5, 6]);
    expect([...readings.frequency]).toEqual([1000, 2000, 1000]);
    expect([...readings.level]).toEqual([-3, -4.5, -5]);
    expect(readings.takes.map(({ emitter, receiver, line }) => [emitter, receiver, line])).toEqual([
      ['A', 'B', 3],
      ['B', 'A', 6],
    ]);
    expect(readings.uncertainty).toBeUndefined();
    expect(readings.files).toMatchObject([{ name: 'pairs.csv', layout: 'long', rows: 3 }]);
    expect(readings.notices).toEqual([]);
    expect(readings.unused).toEqual([]);
  });

  test('a take is one value of all its identity columns, wherever its rows stand', async () => {
    const columns = 'path,session,emitter_mount,receiver_mount,emitter_seating,receiver_seating,repeat';
    const base = ['p', 's', 'm', 'n', '1', '1', '1'];
    const rows = [base, ...base.map((_, i) => base.map((value, j) => (i === j ? `${value}x` : value))), base];
    const text = `${HEADER},${columns}\n${rows.map((row, i) => `A,B,${1000 + i},-3,${row.join(',')}\n`).join('')}`;
    const readings = await read(text);
    expect([...readings.take]).toEqual([0, 1, 2, 3, 4, 5, 6, 7, 0]);
    expect(readings.takes[0]).toMatchObject({
      path: 'p',
      session: 's',
      emitterMount: 'm',
      receiverMount: 'n',
      emitterSeating: '1',
      receiverSeating: '1',
      repeat: '1',
    });
  });

  test('optional columns are kept where a row gives them, and absent where no row does', async () => {
    const readings = await read(
      `${HEADER},u_db,averages,coherence,noise_db,distance_mm,taken_at,note\nA,B,1000,-3,,,,,,,\nA,C,1000,-3,0.2,16,0.95,-60,50,2026-05-04T10:30,warm\nB,C,1000,-3,,,,,,,\n`,
    );
    expect([...readings.uncertainty!]).toEqual([Number.NaN, 0.2, Number.NaN]);
    expect([...readings.averages!]).toEqual([Number.NaN, 16, Number.NaN]);
    expect([...readings.coherence!]).toEqual([Number.NaN, 0.95, Number.NaN]);
    expect([...readings.noise!]).toEqual([Number.NaN, -60, Number.NaN]);
    expect(readings.takes[0]).toMatchObject({ distance: undefined, takenAt: '', note: '' });
    expect(readings.takes[1]).toMatchObject({ distance: 0.05, takenAt: '2026-05-04T10:30', note: 'warm' });
  });

  test('a known gain is subtracted from the level and from the noise', async () => {
    const readings = await read(`${HEADER},gain_db,noise_db\nA,B,1000,-3,20,-50\nA,C,1000,-3,,-50\nB,C,1000,-3,-1,\n`);
    expect([...readings.level]).toEqual([-23, -3, -2]);
    expect([...readings.noise!]).toEqual([-70, -50, Number.NaN]);
    expect(readings.notices).toEqual(['pairs.csv: `gain_db` is blank in 1 of 3 rows; no gain is subtracted there.']);
  });

  test('a linear ratio becomes a level, and a ratio of 0 never does', async () => {
    const readings = await read('emitter,receiver,frequency_khz,ratio\nA,B,1,100\nA,B,2,0\nA,B,3,-1\nA,B,4,\n');
    expect([...readings.level]).toEqual([40]);
    expect([...readings.frequency]).toEqual([1000]);
    expect(readings.unused.map(({ line, column }) => [line, column])).toEqual([
      [3, 'ratio'],
      [4, 'ratio'],
      [5, 'ratio'],
    ]);
    expect(readings.unused[0]!.reason).toMatch(/not measured.*ratio of 0/);
  });

  test.each([
    ['a blank level', 'A,B,2000,', 'level_db', '', /not measured: blank/],
    ['a level of exactly 0', 'A,B,2000,0.0', 'level_db', '0.0', /not measured: exactly 0/],
    ['text for a level', 'A,B,2000,loud', 'level_db', 'loud', /not a finite number/],
    ['NaN for a level', 'A,B,2000,NaN', 'level_db', 'NaN', /not a finite number/],
    ['infinity for a level', 'A,B,2000,-inf', 'level_db', '-inf', /not a finite number/],
    ['a decimal comma among points', 'A,B,2000,"1,5"', 'level_db', '1,5', /decimal comma/],
    ['a level beyond anything physical', 'A,B,2000,1e300', 'level_db', '1e300', /1000 dB either way/],
    ['a level just beyond', 'A,B,2000,-1000.5', 'level_db', '-1000.5', /1000 dB either way/],
    ['a frequency near 0', 'A,B,1e-300,-3', 'frequency_hz', '1e-300', /from 0\.000001 Hz/],
    ['a frequency beyond anything physical', 'A,B,1e300,-3', 'frequency_hz', '1e300', /to 1000000000000000 Hz/],
    ['a frequency of 0', 'A,B,0,-3', 'frequency_hz', '0', /above 0/],
    ['a negative frequency', 'A,B,-5,-3', 'frequency_hz', '-5', /above 0/],
    ['text for a frequency', 'A,B,high,-3', 'frequency_hz', 'high', /not a finite number/],
    ['a blank frequency', 'A,B,,-3', 'frequency_hz', '', /blank/],
    ['no emitter', ' ,B,2000,-3', 'emitter', '', /no emitter/],
    ['no receiver', 'A,,2000,-3', 'receiver', '', /no receiver/],
    ['too few fields', 'A,B,2000', '', 'A,B,2000', /3 fields where the header has 4/],
    ['too many fields', 'A,B,2000,-3,5', '', 'A,B,2000,-3,5', /5 fields where the header has 4.*decimal comma/],
  ])('%s is kept with its reason, and the rest is read', async (_, row, column, value, reason) => {
    const readings = await read(`${HEADER}\nA,B,1000,-3.5\n${row}\nA,B,3000,-4.5\n`);
    expect([...readings.level]).toEqual([-3.5, -4.5]);
    expect(readings.unused).toEqual([
      { file: 'pairs.csv', line: 3, column, value, reason: expect.stringMatching(reason) },
    ]);
    expect(readings.files[0]!.rows).toBe(3);
  });

  test.each([
    ['u_db', '0', /above 0/],
    ['u_db', '-0.1', /above 0/],
    ['u_db', 'small', /not a finite number/],
    ['u_db', '1e-300', /from 0\.000001 dB to 1000 dB/],
    ['u_db', '1e300', /from 0\.000001 dB to 1000 dB/],
    ['averages', '0', /1 or more/],
    ['averages', '1e300', /not be above 1000000000/],
    ['noise_db', '-1e300', /1000 dB either way/],
    ['gain_db', '1e300', /1000 dB either way/],
    ['coherence', '1.2', /above 1/],
    ['coherence', '0', /above 0/],
    ['noise_db', 'low', /not a finite number/],
    ['gain_db', 'x10', /not a finite number/],
  ])('%s = %s makes its row unused', async (column, value, reason) => {
    const readings = await read(`${HEADER},${column}\nA,B,1000,-3,1\nA,B,2000,-3,${value}\n`);
    expect(readings.count).toBe(1);
    expect(readings.unused).toEqual([
      { file: 'pairs.csv', line: 3, column, value, reason: expect.stringMatching(reason) },
    ]);
  });

  test('ratios beyond anything physical are kept with their reason', async () => {
    const readings = await read('emitter,receiver,frequency_hz,ratio\nA,B,1,1e50\nA,B,2,1e51\nA,B,3,1e-300\n');
    expect([...readings.level]).toEqual([1000]);
    expect(readings.unused.map(({ line, value, reason }) => [line, value, reason])).toEqual([
      [3, '1e51', 'no amplitude ratio can lie beyond 1000 dB either way'],
      [4, '1e-300', 'no amplitude ratio can lie beyond 1000 dB either way'],
    ]);
  });

  test('a frequency that overflows in its own unit is no infinity', async () => {
    const readings = await read('emitter,receiver,frequency_mhz,level_db\nA,B,1e305,-3\nA,B,1,-3\n');
    expect([...readings.frequency]).toEqual([1e6]);
    expect(readings.unused.map(({ line, value }) => [line, value])).toEqual([[2, '1e305']]);
  });

  test('a formula that makes an absurd level takes its row out', async () => {
    const readings = await read(
      'emitter,receiver,frequency_hz,x,noise_db\nA,B,1,2,\nA,B,2,1e300,\nA,B,3,-3,-900\n',
      'x*3',
    );
    expect([...readings.level]).toEqual([6, -9]);
    expect(readings.unused).toEqual([
      {
        file: 'pairs.csv',
        line: 3,
        column: '',
        value: '3e+300',
        reason: 'the formula makes this of the row: no level can lie beyond 1000 dB either way',
      },
    ]);
  });

  test('a formula that makes an absurd noise takes its row out', async () => {
    const readings = await read(
      'emitter,receiver,frequency_hz,level_db,noise_db\nA,B,1,2,5\nA,B,2,-3,-900\n',
      'level_db*3',
    );
    expect([...readings.level]).toEqual([6]);
    expect(readings.unused.map(({ line, value }) => [line, value])).toEqual([[3, '-2700']]);
  });

  test('a comma before three digits is refused where nothing else tells what it is', async () => {
    const text = `${HEADER}\nA,B,"1,000",-3\nA,B,"2,000",-4\n`;
    const [fault] = await faults(text);
    expect(fault!.place).toEqual({ file: 'pairs.csv', line: 2, column: 'frequency_hz' });
    expect(fault!.found).toMatch(/`1,000`, a comma before three digits.*2 of 2 places/);
    const whole = await read(`${text}A,B,3000,-5\n`);
    expect([...whole.frequency]).toEqual([3000]);
    expect(whole.unused.map(({ line }) => line)).toEqual([2, 3]);
  });

  test('a level with a decimal comma tells what the commas of the frequencies are', async () => {
    const readings = await read(
      'emitter;receiver;frequency_khz;level_db\nA;B;1,000;-3\nA;B;2,125;-4\nA;B;3,000;-5,125\n',
    );
    expect([...readings.frequency]).toEqual([1000, 2125, 3000]);
    expect([...readings.level]).toEqual([-3, -4, -5.125]);
  });

  test('a cell far down the file tells as well', async () => {
    const rows = Array.from({ length: 400 }, (_, i) => `A;B;${100 + i},000;${i === 399 ? '-3,5' : '-3'}\n`).join('');
    const readings = await read(`emitter;receiver;frequency_khz;level_db\n${rows}`);
    expect(readings.count).toBe(400);
    expect(readings.frequency[0]).toBe(100_000);
  });

  test('fields that a spreadsheet adds or leaves out behind the last header are no fault', async () => {
    const readings = await read(`${HEADER},,\nA,B,1000,-3,,\nA,B,2000,-3\nA,B,3000,-3,,,,\n,,,,,\n`);
    expect(readings.count).toBe(3);
    expect(readings.unused).toEqual([]);
    expect(readings.files[0]!.rows).toBe(3);
  });

  test('unknown columns are named in one notice', async () => {
    const { notices } = await read(`${HEADER},weather,gain,phase\nA,B,1000,-3,fair,3,1\n`);
    expect(notices).toEqual([
      'pairs.csv: the column `gain` names no unit and is kept out; `gain_db` would be read.',
      'pairs.csv: the columns `weather`, `gain`, `phase` are not known here and are kept out.',
    ]);
  });

  test('a frequency without a unit is taken as hertz and told', async () => {
    const { notices, frequency } = await read('emitter,receiver,frequency,level\nA,B,1000,-3\n');
    expect([...frequency]).toEqual([1000]);
    expect(notices).toHaveLength(2);
    expect(notices[0]).toMatch(/`frequency` names no unit; its numbers are taken as Hz/);
  });

  test('a row that a # hides is told', async () => {
    const { notices, takes } = await read(`${HEADER}\n#1,B,1000,-3\n"#1",C,1000,-3\n# a remark\n`);
    expect(takes.map(({ emitter }) => emitter)).toEqual(['#1']);
    expect(notices).toEqual([expect.stringMatching(/1 lines that start with #.*line 2/)]);
  });

  test('distances that differ within a take and times that cannot be ordered are told', async () => {
    const text = `${HEADER},distance_m,taken_at\nA,B,1000,-3,1,04/05/2026\nA,B,2000,-3,2,\nA,C,1000,-3,-1,2026-05-04\n`;
    const { notices, takes } = await read(text);
    expect(takes.map(({ distance, takenAt }) => [distance, takenAt])).toEqual([
      [1, ''],
      [undefined, '2026-05-04'],
    ]);
    expect(notices).toHaveLength(3);
  });

  test('remarks on many takes are counted after the first few', async () => {
    const rows = [...Array(9).keys()].map((i) => `A,B${i},1000,-3,yesterday\n`).join('');
    const { notices } = await read(`${HEADER},taken_at\n${rows}`);
    expect(notices).toHaveLength(4);
    expect(notices[3]).toMatch(/6 more/);
  });

  test('a unit may be measured with itself', async () => {
    const { takes } = await read(`${HEADER}\nA,A,1000,-3\n`);
    expect(takes[0]).toMatchObject({ emitter: 'A', receiver: 'A' });
  });
});

describe('headers and files that stop the run', () => {
  test('each missing column is a fault with an example', async () => {
    const found = await faults('emitter,level_db,pitch\nA,-3,1\n');
    expect(found.map(({ place }) => place)).toEqual([
      { file: 'pairs.csv', line: 1, column: 'receiver' },
      { file: 'pairs.csv', line: 1, column: 'frequency_hz' },
    ]);
    expect(found[0]!.found).toMatch(/`emitter`, `level_db`, `pitch`/);
    expect(found[0]!.expected).toMatch(/emitter,receiver,frequency_hz,level_db/);
    expect(found[0]!.remedy).not.toBe('');
  });

  test('a table without a header is one fault', async () => {
    const found = await faults('A,B,1000,-3\nA,C,1000,-3\n');
    expect(found).toHaveLength(1);
    expect(found[0]!.found).toMatch(/no header that is known/);
  });

  test.each([
    [`${HEADER},LEVEL-DB`, /`level_db` and `LEVEL-DB`/],
    [`${HEADER},ratio`, /`level_db` and `ratio`/],
    [`${HEADER},frequency_khz`, /`frequency_hz` and `frequency_khz`/],
    [`${HEADER},Emitter`, /`emitter` and `Emitter`/],
  ])('%s: two headers with the same meaning', async (header, words) => {
    const [fault] = await faults(`${header}\nA,B,1000,-3,1\n`);
    expect(fault!.place.line).toBe(1);
    expect(fault!.found).toMatch(words);
  });

  test.each([
    ['an empty file', '', /empty file/],
    ['comments only', '# nothing\n\n', /empty file/],
    ['a header only', `${HEADER}\n# nothing\n`, /no row below/],
  ])('%s', async (_, text, words) => {
    const [fault] = await faults(text);
    expect(fault!.found).toMatch(words);
    expect(fault!.expected).toMatch(/emitter,receiver,frequency_hz,level_db/);
  });

  test('a file in which nothing can be used says why, with the first place', async () => {
    const [fault] = await faults(`${HEADER}\nA,B,1000,\nA,C,1000,\nA,D,x,\n`);
    expect(fault!.place).toEqual({ file: 'pairs.csv', line: 2, column: 'level_db' });
    expect(fault!.found).toMatch(/blank; the same in 2 of 3 places/);
  });

  test('decimal commas beside separating commas are named as the likely cause', async () => {
    const [fault] = await faults(`${HEADER}\nA,B,1000,10,5\nA,C,1000,8,5\n`);
    expect(fault!.place).toEqual({ file: 'pairs.csv', line: 2 });
    expect(fault!.found).toMatch(/decimal comma in a file whose separator is the comma/);
  });

  test('a file that ends in the middle of a row is a fault, not a short row', async () => {
    const [fault] = await faults(`${HEADER}\nA,B,1000,-3\nA,C,10`);
    expect(fault!.place.line).toBe(3);
    expect(fault!.found).toMatch(/end of the file in the middle of a row/);
    expect((await read(`${HEADER}\nA,B,1000,-3\nA,C,1000,-3`)).count).toBe(2);
  });
});

describe('level by formula', () => {
  const VOLTS = 'emitter,receiver,frequency_hz,Out [mV],in_mv,gain_db,note,comment';

  test('columns that the formula names become known, and its gain is not subtracted twice', async () => {
    const readings = await read(`${VOLTS}\nA,B,1000,100,10,6,,\n`, '20*log10(out_mv/in_mv) - gain_db');
    expect([...readings.level]).toEqual([14]);
    expect(readings.notices).toEqual(['pairs.csv: the column `comment` is not known here and is kept out.']);
  });

  test('a gain that the formula does not name is subtracted', async () => {
    const readings = await read(`${VOLTS}\nA,B,1000,100,10,6,,\n`, '20*log10(out_mv/in_mv)');
    expect([...readings.level]).toEqual([14]);
  });

  test('0 dB from a formula is a real level', async () => {
    expect([...(await read(`${HEADER}\nA,B,1000,0\n`, 'level_db')).level]).toEqual([0]);
    expect([...(await read(`${HEADER}\nA,B,1000,6\n`, 'level_db - 6')).level]).toEqual([0]);
  });

  test('noise takes the same way as the level it is compared with', async () => {
    const text = `${HEADER},noise_db,distance_m\nA,B,1000,-3,-60,10\n`;
    const readings = await read(text, 'level_db + 20*log10(distance_m)');
    expect([...readings.level]).toEqual([17]);
    expect([...readings.noise!]).toEqual([-40]);
  });

  test('a blank or a word in a named column leaves the row unused', async () => {
    const readings = await read(
      `${VOLTS}\nA,B,1000,100,10,0,,\nA,B,2000,,10,0,,\nA,B,3000,100,ten,0,,\n`,
      'out_mv/in_mv',
    );
    expect([...readings.level]).toEqual([10]);
    expect(readings.unused.map(({ line, column }) => [line, column])).toEqual([
      [3, 'Out [mV]'],
      [4, 'in_mv'],
    ]);
  });

  test('an unknown column is a fault that names the columns there are', async () => {
    const [fault] = await faults(`${VOLTS}\nA,B,1000,100,10,6,,\n`, 'out_v/in_mv');
    expect(fault!.found).toMatch(/no column `out_v`/);
    expect(fault!.expected).toMatch(/`out_mv`, `in_mv`/);
  });

  test('a column that comes twice cannot be named', async () => {
    const [fault] = await faults(`${HEADER},v,V\nA,B,1000,100,10,6\n`, 'v');
    expect(fault!.found).toMatch(/2 columns `v`/);
  });

  test('a formula that gives no finite level is a fault with the first row and the number of rows', async () => {
    const found = await faults(`${VOLTS}\nA,B,1000,1,1,0,,\nA,B,2000,0,1,0,,\nA,B,3000,-1,1,0,,\n`, '20*log10(out_mv)');
    expect(found).toHaveLength(1);
    expect(found[0]!.place.line).toBe(3);
    expect(found[0]!.found).toMatch(/out_mv = 0, and in 1 more rows/);
  });
});
