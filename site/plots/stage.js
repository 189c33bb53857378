// The stage keeps each drawing alive: it remembers the last spec of an element and redraws
// on a change of width or theme, on zoom, and for paper (light on white while printing).

import { THEMES } from './palette.js';
import { chartSVG } from './chart.js';
import { sectionSVG } from './section.js';
import { sparkSVG } from './spark.js';
import { listen } from './interact.js';
import { readSection } from './read.js';

const PRINT_WIDTH = 680; // px, the text width of A4 and Letter with 15 mm margins
const acts = new Map(); // element → {kind, spec, view, width}
let printing = false;

const dark = typeof matchMedia === 'function' ? matchMedia('(prefers-color-scheme: dark)') : null;

export function themeName() {
  const set = document.documentElement.dataset.theme;
  return set === 'dark' || set === 'light' ? set : dark?.matches ? 'dark' : 'light';
}

const parse = (text) => new DOMParser().parseFromString(text, 'image/svg+xml').documentElement;

const KINDS = {
  chart: chartSVG,
  section: (spec, width, theme) => {
    const { svg, at, height } = sectionSVG(spec, width, theme);
    return { svg: parse(svg), frame: { ...at, height } };
  },
  spark: (spec, width, theme) => ({ svg: parse(sparkSVG(spec, width, theme).svg) }),
};

// render draws without touching the page: the SVG element and its geometry.
export const render = (kind, spec, width, theme, view) => KINDS[kind](spec, width, theme, view);

export const actOf = (el) => acts.get(el);

function show(el) {
  const act = acts.get(el), width = printing ? PRINT_WIDTH : Math.floor(el.clientWidth);
  if (!act || width < 40) return; // hidden: the observer calls again when it is shown
  act.width = width;
  const theme = THEMES[printing ? 'white' : themeName()];
  const { svg, frame } = render(act.kind, act.spec, width, theme, act.view);
  el.replaceChildren(svg);
  if (act.kind === 'section') readSection(svg, act.spec, frame, theme);
  if (act.kind !== 'chart') return;
  listen(svg, el, act.spec, frame, theme, (view) => zoom(el, view));
  if (act.view && !printing) el.append(wholeButton(el));
}

function zoom(el, view) {
  const act = acts.get(el);
  if (!act || act.view === view) return;
  act.view = view;
  show(el);
}

function wholeButton(el) {
  const b = document.createElement('button');
  b.type = 'button';
  b.className = 'plot-whole';
  b.textContent = 'whole range';
  b.addEventListener('click', () => zoom(el, null));
  return b;
}

// sameAxes says whether a zoomed range still means the same after a new spec.
function sameAxes(a, b) {
  const key = (s) => JSON.stringify([s?.title, ['x', 'y'].map((k) => [s?.[k]?.label, s?.[k]?.unit, s?.[k]?.scale])]);
  return key(a) === key(b);
}

const sizes = typeof ResizeObserver === 'function' ? new ResizeObserver((list) => {
  for (const { target } of list) {
    const act = acts.get(target);
    if (act && !printing && Math.floor(target.clientWidth) !== act.width) show(target);
  }
}) : null;

// draw puts a drawing into el, or replaces the one it holds. An element that leaves the page
// and comes back keeps its drawing; the page has a fixed number of them.
export function draw(el, kind, spec) {
  if (!Object.hasOwn(KINDS, kind)) throw new Error(`plots: unknown kind (${kind}), expected chart, section or spark`);
  const old = acts.get(el);
  const view = old && old.kind === kind && sameAxes(old.spec, spec) ? old.view : null;
  acts.set(el, { kind, spec, view, width: 0 });
  el.classList.add('plot', `plot-${kind}`);
  sizes?.observe(el);
  show(el);
}

const all = () => { for (const el of acts.keys()) if (el.isConnected) show(el); };

// start attaches the page-wide listeners, once.
export function start() {
  new MutationObserver(all).observe(document.documentElement, { attributes: true, attributeFilter: ['data-theme'] });
  dark?.addEventListener('change', all);
  const end = () => { if (printing) { printing = false; all(); } };
  addEventListener('beforeprint', () => {
    printing = true;
    all();
    setTimeout(end, 3000); // some browsers do not say when printing is over; the dialogue holds the clock
  });
  addEventListener('afterprint', end);
  addEventListener('keydown', (e) => {
    if (e.key !== 'Escape') return;
    for (const [el, act] of acts) if (act.view && el.matches(':hover, :focus-within')) zoom(el, null);
  });
}
