/** Text of SVG and HTML. Whatever the user wrote passes through `escaped`: nothing of it can become markup. */
import { visible } from '../text-layout.ts';

const ENTITIES: Readonly<Record<string, string>> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;',
};

/** Characters that XML forbids besides the control characters: lone halves of pairs, and the two at the end of the plane. */
const FORBIDDEN = /[\ud800-\udfff\ufffe\uffff]/gu;

const PLAIN = /^[\w .,:;+()%/#=*-]*$/;

/** Text for content or an attribute's value; control characters, which XML forbids, made visible. */
export function escaped(text: string): string {
  // Most texts are numbers and plain names.
  if (PLAIN.test(text)) return text;
  return visible(text)
    .replace(FORBIDDEN, '\ufffd')
    .replace(/[&<>"']/g, (character) => ENTITIES[character]!);
}

/** Attributes by name; those that are undefined are left out. */
export type Attributes = Readonly<Record<string, string | number | undefined>>;

/** An element with its attributes escaped. `content` is markup already. */
export function element(name: string, attributes: Attributes, content = ''): string {
  const texts = Object.entries(attributes).map(([key, value]) =>
    value === undefined ? '' : ` ${key}="${typeof value === 'number' ? short(value) : escaped(value)}"`,
  );
  return `<${name}${texts.join('')}>${content}</${name}>`;
}

/** A number in a drawing: two decimals are a fiftieth of a pixel. */
function short(value: number): string {
  return String(Number(value.toFixed(2)));
}
