import { describe, expect, test } from 'vitest';
import {
  formulaName,
  meaningOf,
  PATH_LEVEL_COLUMNS,
  READING_COLUMNS,
  REFERENCE_COLUMNS,
} from '../../src/readings/column-vocabulary.ts';

const meaning = (header: string) => {
  const found = meaningOf(header, READING_COLUMNS);
  if (found === undefined) return undefined;
  return found.kind === 'known' ? [found.rule.name, found.factor] : [found.kind, found.rule.name];
};

describe('headers', () => {
  test.each([
    ['emitter', ['emitter', 1]],
    [' EMITTER ', ['emitter', 1]],
    ['Emitter Mount', ['emitterMount', 1]],
    ['receiver-seating', ['receiverSeating', 1]],
    ['takenAt', ['takenAt', 1]],
    ['frequency_hz', ['frequency', 1]],
    ['Frequency [kHz]', ['frequency', 1e3]],
    ['frequency (MHz)', ['frequency', 1e6]],
    ['FREQUENCY-KHZ', ['frequency', 1e3]],
    ['frequency / Hz', ['frequency', 1]],
    ['frequency_khz [kHz]', ['frequency', 1e3]],
    ['level_db', ['level', 1]],
    ['Level [dB re 1 V/A]', ['level', 1]],
    ['ratio', ['level', 1]],
    ['Ratio [V/V]', ['level', 1]],
    ['u_db', ['uncertainty', 1]],
    ['u (dB)', ['uncertainty', 1]],
    ['noise_db', ['noise', 1]],
    ['gain [dB]', ['gain', 1]],
    ['distance_m', ['distance', 1]],
    ['distance_mm', ['distance', 1e-3]],
    ['Distance [cm]', ['distance', 1e-2]],
    ['averages', ['averages', 1]],
    ['Coherence [-]', ['coherence', 1]],
    ['emitter (serial number)', ['emitter', 1]],
  ])('`%s` is known', (header, expected) => {
    expect(meaning(header)).toEqual(expected);
  });

  test.each(['unit', 'ratio_1', 'averages_2', 'frequency_khz_mhz', 'level_db_mv', 'phase_deg', '', 'emitters', 'db'])(
    '`%s` is not known',
    (header) => {
      expect(meaning(header)).toBeUndefined();
    },
  );

  test('a unit that the column cannot have is told from an unknown column', () => {
    expect(meaning('frequency [rad/s]')).toEqual(['unit unknown', 'frequency']);
    expect(meaning('level [V]')).toEqual(['unit unknown', 'level']);
    expect(meaning('frequency_khz [Hz]')).toEqual(['unit unknown', 'frequency']);
  });

  test('a unit is assumed for frequency and level only, and told', () => {
    expect(meaningOf('frequency', READING_COLUMNS)).toMatchObject({ kind: 'known', factor: 1, assumed: 'Hz' });
    expect(meaningOf('level', READING_COLUMNS)).toMatchObject({ kind: 'known', factor: 1, assumed: 'dB' });
    for (const header of ['u', 'noise', 'gain', 'distance']) expect(meaning(header)![0]).toBe('unit missing');
  });

  test('certificates and path levels have words of their own', () => {
    expect(meaningOf('Unit', REFERENCE_COLUMNS)).toMatchObject({ rule: { name: 'unit' } });
    expect(meaningOf('expanded [dB]', REFERENCE_COLUMNS)).toMatchObject({ rule: { name: 'expanded' } });
    expect(meaningOf('k', REFERENCE_COLUMNS)).toMatchObject({ rule: { name: 'k' } });
    expect(meaningOf('emitter', PATH_LEVEL_COLUMNS)).toBeUndefined();
  });
});

test('a formula names a column in lower case with underscores', () => {
  expect(['Out [mV]', 'in-mV ', 'distance_m', '2nd stage', 'Gerät (µ)'].map(formulaName)).toEqual([
    'out_mv',
    'in_mv',
    'distance_m',
    '_2nd_stage',
    'gerät_µ',
  ]);
});
