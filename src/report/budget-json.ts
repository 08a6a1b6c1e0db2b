import { budgetTotals } from '../estimate/budget-totals.ts';
import { jsonFigure } from './json-text.ts';
import { responseName } from './response-name.ts';
import type { Result } from './result.ts';

/** `budget` in summary.json: for each response its sources over all bands. */
export function budgetRecord({ model, budget = [] }: Pick<Result, 'model' | 'budget'>): unknown {
  return model.responses.flatMap((response, r) => {
    const own = budget.filter((band) => band.response === r);
    if (own.length === 0) return [];
    const sources = budgetTotals(own).map(({ source, type, uncertainty, share, sensitivity }) => ({
      source,
      type,
      u_db: jsonFigure(uncertainty),
      share: jsonFigure(share),
      sensitivity: jsonFigure(sensitivity),
    }));
    return [{ name: responseName(response), sources }];
  });
}

/** The largest sources over all responses and bands, in one sentence; empty without a budget. */
export function budgetSentence({ budget = [] }: Pick<Result, 'budget'>): string {
  const shown = budgetTotals(budget).filter(({ share }) => share >= 0.005);
  if (shown.length === 0) return '';
  const texts = shown
    .slice(0, 5)
    .map(({ source, type, share }) => `${source} ${Math.round(100 * share)} % (type ${type})`);
  const more = shown.length > texts.length ? ', and smaller ones' : '';
  return `Of the variance of responses as seated: ${texts.join(', ')}${more}; budget.csv has it by unit and band.`;
}
