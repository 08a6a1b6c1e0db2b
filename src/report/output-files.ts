import { budgetTable } from './budget-table.ts';
import { covarianceFile } from './covariance-json.ts';
import { holdsTable } from './holds-table.ts';
import { jsonText } from './json-text.ts';
import { loopsTable } from './loops-table.ts';
import { mountsTable } from './mounts-table.ts';
import { pairsTable } from './pairs-table.ts';
import { residualsTable } from './residuals-table.ts';
import { responsesTable } from './responses-table.ts';
import type { OutputFile, Result } from './result.ts';
import { scatterTable } from './scatter-table.ts';
import { summaryRecord } from './summary-json.ts';
import { takesTable } from './takes-table.ts';
import { unusedTable } from './unused-table.ts';

/** Every file that `solve` writes. Their text is made while it is written: nothing is computed before. */
export function outputFiles(result: Result): OutputFile[] {
  return [
    responsesTable(result),
    takesTable(result),
    pairsTable(result),
    residualsTable(result),
    loopsTable(result.examination.loops.loops),
    scatterTable(result),
    holdsTable(result),
    mountsTable(result),
    ...(result.budget === undefined ? [] : [budgetTable(result, result.budget)]),
    unusedTable(result),
    { name: 'summary.json', chunks: () => [jsonText(summaryRecord(result))] },
    covarianceFile(result),
  ];
}
