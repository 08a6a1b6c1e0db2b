import type { Drawing, Figure, Plot } from './figure.ts';
import { figureColours, figureShapes } from './figure-style.ts';
import { element, escaped } from './markup.ts';
import { LIGHT } from './palette.ts';

/** Width of a plot's file in pixels: the text width of a page at about 130 pixels an inch. */
const FILE_WIDTH = 900;

/** A picture within the page, named and described by elements with the ids `NAME-title` and `NAME-text`. */
export function pageSvg({ name, drawing }: Figure): string {
  // A picture with links in it is no single image: the links have to be reached.
  const inside = drawing.kind === 'panels' ? '' : drawing.kind === 'plot' ? drawing.over : drawing.content;
  const role = inside.includes('<a ') ? 'group' : 'img';
  const common = { role, 'aria-labelledby': `${name}-title`, 'aria-describedby': `${name}-text` };
  switch (drawing.kind) {
    case 'sketch': {
      const { width, height, content } = drawing;
      return element('svg', { ...common, class: 'sketch', viewBox: `0 0 ${width} ${height}`, width, height }, content);
    }
    case 'plot':
      return framed(drawing, common);
    case 'panels': {
      const panels = drawing.panels.map(({ title, plot }) => {
        const heading = element('p', { class: 'panel-title' }, escaped(title));
        return element('div', { class: 'panel' }, heading + framed(plot, { role: 'img', 'aria-label': title }));
      });
      return element('div', { class: 'panels' }, panels.join(''));
    }
  }
}

function framed(plot: Plot, attributes: Readonly<Record<string, string>>): string {
  const { left, right, range } = plot;
  const size = { class: 'plot', width: '100%', height: heightOf(plot), 'data-range': range.join(' ') };
  const svg = element('svg', { ...attributes, ...size }, plotBody(plot));
  return element('div', { class: `frame l${left} r${right}` }, svg);
}

/** A picture as a file of its own, on a white ground, with a style sheet of its own. */
export function fileSvg({ title, description, drawing }: Figure): string {
  const { width, height, body } = fileBody(drawing);
  const head =
    `<title>${escaped(title)}</title><desc>${escaped(description)}</desc>` +
    `<style>${figureShapes()}\n${figureColours(LIGHT)}</style>` +
    element('rect', { width: '100%', height: '100%', fill: LIGHT.ground });
  const root = { xmlns: 'http://www.w3.org/2000/svg', width, height, viewBox: `0 0 ${width} ${height}` };
  return `${element('svg', root, head + body)}\n`;
}

function fileBody(drawing: Drawing): { readonly width: number; readonly height: number; readonly body: string } {
  switch (drawing.kind) {
    case 'sketch':
      return { width: drawing.width, height: drawing.height, body: drawing.content };
    case 'plot':
      return {
        width: FILE_WIDTH,
        height: heightOf(drawing),
        body: placed(drawing, { x: 0, y: 0, width: FILE_WIDTH }),
      };
    case 'panels': {
      const width = FILE_WIDTH / 2;
      const rowHeight = TITLE + Math.max(...drawing.panels.map(({ plot }) => heightOf(plot)));
      const panels = drawing.panels.map(({ title, plot }, k) => {
        const [x, y] = [(k % 2) * width, Math.floor(k / 2) * rowHeight];
        const heading = element('text', { x: x + plot.left, y: y + TITLE - 2, class: 'bold' }, escaped(title));
        return heading + placed(plot, { x, y: y + TITLE, width });
      });
      const rows = Math.ceil(panels.length / 2);
      return { width: FILE_WIDTH, height: rows * rowHeight, body: panels.join('') };
    }
  }
}

/** Pixels above a panel for its title. */
const TITLE = 18;

function placed(
  plot: Plot,
  { x, y, width }: { readonly x: number; readonly y: number; readonly width: number },
): string {
  const place = { x: x + plot.left, y, width: width - plot.left - plot.right, height: heightOf(plot) };
  return element('svg', { ...place, overflow: 'visible' }, plotBody(plot));
}

function heightOf({ top, height, bottom }: Plot): number {
  return top + height + bottom;
}

function plotBody({ top, height, inner, behind, content, over, axis }: Plot): string {
  const plot = element(
    'svg',
    { class: 'inner', width: '100%', height, viewBox: `0 0 ${inner.join(' ')}`, preserveAspectRatio: 'none' },
    content,
  );
  const frame = element('rect', { width: '100%', height, class: 'frame-line' });
  const axisGroup = element('g', { class: 'x-axis' }, axis);
  return element('g', { transform: `translate(0 ${top})` }, behind + axisGroup + plot + frame + over);
}
