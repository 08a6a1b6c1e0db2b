import { fileSvg } from '../figures/draw.ts';
import { type Figures, figuresOf, listOfFigures } from '../figures/figures.ts';
import type { OutputFile, Result } from '../result.ts';
import { reportPage } from './report-page.ts';

/** `report.html` and its pictures as files of their own, for eyes; made while they are written. */
export function pageFiles(result: Result, pageScript: string): OutputFile[] {
  let made: Figures | undefined;
  const figures = () => {
    made ??= figuresOf(result);
    return made;
  };
  return [
    { name: 'report.html', chunks: () => reportPage(result, figures(), pageScript) },
    ...listOfFigures(figures()).map((figure) => ({
      name: `figures/${figure.name}.svg`,
      chunks: () => [fileSvg(figure)],
    })),
  ];
}
