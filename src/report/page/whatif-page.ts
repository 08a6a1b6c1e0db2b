import type { OutputFile } from '../result.ts';
import type { WhatifResult } from '../whatif-result.ts';
import { designSentence } from '../whatif-wording.ts';
import { counted } from '../wording.ts';
import { pageShell } from './page-shell.ts';
import { whatifSections } from './whatif-sections.ts';

/** The page of `whatif --out`: what a design will deliver, for eyes. It needs no program and fetches nothing. */
export function whatifPage(result: WhatifResult): OutputFile {
  const { version, predictions } = result;
  const main = predictions.at(-1)!;
  const count = predictions.length;
  return {
    name: 'report.html',
    chunks: () =>
      pageShell({
        version,
        title: `Prediction for ${main.bench.design.name}`,
        about: count > 1 ? `${counted(count, 'design')} compared; the last one in detail.` : designSentence(main),
        sections: whatifSections(result),
        script: '',
      }),
  };
}
