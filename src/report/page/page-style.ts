import { figureColours, figureShapes, marginRules } from '../figures/figure-style.ts';
import { DARK, LIGHT, type Theme } from '../figures/palette.ts';

/** The page's style sheet: light, dark on screens that ask for it, and black on white in print. */
export function pageStyle(): string {
  return [
    variables(LIGHT),
    figureColours(LIGHT),
    `@media screen and (prefers-color-scheme:dark){${variables(DARK)}${figureColours(DARK)}}`,
    figureShapes(),
    marginRules(),
    LAYOUT,
    NARROW,
    PRINT,
  ].join('\n');
}

function variables({ ground, panel, ink, faint, rule, accent, good, warning, bad }: Theme): string {
  return `:root{color-scheme:light dark;--ground:${ground};--panel:${panel};--ink:${ink};--faint:${faint};--rule:${rule};--accent:${accent};--good:${good};--warning:${warning};--bad:${bad}}`;
}

const LAYOUT = `
*{box-sizing:border-box}
html{background:var(--ground);color:var(--ink);font:16px/1.5 system-ui,-apple-system,"Segoe UI",Roboto,"Noto Sans","DejaVu Sans",sans-serif;-webkit-text-size-adjust:100%;scroll-padding-top:3.5rem}
body{margin:0 auto;max-width:68rem;padding:0 1.5rem 4rem}
header{padding:2.2rem 0 .6rem}
h1{font-size:1.75rem;line-height:1.2;margin:0 0 .3rem;letter-spacing:-.01em}
h2{font-size:1.3rem;line-height:1.25;margin:0}
h3{font-size:1rem;margin:0 0 .35rem}
p{margin:.4rem 0;max-width:46rem}
ul{padding-left:1.2rem;max-width:46rem}li{margin:.2rem 0}
a{color:var(--accent)}
:focus-visible{outline:2px solid var(--accent);outline-offset:2px}
nav{position:sticky;top:0;z-index:2;background:var(--ground);border-bottom:1px solid var(--rule);margin:0 -1.5rem;padding:.45rem 1.5rem;overflow-x:auto}
nav ul{display:flex;flex-wrap:wrap;gap:.1rem 1rem;list-style:none;margin:0;padding:0;max-width:none;white-space:nowrap;font-size:.85rem}
nav li{margin:0}nav a{text-decoration:none;display:block;padding:.15rem 0}nav a:hover{text-decoration:underline}
section{border-top:1px solid var(--rule);padding-top:1.6rem;margin-top:2.2rem}
section:first-of-type{border-top:0;margin-top:0}
.question{color:var(--faint);margin:.1rem 0 1rem}
.faint,.note,caption{color:var(--faint);font-size:.875rem}
.note{max-width:46rem;margin:.45rem 0 0}
.statements{list-style:none;padding:0;max-width:50rem;display:grid;gap:.45rem;margin:.6rem 0 1.4rem}
.statements li{margin:0;padding:.5rem .8rem;border-left:4px solid var(--rule);background:var(--panel)}
.statements .good{border-color:var(--good)}.statements .warning{border-color:var(--warning)}.statements .bad{border-color:var(--bad)}
.tone{margin-right:.25rem}.good .tone{color:var(--good)}.warning .tone{color:var(--warning)}.bad .tone{color:var(--bad)}
.wide{overflow-x:auto;margin:1rem 0;max-width:100%}
table{border-collapse:collapse;font-size:.9rem;font-variant-numeric:tabular-nums}
caption{text-align:left;padding-bottom:.4rem;max-width:46rem}
th,td{text-align:left;vertical-align:top;padding:.28rem .9rem .28rem 0;border-bottom:1px solid var(--rule)}
thead th{border-bottom-color:var(--faint);font-weight:600}tbody th{font-weight:600}
.number{text-align:right}
td.badcell{color:var(--bad);font-weight:600}
figure{margin:1.6rem 0 2rem;max-width:100%}
.frame>svg{display:block;overflow:visible}.end-labels{overflow:visible}.sketch{display:block;max-width:100%;height:auto;margin:0 auto}
.inner{overflow:hidden}
.panels{display:grid;grid-template-columns:repeat(auto-fill,minmax(min(100%,19rem),1fr));gap:.6rem 1rem}
.panel-title{font-weight:600;font-size:.9rem;margin:.4rem 0 0 56px}
.legend{list-style:none;display:flex;flex-wrap:wrap;gap:.15rem 1rem;padding:0;margin:.5rem 0 .2rem;max-width:none;font-size:.875rem}
.legend li{margin:0;display:flex;align-items:center;gap:.45rem;min-width:0}.legend .name{overflow-wrap:anywhere}
.sample{flex:none}
.legend button,.tools button,.series-tools button,.numbers button{font:inherit;color:inherit;background:none;border:1px solid transparent;border-radius:4px;padding:.1rem .35rem;cursor:pointer;display:flex;align-items:center;gap:.45rem;text-align:left}
.legend button:hover,.tools button,.series-tools button,.numbers button{border-color:var(--rule)}
.tools button:hover,.series-tools button:hover,.numbers button:hover{background:var(--panel)}
.legend button[aria-pressed=false]{opacity:.55;text-decoration:line-through}
.series-tools{display:flex;gap:.35rem;margin-top:.5rem;font-size:.875rem}
.tools{display:flex;flex-wrap:wrap;align-items:center;gap:.35rem .6rem;font-size:.875rem;margin:.2rem 0 .6rem}
.zoom{display:flex;align-items:center;gap:.35rem}
.zoom [hidden]{display:none}
.tools label{display:flex;align-items:center;gap:.5rem;color:var(--faint)}.tools input{accent-color:var(--accent);width:11rem;max-width:45vw}
.tools output{min-height:1.5em;font-variant-numeric:tabular-nums}
.value{font-variant-numeric:tabular-nums;color:var(--faint);white-space:nowrap}
.readout .legend{display:grid;grid-template-columns:repeat(auto-fill,minmax(min(100%,13.5rem),1fr))}
.hidden-series{display:none}.dim{opacity:.15}
.cursor{stroke:var(--accent);stroke-width:1;pointer-events:none}
.numbers{margin-top:.5rem;font-size:.875rem}summary{cursor:pointer;color:var(--accent);width:max-content;max-width:100%}
.numbers pre,.numbers .scroll{max-height:22rem;overflow:auto;border:1px solid var(--rule);padding:.6rem;margin:.4rem 0;font-size:.8rem}
.numbers .scroll{padding:0}.numbers th,.numbers td{padding:.15rem .7rem;white-space:nowrap}.numbers thead th{position:sticky;top:0;background:var(--panel)}
.numbers td{text-align:right}
dl{display:grid;grid-template-columns:max-content minmax(0,1fr);gap:.2rem 1.2rem;font-size:.9rem}dt{color:var(--faint)}dd{margin:0;overflow-wrap:anywhere}
code{font-size:.85em;overflow-wrap:anywhere}
.unseen{position:absolute;width:1px;height:1px;overflow:hidden;clip-path:inset(50%);white-space:nowrap}
.steps{padding-left:1.4rem;max-width:50rem}.steps li{margin:.55rem 0}.steps b{display:block}
.take{border-left:4px solid var(--bad);padding-left:1rem;margin:1.4rem 0}.take.tie{border-color:var(--warning)}
.take h3{font-size:1.05rem}
.cautions{margin-top:2.5rem;border-top:1px solid var(--rule);padding-top:1rem}`;

