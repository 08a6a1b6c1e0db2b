/// <reference lib="dom" />
/// <reference lib="dom.iterable" />

/** A new element with attributes and children; text goes in as text. */
export function make<Name extends keyof HTMLElementTagNameMap>(
  name: Name,
  attributes: Readonly<Record<string, string>> = {},
  ...children: readonly (Node | string)[]
): HTMLElementTagNameMap[Name] {
  const made = document.createElement(name);
  for (const [key, value] of Object.entries(attributes)) made.setAttribute(key, value);
  made.append(...children);
  return made;
}

export function button(text: string, act: () => void): HTMLButtonElement {
  const made = make('button', { type: 'button' }, text);
  made.addEventListener('click', act);
  return made;
}

const SVG = 'http://www.w3.org/2000/svg';

export function makeSvg(name: string, attributes: Readonly<Record<string, string>>): SVGElement {
  const made = document.createElementNS(SVG, name);
  for (const [key, value] of Object.entries(attributes)) made.setAttribute(key, value);
  return made;
}
