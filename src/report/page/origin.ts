import { escaped } from '../figures/markup.ts';
import type { Result } from '../result.ts';
import { counted } from '../wording.ts';
import { table } from './blocks.ts';

/** Version, model, datum and every setting that shaped the result. */
export function settingsList({ version, model, settings }: Result): string {
  const entries: [string, string][] = [
    ['Program', `oddloop ${version}`],
    ['Model', model.choice.kind],
    ['Datum', model.datum],
    ...Object.entries(settings).map(([name, value]): [string, string] => [name, settingText(value)]),
  ];
  const items = entries.map(([name, text]) => `<dt>${escaped(name)}</dt><dd>${escaped(text)}</dd>`).join('');
  return `<h3>Settings</h3><dl>${items}</dl><p class="note">The same run again: <code>oddloop solve --settings summary.json --out again</code></p>`;
}

/** A setting as a reader sees it. */
export function settingText(value: unknown): string {
  if (value === null || value === undefined) return 'not given';
  if (Array.isArray(value)) {
    return value.length === 0
      ? 'none'
      : value.map((item) => (Array.isArray(item) ? item.join(' = ') : String(item))).join(', ');
  }
  return String(value);
}

/** The input files with their fingerprints. */
export function fileList({ input }: Result): string {
  const rows = input.files.map(({ name, rows: count, bytes, sha256 }) => [
    escaped(name),
    counted(count, 'row'),
    `${bytes} bytes`,
    `<code>${escaped(sha256)}</code>`,
  ]);
  return table(
    'Files that were read',
    [{ name: 'File' }, { name: 'Rows' }, { name: 'Size' }, { name: 'SHA-256' }],
    rows,
  );
}
