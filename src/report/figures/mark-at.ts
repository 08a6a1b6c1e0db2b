import { type Attributes, element } from './markup.ts';

/** Text over a plot at a part of its width (0 to 1), which the page moves along when it zooms. */
export function markAt(part: number, attributes: Attributes, content: string): string {
  const at = Number(part.toFixed(5));
  return element('text', { x: `${Number((100 * at).toFixed(3))}%`, 'data-at': at, ...attributes }, content);
}
