import type { TakeFinding, TakeVerdict } from '../findings/examination.ts';
import type { Explanation, RankedExplanation } from '../findings/explanations.ts';
import type { HoldFinding } from '../findings/holds.ts';
import { jsonFigure, jsonLevel } from './json-text.ts';
import { roundedFrequency } from './number-text.ts';
import type { Result } from './result.ts';
import { adviceText, readsLike } from './take-wording.ts';

const VERDICTS: readonly TakeVerdict[] = ['agrees', 'flagged', 'tied', 'uncheckable', 'not tested'];
const HOLDS: readonly HoldFinding['verdict'][] = ['holds', 'strained', 'broken', 'not testable'];

/** Which takes do not agree, as a record for JSON: counts of all verdicts, and every take that is flagged, tied or uncheckable. */
export function takesRecord(result: Result): Readonly<Record<string, unknown>> {
  const { examination, set } = result;
  const { takes, whole } = examination;
  const worstFirst = takes
    .filter(({ verdict }) => verdict === 'flagged' || verdict === 'tied')
    .sort((a, b) => a.pValue - b.pValue || a.take - b.take);
  const of = (verdict: TakeVerdict) =>
    worstFirst.filter((finding) => finding.verdict === verdict).map((finding) => takeRecord(result, finding));
  return {
    counts: counts(VERDICTS, takes),
    model_fails: whole.isModelFailing,
    left_out: takes.filter(({ isLeftOut }) => isLeftOut).map(({ take }) => set.takes[take]!.id),
    flagged: of('flagged'),
    tied: of('tied'),
    uncheckable: takes
      .filter(({ verdict }) => verdict === 'uncheckable')
      .map(({ take, cure }) => ({ take: set.takes[take]!.id, extra_take: cureRecord(cure) })),
  };
}

function takeRecord(result: Result, finding: TakeFinding): Readonly<Record<string, unknown>> {
  const { set, coverage } = result;
  const { id, file, line, emitter, receiver, path, session } = set.takes[finding.take]!;
  const { worst, explained } = finding;
  return {
    take: id,
    file,
    line,
    emitter,
    receiver,
    path: path === '' ? null : path,
    session: session === '' ? null : session,
    p_value: jsonFigure(finding.pValue),
    left_out: finding.isLeftOut,
    rms_residual_db: jsonLevel(finding.rmsResidual),
    offset_db: jsonLevel(finding.offset),
    u_offset_db: jsonFigure(finding.offsetUncertainty),
    smallest_shift_db: jsonFigure(finding.smallestShift),
    worst:
      worst === undefined
        ? null
        : {
            from_hz: roundedFrequency(worst.from),
            to_hz: roundedFrequency(worst.to),
            level_db: jsonLevel(worst.level),
          },
    tied_with: finding.tiedWith.map((other) => set.takes[other]!.id),
    reads_like: readsLike(finding, coverage),
    explanations: explained?.ranked.map(explanationRecord) ?? [],
    extra_take: cureRecord(finding.cure),
    advice: adviceText(result, finding),
  };
}

function cureRecord(cure: TakeFinding['cure']) {
  return cure === undefined
    ? null
    : { emitter: cure.emitter, receiver: cure.receiver, path: cure.path === '' ? null : cure.path };
}

/** An explanation with its size, and how far it is behind the best one (Bayesian information criterion, 0 for the best). */
function explanationRecord({ explanation, behind, isEquallyGood }: RankedExplanation) {
  return { ...sizeOf(explanation), behind: jsonFigure(behind), equally_good: isEquallyGood };
}

function sizeOf(explanation: Explanation): Readonly<Record<string, unknown>> {
  const { kind } = explanation;
  switch (explanation.kind) {
    case 'moved gain':
      return {
        kind,
        gain_db: jsonLevel(explanation.shift),
        u_db: jsonFigure(explanation.uncertainty),
        dof: jsonFigure(explanation.dof),
      };
    case 'slope':
      return {
        kind,
        slope_db_per_decade: jsonLevel(explanation.perDecade),
        u_db_per_decade: jsonFigure(explanation.uncertainty),
        middle_db: jsonLevel(explanation.shift),
      };
    case 'local':
      return {
        kind,
        centre_hz: jsonFigure(explanation.centre),
        from_hz: jsonFigure(explanation.from),
        to_hz: jsonFigure(explanation.to),
        height_db: jsonLevel(explanation.height),
        u_db: jsonFigure(explanation.uncertainty),
      };
    case 'scatter':
      return { kind, factor: jsonFigure(explanation.factor) };
    case 'another label':
      return { kind, end: explanation.end, unit: explanation.unit };
    case 'direction reversed':
      return { kind };
  }
}

/** Where responses do not depend on the partner, as a record for JSON; the bands that hold are in `holds.csv`. */
export function mountingRecord({ examination, tolerance }: Result): Readonly<Record<string, unknown>> {
  const { holds } = examination;
  const of = (verdict: HoldFinding['verdict']) => holds.filter((hold) => hold.verdict === verdict).map(holdRecord);
  return {
    tolerance_db: tolerance,
    counts: counts(HOLDS, holds),
    broken: of('broken'),
    strained: of('strained'),
    model_fails: examination.failing.map((band) => ({
      from_hz: roundedFrequency(band.from),
      to_hz: roundedFrequency(band.to),
      typical_partner_db: jsonFigure(band.typical),
      low_db: jsonFigure(band.low),
    })),
  };
}

function holdRecord({ unit, mount, from, to, partner, low, high, pValue }: HoldFinding) {
  return {
    unit,
    mount: mount === '' ? null : mount,
    from_hz: roundedFrequency(from),
    to_hz: roundedFrequency(to),
    partner_db: jsonFigure(partner),
    low_db: jsonFigure(low),
    high_db: jsonFigure(high),
    p_value: jsonFigure(pValue),
  };
}

/** How many there are of each verdict; its name with `_` for blanks. */
function counts(verdicts: readonly string[], findings: readonly { readonly verdict: string }[]) {
  return Object.fromEntries(
    verdicts.map((verdict) => [
      verdict.replaceAll(' ', '_'),
      findings.filter((finding) => finding.verdict === verdict).length,
    ]),
  );
}
