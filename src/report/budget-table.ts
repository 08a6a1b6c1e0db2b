import type { BudgetPart, ResponseBudget } from '../estimate/budget.ts';
import { type Column, csvFile } from './csv-file.ts';
import { figureCell, frequencyCell } from './number-text.ts';
import { responseName } from './response-name.ts';
import type { OutputFile, Result } from './result.ts';

interface BudgetRow {
  readonly unit: string;
  readonly band: ResponseBudget;
  readonly part: BudgetPart;
}

/** Significant digits of u, so that the squares of a column sum to that of the whole to 1e-9. */
const DIGITS = 12;

const COLUMNS: readonly Column<BudgetRow>[] = [
  { name: 'unit', text: ({ unit }) => unit },
  { name: 'band_from_hz', text: ({ band }) => frequencyCell(band.from) },
  { name: 'band_to_hz', text: ({ band }) => frequencyCell(band.to) },
  { name: 'source', text: ({ part }) => part.source },
  { name: 'u_db', text: ({ part }) => String(Number(part.uncertainty.toPrecision(DIGITS))) },
  { name: 'share', text: ({ part }) => figureCell(part.share) },
];

/** `budget.csv`: the uncertainty of each response as seated, by source; the largest source of a band first. */
export function budgetTable({ model }: Pick<Result, 'model'>, budget: readonly ResponseBudget[]): OutputFile {
  return csvFile('budget.csv', COLUMNS, function* () {
    for (const band of budget) {
      const unit = responseName(model.responses[band.response]!);
      for (const part of band.parts) yield { unit, band, part };
    }
  });
}
