import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { readFiles } from '../../src/readings/read-files.ts';
import { faultsOf, memorySource } from './memory-source.ts';

const LONG = 'emitter,receiver,frequency_hz,level_db\nA,B,1000,-3\n';

describe('files', () => {
  test('layouts may be mixed; a column that one file has is NaN for the others', async () => {
    const readings = await readFiles(
      [
        memorySource('long.csv', LONG),
        memorySource('wide.csv', 'frequency_hz,A>C\n1000,-4\n'),
        memorySource('more.csv', 'emitter,receiver,frequency_hz,level_db,u_db\nB,C,1000,-5,0.3\n'),
        memorySource('log.csv', 'file,emitter,receiver\nx.txt,B,D\n', { 'x.txt': 'frequency_hz,level_db\n1000,-6\n' }),
      ],
      {},
    );
    expect(readings.files.map(({ layout }) => layout)).toEqual(['long', 'wide', 'long', 'bench log', 'take']);
    expect([...readings.level]).toEqual([-3, -4, -5, -6]);
    expect([...readings.uncertainty!]).toEqual([Number.NaN, Number.NaN, 0.3, Number.NaN]);
    expect(readings.takes.map(({ file }) => file)).toEqual(['long.csv', 'wide.csv', 'more.csv', 'x.txt']);
  });

  test('the same pair in two files is two takes', async () => {
    const readings = await readFiles([memorySource('a.csv', LONG), memorySource('b.csv', `${LONG}\n`)], {});
    expect(readings.takes).toHaveLength(2);
  });

  test('the faults of all files are thrown together', async () => {
    const faults = await faultsOf(
      readFiles(
        [
          memorySource('a.csv', ''),
          memorySource('b.csv', LONG),
          memorySource('c.csv', 'x,y\n1,2\n'),
          memorySource('d.csv', undefined),
        ],
        {},
      ),
    );
    expect(faults.map(({ place }) => place.file)).toEqual(['a.csv', 'c.csv', 'd.csv']);
  });

  test('the same measurements twice are refused', async () => {
    const [same] = await faultsOf(readFiles([memorySource('a.csv', LONG), memorySource('b.csv', LONG)], {}));
    expect(same!.found).toBe('the same content as in a.csv');
    const [twice] = await faultsOf(readFiles([memorySource('a.csv', LONG), memorySource('a.csv', LONG)], {}));
    expect(twice!.found).toBe('the same file a second time');
  });

  test('progress ends at the bytes of all files, those of a log included', async () => {
    const calls: (readonly [number, number])[] = [];
    const log = memorySource('log.csv', 'file,emitter,receiver\nx.txt,A,C\n', { 'x.txt': '1000,-6\n' });
    await readFiles([memorySource('a.csv', LONG, {}, 20), log], {
      onProgress: (done, total) => calls.push([done, total]),
    });
    const bytes = LONG.length + 'file,emitter,receiver\nx.txt,A,C\n1000,-6\n'.length;
    expect(calls.at(-1)).toEqual([bytes, bytes]);
    for (const [done, total] of calls) expect(done).toBeLessThanOrEqual(total);
  });

  test('a file and column beside frequencies are long, not a log', async () => {
    const readings = await readFiles(
      [memorySource('a.csv', 'emitter,receiver,frequency_hz,level_db,file\nA,B,1000,-3,x.wav\n')],
      {},
    );
    expect(readings.files[0]!.layout).toBe('long');
    expect(readings.notices).toEqual(['a.csv: the column `file` is not known here and is kept out.']);
  });
});

describe('dialects', () => {
  const name = fc.stringMatching(/^[A-Za-zä#][A-Za-z0-9µ #,;"']{0,7}$/).map((text) => text.trim());
  const row = fc.record({
    emitter: name,
    receiver: name,
    frequency: fc.integer({ min: 1, max: 9_999_999 }).map((value) => value / 100),
    level: fc
      .integer({ min: -99_999, max: 99_999 })
      .filter((value) => value !== 0)
      .map((value) => value / 1000),
  });
  const dialect = fc.record({
    separator: fc.constantFrom(',', ';', '\t'),
    comma: fc.boolean(),
    end: fc.constantFrom('\n', '\r\n', '\r'),
    mark: fc.boolean(),
    lastEnd: fc.boolean(),
    comment: fc.boolean(),
    quoteAll: fc.boolean(),
    minus: fc.constantFrom('-', '\u2212'),
    piece: fc.integer({ min: 1, max: 400 }),
    header: fc.constantFrom('frequency_hz', 'Frequency [Hz]', ' FREQUENCY (hz) ', 'frequency-Hz'),
  });

  test('readings written in any dialect come back as the same numbers, names and lines', async () => {
    await fc.assert(
      fc.asyncProperty(fc.array(row, { minLength: 1, maxLength: 70 }), dialect, async (rows, how) => {
        const field = (text: string) =>
          how.quoteAll || /["\n]/.test(text) || text.includes(how.separator) || text.startsWith('#')
            ? `"${text.replaceAll('"', '""')}"`
            : text;
        const number = (value: number) => {
          const text = String(value).replace('-', how.minus);
          return how.comma ? text.replace('.', ',') : text;
        };
        const lines = [
          ['emitter', 'receiver', how.header, 'level_db'].map(field).join(how.separator),
          ...rows.map((r) =>
            [r.emitter, r.receiver, number(r.frequency), number(r.level)].map(field).join(how.separator),
          ),
        ];
        if (how.comment) lines.splice(1, 0, '# a remark, of the day; "so far', '');
        const text = (how.mark ? '\uFEFF' : '') + lines.join(how.end) + (how.lastEnd ? how.end : '');
        const readings = await readFiles([memorySource('x.csv', text, {}, how.piece)], {});
        expect(readings.unused).toEqual([]);
        expect([...readings.frequency]).toEqual(rows.map((r) => r.frequency));
        expect([...readings.level]).toEqual(rows.map((r) => r.level));
        const from = how.comment ? 4 : 2;
        expect([...readings.line]).toEqual(rows.map((_, i) => from + i));
        expect([...readings.take].map((t) => [readings.takes[t]!.emitter, readings.takes[t]!.receiver])).toEqual(
          rows.map((r) => [r.emitter, r.receiver]),
        );
        const pairs = new Set(rows.map((r) => JSON.stringify([r.emitter, r.receiver])));
        expect(readings.takes).toHaveLength(pairs.size);
      }),
      { seed: 7, numRuns: 300 },
    );
  });
});
