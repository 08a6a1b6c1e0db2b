/// <reference lib="dom" />
/// <reference lib="dom.iterable" />
/** The page's program: zoom, cursor, show and hide, tables. Everything it adds is an addition: the page stands without it. */
import { addCursor } from './cursor.ts';
import { addLegend } from './legend.ts';
import { addMapCursor } from './map-cursor.ts';
import { addNumbersTable } from './numbers-table.ts';
import { addZoom } from './zoom.ts';

for (const figure of document.querySelectorAll('figure')) {
  addNumbersTable(figure);
  const legend = figure.querySelector('.legend');
  if (legend !== null) addLegend(figure, legend);
}
const zoomed = addZoom([...document.querySelectorAll<SVGSVGElement>('svg.plot')]);
for (const figure of document.querySelectorAll<HTMLElement>('figure[data-kind=plot]')) {
  const data = figure.querySelector('.cells-data');
  if (data !== null) addMapCursor(figure, JSON.parse(data.textContent ?? '{}'), zoomed);
  else if (figure.querySelector('[data-value]') !== null) addCursor(figure, zoomed);
}
