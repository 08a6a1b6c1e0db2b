import { LINK_STATUS } from '../estimate/solution.ts';
import type { HoldFinding } from '../findings/holds.ts';
import type { Response } from '../model/model.ts';
import type { LinkStatus } from '../model/separability.ts';
import { coverageFactors } from '../numeric/student-t.ts';
import { type Column, csvFile } from './csv-file.ts';
import { figureCell, frequencyCell, levelCell } from './number-text.ts';
import type { OutputFile, Result } from './result.ts';

/** A response at one frequency. Numbers are NaN where they are not available. */
interface ResponseRow {
  readonly response: Response;
  /** Hertz. */
  readonly frequency: number;
  readonly status: LinkStatus;
  /** Decibels. */
  readonly level: number;
  readonly uncertainty: number;
  readonly factor: number;
  readonly dof: number;
  /** Standard uncertainties in dB for the unit seated again, and on another partner. */
  readonly reseat: number;
  readonly partner: number;
  /** Whether the unit's response depends on its partner there; empty where it was not judged. */
  readonly mounting: HoldFinding['verdict'] | '';
}

const COLUMNS: readonly Column<ResponseRow>[] = [
  { name: 'unit', text: (row) => row.response.unit },
  { name: 'mount', text: (row) => row.response.mount },
  { name: 'role', text: (row) => row.response.role },
  { name: 'frequency_hz', text: (row) => frequencyCell(row.frequency) },
  { name: 'level_db', text: (row) => levelCell(row.level) },
  { name: 'u_db', text: (row) => figureCell(row.uncertainty) },
  { name: 'k', text: (row) => figureCell(row.factor) },
  { name: 'expanded_db', text: (row) => figureCell(row.factor * row.uncertainty) },
  { name: 'dof', text: (row) => figureCell(row.dof) },
  { name: 'u_reseat_db', text: (row) => figureCell(row.reseat) },
  { name: 'u_partner_db', text: (row) => figureCell(row.partner) },
  { name: 'status', text: (row) => row.status },
  { name: 'mounting', text: (row) => row.mounting },
];

/** `responses.csv`: every response at every frequency; an open one has neither level nor uncertainty. */
export function responsesTable(result: Result): OutputFile {
  return csvFile('responses.csv', COLUMNS, () => responseRows(result));
}

function* responseRows({ set, model, solution, examination, coverage }: Result): Iterable<ResponseRow> {
  const factorOf = coverageFactors(coverage);
  for (const response of model.responses) {
    const own = examination.holds.filter(({ unit, mount }) => unit === response.unit && mount === response.mount);
    for (let f = 0; f < set.frequencies.length; f++) {
      const frequency = set.frequencies[f]!;
      const cell = f * model.linksPerFrequency + response.link;
      const status = LINK_STATUS[solution.status[cell]!]!;
      const isOpen = status === 'open';
      const uncertainty = isOpen ? Number.NaN : solution.uncertainty[cell]!;
      const known = !Number.isNaN(uncertainty);
      const dof = known ? solution.dof[cell]! : Number.NaN;
      yield {
        response,
        frequency,
        status,
        level: isOpen ? Number.NaN : solution.estimates[cell]! + (response.offset?.[f] ?? 0),
        uncertainty,
        factor: known ? factorOf(dof) : Number.NaN,
        dof,
        reseat: isOpen ? Number.NaN : solution.reseatUncertainty[cell]!,
        partner: isOpen ? Number.NaN : solution.partnerUncertainty[cell]!,
        mounting: own.find(({ from, to }) => frequency >= from && frequency < to)?.verdict ?? '',
      };
    }
  }
}
