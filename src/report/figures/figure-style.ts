import { LEFT_MARGINS, RIGHT_MARGINS } from './figure.ts';
import { DASHES, type Theme } from './palette.ts';

/** Rules of pictures that do not depend on colour. */
export function figureShapes(): string {
  const dashes = DASHES.map((dash, d) => (dash === '' ? '' : `.d${d}{stroke-dasharray:${dash}}`));
  return [
    'svg text{font:12px system-ui,-apple-system,"Segoe UI",Roboto,"Noto Sans","DejaVu Sans",sans-serif}',
    '.tick{font-variant-numeric:tabular-nums}.middle{text-anchor:middle}.end{text-anchor:end}',
    '.axis-title{font-weight:600}',
    '.small{font-size:11px}',
    '.curve{fill:none;stroke-width:1.6;stroke-linejoin:round;stroke-linecap:butt}',
    '.curve,.edge,.dots,.mark{vector-effect:non-scaling-stroke}',
    '.ribbon{stroke:none;fill-opacity:.16}',
    '.dots{fill:none;stroke-linecap:round;stroke-width:3.5}',
    '.bold{font-weight:600}.thick{stroke-width:2.4}.use{fill-opacity:.2}',
    '.edge{fill:none;stroke-width:1.2}',
    ...dashes,
    '.cells{fill:none}.below.cells{stroke-dasharray:5 2.5}',
  ].join('\n');
}

/** Rules of colour. */
export function figureColours(theme: Theme): string {
  const series = theme.series.flatMap((colour, c) => [
    `.c${c}.curve,.c${c}.dots,.c${c}.mark{stroke:${colour}}`,
    `.c${c}.ribbon,text.c${c}{fill:${colour}}`,
  ]);
  const cells = [...theme.above.entries(), ...theme.below.entries()].map(([step, colour], k) => {
    const side = k < theme.above.length ? 'above' : 'below';
    return `.${side}.s${step}{stroke:${colour}}rect.${side}.s${step}{fill:${colour};stroke:none}`;
  });
  return [
    `svg text{fill:${theme.ink}}svg .tick{fill:${theme.faint}}svg .faint{fill:${theme.faint}}`,
    `.grid{stroke:${theme.grid};stroke-width:1}.zero{stroke:${theme.faint}}`,
    `.frame-line{fill:none;stroke:${theme.rule}}`,
    `.leader{fill:none;stroke:${theme.faint};stroke-width:.8}`,
    `.node{fill:${theme.ground};stroke:${theme.ink};stroke-width:1.5}.node.open{stroke:${theme.bad};stroke-dasharray:4 3}`,
    `.edge{stroke:${theme.faint}}.edge.missing{stroke:${theme.rule};stroke-dasharray:1 4}`,
    `.edge.flagged{stroke:${theme.bad};stroke-width:2;stroke-dasharray:6 4}text.flagged{fill:${theme.bad}}`,
    `.chip{fill:${theme.ground}}.halo{paint-order:stroke;stroke:${theme.ground};stroke-width:3px}`,
    `.cell-line{fill:none;stroke:${theme.rule};vector-effect:non-scaling-stroke}`,
    `.holds{fill:${theme.sound}}.strained{fill:${theme.above[1]}}.broken{fill:${theme.bad}}.untestable{fill:none}`,
    `text.on-bad{fill:${theme.ground}}text.on-strain{fill:${theme.ink}}`,
    `.hatch{stroke:${theme.bad};stroke-width:1.4}`,
    `.limit{fill:none;stroke:${theme.ink};stroke-dasharray:5 4;vector-effect:non-scaling-stroke}`,
    `.limit-ground{fill:${theme.panel}}`,
    `.beyond{stroke:${theme.bad}}.within{stroke:${theme.accent};stroke-opacity:.55}`,
    `.use-0{fill:${theme.series[0]}}.use-1{fill:${theme.series[1]}}.use-2{fill:${theme.series[3]}}`,
    ...theme.parts.map((colour, p) => `.part-${p}{fill:${colour}}`),
    `.part{stroke:${theme.ground};stroke-width:1;vector-effect:non-scaling-stroke}`,
    ...series,
    ...cells,
  ].join('\n');
}

/** Room beside a plot in the page. */
export function marginRules(): string {
  const left = LEFT_MARGINS.map((margin) => `.l${margin}{margin-left:${margin}px}`);
  const right = RIGHT_MARGINS.map((margin) => `.r${margin}{margin-right:${margin}px}`);
  return [...left, ...right].join('');
}
