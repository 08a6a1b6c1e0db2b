import { LINK_STATUS } from '../../estimate/solution.ts';
import type { HoldFinding } from '../../findings/holds.ts';
import type { Response, Role } from '../../model/model.ts';
import { coverageFactors } from '../../numeric/student-t.ts';
import { responseName } from '../response-name.ts';
import type { Result } from '../result.ts';

/** One response over all frequencies. Numbers are in dB, NaN where not available. */
export interface ResponseCurve {
  readonly response: Response;
  readonly name: string;
  /** Place among all responses: decides colour and dash, the same in every picture. */
  readonly place: number;
  readonly level: Float64Array;
  readonly expanded: Float64Array;
  /** Expanded uncertainties as seated, seated again, and on another partner. */
  readonly uses: readonly [Float64Array, Float64Array, Float64Array];
  /** Whether the level rests on a datum at some frequency. */
  readonly isOnDatum: boolean;
  /** Bands in which its response depends on the partner. */
  readonly dependent: readonly HoldFinding[];
}

/** The responses in the order of the model. */
export function responseCurves(result: Result): ResponseCurve[] {
  const { model, solution, set, examination, coverage } = result;
  const factorOf = coverageFactors(coverage);
  const n = model.linksPerFrequency;
  const open = LINK_STATUS.indexOf('open');
  return model.responses.map((response, place) => {
    const curve = (of: (cell: number, f: number) => number) =>
      Float64Array.from(set.frequencies, (_, f) => {
        const cell = f * n + response.link;
        return solution.status[cell] === open ? Number.NaN : of(cell, f);
      });
    const expandedOf = (u: Float64Array, dof: Float64Array) =>
      curve((cell) => (Number.isNaN(u[cell]!) ? Number.NaN : u[cell]! * factorOf(dof[cell]!)));
    const asSeated = expandedOf(solution.uncertainty, solution.dof);
    return {
      response,
      name: responseName(response),
      place,
      level: curve((cell, f) => solution.estimates[cell]! + (response.offset?.[f] ?? 0)),
      expanded: asSeated,
      uses: [
        asSeated,
        expandedOf(solution.reseatUncertainty, solution.reseatDof),
        expandedOf(solution.partnerUncertainty, solution.partnerDof),
      ],
      isOnDatum: [...set.frequencies.keys()].some(
        (f) => LINK_STATUS[solution.status[f * n + response.link]!] === 'datum',
      ),
      dependent: examination.holds.filter(
        ({ unit, mount, verdict }) =>
          unit === response.unit && mount === response.mount && (verdict === 'broken' || verdict === 'strained'),
      ),
    };
  });
}

/** Curves of the same role: levels of emitting and of receiving are different quantities and share no axis. */
export function byRole(curves: readonly ResponseCurve[]): { role: Role; curves: ResponseCurve[] }[] {
  return (['both', 'emit', 'receive'] as const)
    .map((role) => ({ role, curves: curves.filter(({ response }) => response.role === role) }))
    .filter(({ curves: own }) => own.length > 0);
}
