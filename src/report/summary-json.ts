import type { UnitFinding } from '../findings/examination.ts';
import { agreementRecord } from './agreement-json.ts';
import { benchCounts } from './bench-counts.ts';
import { budgetRecord } from './budget-json.ts';
import { availability, jsonFigure, jsonLevel } from './json-text.ts';
import { monteCarloRecord } from './monte-carlo-json.ts';
import { roundedFrequency } from './number-text.ts';
import { placedUnit } from './response-name.ts';
import type { InputSummary, Result } from './result.ts';
import { separabilityRecord } from './separability-json.ts';
import { verdict } from './verdict-wording.ts';
import { mountingRecord, takesRecord } from './verdicts-json.ts';
import { allNotices, CAUTIONS } from './wording.ts';

const SUMMARY_SCHEMA = 'oddloop-summary/1';

/**
 * `summary.json`: what was done and found, as one record. Keys carry their units; `null` means 'not available', with the
 * reason in a status beside it. Nothing in it depends on the time or the machine: the same input gives the same bytes.
 */
export function summaryRecord(result: Result): Readonly<Record<string, unknown>> {
  const { version, settings, coverage, input, set, model, solution, examination } = result;
  const { whole } = examination;
  const { readingUncertainty: reading } = solution;
  return {
    schema: SUMMARY_SCHEMA,
    version,
    settings,
    verdict: verdict(result).map((statement) => statement.text),
    input: inputRecord(input),
    counts: countsRecord(result),
    grid: set.grid,
    model: { kind: model.choice.kind, reason: model.choice.reason, datum: model.datum },
    ...separabilityRecord(model, solution.patterns, examination.open, set.frequencies),
    uncertainty: {
      source: reading.source,
      statement: reading.statement,
      coverage,
      bands: reading.bands.map((band) => ({
        from_hz: roundedFrequency(band.from),
        to_hz: roundedFrequency(band.to),
        u_db: jsonFigure(band.standardDeviation),
        status: availability(band.standardDeviation),
        dof: jsonFigure(band.dof),
      })),
    },
    budget: budgetRecord(result),
    monte_carlo: monteCarloRecord(result),
    whole: {
      degrees_of_freedom: jsonFigure(whole.degreesOfFreedom),
      rms_residual_db: jsonLevel(whole.rmsResidual),
      residual_deviation_db: jsonFigure(whole.residualDeviation),
      residual_deviation_status: availability(whole.residualDeviation),
      chi_square_per_dof: jsonFigure(whole.chiSquarePerDof),
      chi_square_status: availability(whole.chiSquarePerDof),
    },
    takes: takesRecord(result),
    mounting: mountingRecord(result),
    agreement: agreementRecord(result),
    units: examination.units.map((unit) => unitRecord(result, unit)),
    gains: solution.gains.map((gain) => ({
      name: model.links[gain.link]!.name,
      gain_db: jsonLevel(gain.value),
      u_db: jsonFigure(gain.uncertainty),
      u_status: availability(gain.uncertainty),
      status: gain.status,
    })),
    numerics: { worst_condition: jsonFigure(solution.worstCondition), fallbacks: solution.fallbacks },
    notices: allNotices(input, set),
    cautions: CAUTIONS,
  };
}

/** The files with their fingerprints, and how much of them was used. */
export function inputRecord(input: InputSummary): Readonly<Record<string, unknown>> {
  return {
    files: input.files.map(({ name, layout, sha256, bytes, rows }) => ({ name, layout, sha256, bytes, rows })),
    readings: input.readings,
    unused: input.unused.length,
  };
}

/** Counts of the bench, with its lowest and highest frequency. */
export function countsRecord({ set, model }: Pick<Result, 'set' | 'model'>): Readonly<Record<string, unknown>> {
  const { takes, units, pairs, sessions, frequencies, from, to } = benchCounts(set, model);
  return {
    takes,
    units,
    pairs,
    sessions,
    frequencies,
    from_hz: roundedFrequency(from),
    to_hz: roundedFrequency(to),
  };
}

function unitRecord({ model }: Result, finding: UnitFinding): Readonly<Record<string, unknown>> {
  const response = model.responses[finding.response]!;
  const { ok, datum, open } = finding.counts;
  return {
    unit: response.unit,
    mount: response.mount === '' ? null : response.mount,
    role: response.role,
    name: placedUnit(response),
    median_level_db: jsonLevel(finding.medianLevel),
    level_status: ok + datum === 0 ? 'open' : datum > 0 ? 'datum' : 'ok',
    median_u_db: jsonFigure(finding.medianUncertainty),
    median_expanded_db: jsonFigure(finding.medianExpanded),
    u_status: availability(finding.medianUncertainty),
    frequencies: { ok, datum, open },
    unchecked: finding.unchecked,
  };
}
