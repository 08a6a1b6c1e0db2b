import { jsonFigure } from './json-text.ts';
import { roundedFrequency } from './number-text.ts';
import type { Result } from './result.ts';

/** Tests of the set as a whole, as a record for JSON: lack of fit, chi-square, level, reciprocity, loops. */
export function agreementRecord({ examination, set }: Result): Readonly<Record<string, unknown>> {
  const { changed, lookalikes, levels, reciprocity, bands, loops } = examination;
  const range = ({ from, to }: { readonly from: number; readonly to: number }) => ({
    from_hz: roundedFrequency(from),
    to_hz: roundedFrequency(to),
  });
  const ends = [...levels.bands.flatMap(({ upper, lower }) => [upper, lower]), ...levels.together, ...levels.takes];
  const bent = new Set(ends.filter(({ isShown }) => isShown).flatMap(({ takes }) => takes.map(({ take }) => take)));
  return {
    changed_units: changed.map(({ unit, mount, from, order, shift, uncertainty, pValue }) => ({
      unit,
      mount: mount === '' ? null : mount,
      from_take: set.takes[from]!.id,
      order,
      shift_db: jsonFigure(shift),
      u_db: jsonFigure(uncertainty),
      p_value: jsonFigure(pValue),
    })),
    lookalikes: lookalikes.map(({ one, other, mount, role, frequencies, beyond, difference, expanded, verdict }) => ({
      units: [one, other],
      mount: mount === '' ? null : mount,
      role,
      frequencies,
      beyond,
      difference_db: jsonFigure(difference),
      expanded_db: jsonFigure(expanded),
      verdict,
    })),
    lack_of_fit: {
      pure_error_from: bands.pureErrorFrom,
      p_value: jsonFigure(bands.lackOfFitP),
      bands: bands.bands.map((band) => ({
        ...range(band),
        f: jsonFigure(band.lackOfFit?.f ?? Number.NaN),
        p_value: jsonFigure(band.lackOfFit?.pAdjusted ?? Number.NaN),
      })),
    },
    chi_square: {
      p_value: jsonFigure(bands.chiSquareP),
      bands: bands.bands.map((band) => ({
        ...range(band),
        chi_square: jsonFigure(band.chiSquare?.chiSquare ?? Number.NaN),
        dof: jsonFigure(band.chiSquare?.dof ?? Number.NaN),
        p_value: jsonFigure(band.chiSquare?.pAdjusted ?? Number.NaN),
      })),
    },
    level: {
      verdict: levels.verdict,
      takes: [...bent].sort((a, b) => a - b).map((t) => set.takes[t]!.id),
      bands: levels.bands.map((band) => ({
        ...range(band),
        f: jsonFigure(band.additivity.f),
        p_value: jsonFigure(band.additivityAdjusted),
        verdict: band.verdict,
      })),
    },
    reciprocity: {
      pairs_both_ways: reciprocity.pairs,
      in_different_seatings: reciprocity.differentSeatings,
      speaks_against_model: reciprocity.speaksAgainstModel,
      bands: reciprocity.bands.map((band) => ({
        ...range(band),
        rms_difference_db: jsonFigure(band.rmsDifference),
        p_value: jsonFigure(band.pAdjusted),
        verdict: band.verdict,
      })),
    },
    loops: {
      listed: loops.loops.length,
      left_out: loops.leftOut,
      beyond_limit: loops.beyondLimit,
      u_of: loops.uncertaintyOf,
    },
  };
}
