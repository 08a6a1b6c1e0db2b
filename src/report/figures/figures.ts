import type { Result } from '../result.ts';
import { flaggedTakes, tieGroups } from '../take-wording.ts';
import { budgetFigure } from './budget-figure.ts';
import type { Figure } from './figure.ts';
import { holdsFigure } from './holds-figure.ts';
import { loopsFigure } from './loops-figure.ts';
import { networkFigure } from './network-figure.ts';
import { residualMap } from './residual-map.ts';
import { responseCurves } from './response-curves.ts';
import { responsesFigures } from './responses-figure.ts';
import { scatterFigure } from './scatter-figure.ts';
import { takeFigure } from './take-figure.ts';
import { uncertaintyFigure } from './uncertainty-figure.ts';

/** All pictures of a result; those that have nothing to show are absent. */
export interface Figures {
  readonly network: Figure;
  /** One a role. */
  readonly responses: readonly Figure[];
  readonly holds: Figure | undefined;
  readonly scatter: Figure | undefined;
  readonly residuals: Figure;
  /** Takes that disagree or are tied, by their index. */
  readonly takes: ReadonlyMap<number, Figure>;
  readonly loops: Figure | undefined;
  readonly budget: Figure | undefined;
  readonly uncertainty: Figure | undefined;
}

/** Takes with a picture of their own; the rest are in the tables. */
export const MOST_TAKES = 20;

export function figuresOf(result: Result): Figures {
  const disagreeing = [...flaggedTakes(result.examination), ...tieGroups(result.examination).flat()];
  const curves = responseCurves(result);
  return {
    network: networkFigure(result),
    responses: responsesFigures(result, curves),
    holds: holdsFigure(result),
    scatter: scatterFigure(result),
    residuals: residualMap(result),
    takes: new Map(
      disagreeing.slice(0, MOST_TAKES).map((finding) => [finding.take, takeFigure(result, finding)] as const),
    ),
    loops: loopsFigure(result),
    budget: budgetFigure(result),
    uncertainty: uncertaintyFigure(result, curves),
  };
}

/** In the order of the page. */
export function listOfFigures(figures: Figures): Figure[] {
  const { network, responses, holds, scatter, residuals, takes, loops, budget, uncertainty } = figures;
  const all = [network, ...responses, holds, scatter, residuals, ...takes.values(), loops, budget, uncertainty];
  return all.filter((figure) => figure !== undefined);
}
