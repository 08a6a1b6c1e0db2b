import { frequencyText } from '../quantity/frequency.ts';
import type { SheetTake } from '../whatif/run-sheet.ts';
import { type Column, csvFile } from './csv-file.ts';
import { frequencyCell } from './number-text.ts';
import { placedUnit } from './response-name.ts';
import type { OutputFile } from './result.ts';
import type { SheetPlan } from './whatif-result.ts';
import { CAUTIONS, counted } from './wording.ts';

interface SheetRow extends SheetTake {
  /** Hertz; NaN where the take names a file. */
  readonly frequency: number;
}

const LABELS: readonly Column<SheetRow>[] = [
  { name: 'emitter', text: ({ seating }) => seating.emitter },
  { name: 'receiver', text: ({ seating }) => seating.receiver },
  { name: 'session', text: ({ seating }) => seating.session },
  { name: 'path', text: ({ seating }) => seating.path },
  { name: 'emitter_mount', text: ({ seating }) => seating.emitterMount },
  { name: 'receiver_mount', text: ({ seating }) => seating.receiverMount },
  { name: 'emitter_seating', text: ({ emitterSeating }) => emitterSeating },
  { name: 'receiver_seating', text: ({ receiverSeating }) => receiverSeating },
  { name: 'repeat', text: ({ repeat }) => String(repeat) },
];

/**
 * The run sheet as a file that `solve` reads once it is filled in: a bench log with the names of files to save, or, with
 * frequencies, a row a reading with an empty level. Labels that no take has are left out.
 */
export function sheetFile({ csv, takes, frequencies }: SheetPlan): OutputFile {
  const isLog = frequencies.length === 0;
  const rows = takes.flatMap((take): SheetRow[] =>
    isLog ? [{ ...take, frequency: Number.NaN }] : frequencies.map((frequency) => ({ ...take, frequency })),
  );
  const labels = LABELS.filter(({ text }) => rows.some((row) => text(row) !== ''));
  const note: Column<SheetRow> = { name: 'note', text: ({ seating }) => (seating.kind === 'control' ? 'control' : '') };
  const columns: readonly Column<SheetRow>[] = isLog
    ? [{ name: 'file', text: ({ file }) => file }, ...labels, { name: 'taken_at', text: () => '' }, note]
    : [
        ...labels,
        { name: 'frequency_hz', text: ({ frequency }) => frequencyCell(frequency) },
        { name: 'level_db', text: () => '' },
        note,
      ];
  return csvFile(csv, columns, () => rows);
}

/** What is to be typed once the sheet is filled in. */
export function solveLine({ csv, model }: Pick<SheetPlan, 'csv' | 'model'>): string {
  return `oddloop solve ${csv} --out result${model === undefined ? '' : ` --model ${model}`}`;
}

/** The run sheet as a page to print and carry: a box to tick for every take, and what is to be mounted before it. */
export function sheetPage(sheet: SheetPlan, facts: readonly string[]): OutputFile {
  return { name: sheet.page, chunks: () => [pageText(sheet, facts)] };
}

const STYLE = `
body { font: 11pt/1.35 system-ui, sans-serif; margin: 1.5rem auto; max-width: 50rem; padding: 0 1rem; color: #000; background: #fff; }
h1 { font-size: 1.3rem; margin: 0 0 .3rem; }
table { border-collapse: collapse; width: 100%; margin-top: .8rem; }
th, td { text-align: left; padding: .28rem .5rem; border-bottom: 1px solid #888; vertical-align: top; overflow-wrap: anywhere; }
th { border-bottom: 2px solid #000; }
thead { display: table-header-group; }
tr { break-inside: avoid; }
tr.mounting td { border-top: 2px solid #000; }
.box { display: inline-block; width: .9em; height: .9em; border: 1.5px solid #000; }
.blank { display: inline-block; min-width: 7rem; border-bottom: 1px solid #888; }
.small { font-size: .85rem; }
@media print { body { margin: 0; max-width: none; } @page { size: A4; margin: 14mm; } }`;

function pageText(sheet: SheetPlan, facts: readonly string[]): string {
  const { csv, takes, frequencies } = sheet;
  const fill =
    frequencies.length > 0
      ? `Write the levels into ${csv}, at ${frequencies.map((frequency) => frequencyText(frequency, 4)).join(', ')}.`
      : `Save each spectrum under its name, beside ${csv}.`;
  const isLong = takes.some(({ seating }) => seating.session !== '');
  const rows = takes.map((take) => rowText(take, isLong, frequencies.length === 0)).join('\n');
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>Run sheet, ${escaped(csv)}</title>
<style>${STYLE}
</style>
</head>
<body>
<h1>Run sheet: ${counted(takes.length, 'take')}</h1>
<p>${[...facts, fill, `Then: ${solveLine(sheet)}`].map(escaped).join('<br>')}</p>
<p>Date <span class="blank"></span> Name <span class="blank"></span> Bench <span class="blank"></span></p>
<table>
<thead><tr><th scope="col">done</th><th scope="col">no.</th>${isLong ? '<th scope="col">session</th>' : ''}<th scope="col">mount first</th><th scope="col">emitter</th><th scope="col">receiver</th><th scope="col">repeat</th>${frequencies.length === 0 ? '<th scope="col">save as</th>' : ''}<th scope="col">remark</th></tr></thead>
<tbody>
${rows}
</tbody>
</table>
<p class="small">${escaped('A unit that is not to be mounted stays untouched. Where something goes otherwise, note it and correct the seating numbers in the file.')}</p>
<p class="small">${CAUTIONS.map(escaped).join(' ')}</p>
</body>
</html>
`;
}

function rowText(take: SheetTake, isLong: boolean, namesFile: boolean): string {
  const { number, seating, emitterSeating, receiverSeating, repeat, mounts, file } = take;
  const end = (unit: string, mount: string, label: string) =>
    `${escaped(placedUnit({ unit, mount }))} <span class="small">(seating ${escaped(label)})</span>`;
  const remark = [seating.kind === 'control' ? 'control' : '', seating.path === '' ? '' : `over ${seating.path}`];
  const cells = [
    '<span class="box" role="img" aria-label="box to tick"></span>',
    String(number),
    ...(isLong ? [escaped(seating.session)] : []),
    mounts.length === 0 ? '–' : escaped(mounts.join(', ')),
    end(seating.emitter, seating.emitterMount, emitterSeating),
    end(seating.receiver, seating.receiverMount, receiverSeating),
    String(repeat),
    ...(namesFile ? [escaped(file)] : []),
    escaped(remark.filter((text) => text !== '').join('; ')),
  ];
  return `<tr${mounts.length > 0 ? ' class="mounting"' : ''}>${cells.map((cell) => `<td>${cell}</td>`).join('')}</tr>`;
}

const ENTITIES: Readonly<Record<string, string>> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;',
};

function escaped(text: string): string {
  return text.replace(/[&<>"']/g, (character) => ENTITIES[character]!);
}