/** Labels of fine steps have no room in a narrow picture. */
const NARROW = `
.frame{container-type:inline-size}
@container (max-width:26rem){.x-axis .step{display:none}}
@media (max-width:40rem){body{padding:0 1rem 3rem}nav{margin:0 -1rem;padding:.45rem 1rem}nav ul{flex-wrap:nowrap}h1{font-size:1.45rem}dl{grid-template-columns:minmax(0,1fr);gap:0}dd{margin-bottom:.5rem}}`;

const PRINT = `
@page{size:A4;margin:16mm 15mm}
@media print{html{font-size:10pt}p,ul,.note,caption,.steps,.statements{max-width:none}.readout .legend{display:flex}body{max-width:none;padding:0}nav,.tools,.series-tools,.numbers{display:none!important}
section{break-inside:auto;margin-top:1.2rem;padding-top:1rem}h2,h3,.question,figcaption{break-after:avoid}figure,.take,.statements li,tr,.panel{break-inside:avoid}
header{padding-top:0}.statements li{background:none;border:1px solid var(--rule);border-left-width:4px}a{color:inherit;text-decoration:none}.wide{overflow:visible}
.dim{opacity:1}.cursor{display:none}figure{margin:1rem 0}.panels{grid-template-columns:repeat(2,1fr)}}`;
