import { benchCounts } from '../bench-counts.ts';
import type { Figures } from '../figures/figures.ts';
import type { Result } from '../result.ts';
import { readSentence } from '../wording.ts';
import type { Pieces } from './blocks.ts';
import { pageShell } from './page-shell.ts';
import { sections } from './sections.ts';

/**
 * `report.html`: one file that opens from disk and fetches nothing; a content security policy holds it to that.
 * @param script text of the page's program; without it (empty) the pictures stand still and everything else is the same.
 */
export function reportPage(result: Result, figures: Figures, script: string): Pieces {
  return pageShell({
    version: result.version,
    title: titleOf(result),
    about: readSentence(result.input, benchCounts(result.set, result.model)),
    sections: sections(result, figures),
    script,
  });
}

function titleOf({ input }: Result): string {
  const names = input.files.map(({ name }) => name.split(/[\\/]/).at(-1)!);
  return `Responses from ${names.length > 2 ? `${names[0]} and ${names.length - 1} more files` : names.join(' and ')}`;
}
