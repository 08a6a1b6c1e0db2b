import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { parseGrid } from '../../src/cli/grid-text.ts';
import { checkSettings, DEFAULT_SETTINGS } from '../../src/cli/settings.ts';

const troubleOf = (name: string, value: unknown) => checkSettings({ [name]: value }).troubles[0];

describe('checkSettings', () => {
  it('accepts its own defaults unchanged', () => {
    expect(checkSettings({ ...DEFAULT_SETTINGS })).toEqual({ accepted: DEFAULT_SETTINGS, troubles: [] });
  });

  it('leaves absent what is absent, so that a lower source of settings can fill it', () => {
    expect(checkSettings({ u: undefined, model: 'reciprocal' }).accepted).toEqual({ model: 'reciprocal' });
  });

  it.each([
    ['model', 'reciprocals'],
    ['datum', ''],
    ['reversible', 'A,,B'],
    ['reversible', [1]],
    ['refs', ''],
    ['refs', '--json'],
    ['path', 7],
    ['lookalikes', ['A']],
    ['lookalikes', ['A=A']],
    ['lookalikes', ['A=B', 'B=C']],
    ['lookalikes', 'A=B'],
    ['loose-gain', 'yes'],
    ['level', ' '],
    ['u', '0,3'],
    ['u', '0'],
    ['u', '-1'],
    ['u', '0x10'],
    ['u', '1e999'],
    ['u', '1e300'],
    ['u', 1e-300],
    ['u', Number.NaN],
    ['u', ''],
    ['band', '2..80'],
    ['band', '80 kHz..2 kHz'],
    ['band', '2 kHz'],
    ['grid', '1/5'],
    ['grid', 'DECADE/0'],
    ['grid', 'DECADE/1000000'],
    ['coverage', '95'],
    ['coverage', 1],
    ['coverage', 0],
    ['files', [3]],
  ])('refuses %s = %j, and says what it found and gives an example', (name, value) => {
    const trouble = troubleOf(name, value);
    expect(trouble).toMatchObject({ name, found: JSON.stringify(value) });
    expect(trouble?.expected).not.toBe('');
    expect(trouble?.example).not.toBe('');
  });

  it('offers only examples that it would accept itself', () => {
    const bad = {
      model: 0,
      datum: 0,
      reversible: 0,
      refs: 0,
      path: 0,
      u: 'x',
      band: 0,
      grid: 0,
      coverage: 'x',
      level: 0,
    };
    const { troubles } = checkSettings(bad);
    expect(troubles).toHaveLength(Object.keys(bad).length);
    for (const { name, example } of troubles) {
      const typed = example.replace(/^'(.*)'$/, '$1');
      expect(checkSettings({ [name]: typed }).troubles, `${name} ${example}`).toEqual([]);
    }
  });

  it('refuses a name that is no setting, also one that every object has', () => {
    expect(troubleOf('tolerence', 1)?.found).toBe('a setting that is not known');
    expect(troubleOf('constructor', 1)?.found).toBe('a setting that is not known');
  });

  it('reads option text and the JSON value of the same setting alike', () => {
    const text = { reversible: 'A, B', lookalikes: ['A=B=C', 'D=E'], u: '0.3', coverage: '.9' };
    const json = {
      reversible: ['A', 'B'],
      lookalikes: [
        ['A', 'B', 'C'],
        ['D', 'E'],
      ],
      u: 0.3,
      coverage: 0.9,
    };
    expect(checkSettings(text).accepted).toEqual(json);
    expect(checkSettings(json).accepted).toEqual(json);
  });

  it('keeps unit names from JSON that option text could not spell', () => {
    const json = { reversible: ['A,1'], lookalikes: [['A=1', 'B 2']] };
    expect(checkSettings(json).accepted).toEqual(json);
  });

  it('gives the same settings again after a trip through JSON', () => {
    const name = fc.string({ minLength: 1 }).filter((text) => text.trim() !== '' && !text.startsWith('--'));
    const settings = fc.record({
      files: fc.array(name),
      model: fc.constantFrom('auto', 'reciprocal', 'directional'),
      datum: fc.constantFrom('strict', 'balanced'),
      reversible: fc.array(name),
      refs: fc.option(name),
      path: name,
      lookalikes: fc.uniqueArray(name, { minLength: 2 }).map((group) => [group]),
      'loose-gain': fc.boolean(),
      level: fc.option(name),
      u: fc.option(fc.double({ min: 1e-6, max: 100, noNaN: true })),
      band: fc.option(fc.constantFrom('2 kHz..80 kHz', '0.5MHz..1 MHz')),
      grid: fc.constantFrom('as-measured', '1/3', '1/24', 'DECADE/50', 'decade/7'),
      coverage: fc.double({ min: 0.01, max: 0.999, noNaN: true }),
    });
    fc.assert(
      fc.property(settings, (value) => {
        expect(checkSettings(JSON.parse(JSON.stringify(value)))).toEqual({ accepted: value, troubles: [] });
      }),
      { seed: 20, numRuns: 200 },
    );
  });
});

describe('parseGrid', () => {
  it('reads fractions of an octave, points a decade, and the grid as measured', () => {
    expect(parseGrid('1/12')).toEqual({ kind: 'octave bands', fraction: 12 });
    expect(parseGrid('Decade/50')).toEqual({ kind: 'per decade', points: 50 });
    expect(parseGrid('as-measured')).toEqual({ kind: 'as measured' });
  });

  it.each(['', '1/2', '12', '1/12 ', 'DECADE/', 'DECADE/1.5', 'OCTAVE/3', '2/3'])('does not guess at %j', (text) => {
    expect(parseGrid(text)).toBeUndefined();
  });
});
