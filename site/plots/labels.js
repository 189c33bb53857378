// What is written in and around the frame of a chart: title, axis titles, legend, labels at
// the curves, decade labels and notes.

import { look, SERIF } from './palette.js';
import { pieces, width as textWidth } from './text.js';
import { LABEL } from './frame.js';

const NS = 'http://www.w3.org/2000/svg';

export function element(name, attributes, text) {
  const el = document.createElementNS(NS, name);
  for (const k in attributes) el.setAttribute(k, attributes[k]);
  if (text !== undefined) fillText(el, String(text));
  return el;
}

// fillText writes a text with its sub- and superscripts as tspans.
function fillText(el, text) {
  const list = pieces(text);
  if (list.length === 1 && !list[0].rise) { el.textContent = text; return; }
  let level = 0;
  for (const p of list) {
    const drop = [4, 0, -5][p.rise + 1], span = document.createElementNS(NS, 'tspan');
    if (drop !== level) span.setAttribute('dy', drop - level);
    if (p.rise) span.setAttribute('font-size', 13);
    span.textContent = p.text;
    el.append(span);
    level = drop;
  }
}

const halo = (theme) => ({ 'paint-order': 'stroke', stroke: theme.paper, 'stroke-width': 4, 'stroke-linejoin': 'round' });

function titles(put, spec, f, theme) {
  if (spec.title) put('text', { x: 0, y: 15, 'font-family': SERIF, 'font-size': 16, 'font-weight': 600, fill: theme.ink }, spec.title);
  if (spec.sub) put('text', { x: f.subBelow ? 0 : f.titleWidth, y: f.subBelow && spec.title ? 33 : 15, 'font-size': 13, fill: theme.dim }, spec.sub);
  const dim = { 'font-size': 13, fill: theme.dim };
  put('text', { ...dim, x: f.right, y: f.bottom + 38, 'text-anchor': 'end' }, f.x.title);
  put('text', { ...dim, x: Math.max(0, f.left - 30), y: f.top - (f.celsius ? 30 : 10) }, f.y.title);
  if (f.celsius) put('text', { ...dim, x: f.right, y: f.top - 30, 'text-anchor': 'end' }, 'T / °C');
}

function swatch(put, s, x, y, theme) {
  const { colour, dash } = look(s.role, theme);
  const points = s.mark === 'points' || s.mark === 'errorbars' || s.mark === 'dots+line';
  if (s.mark === 'band') put('rect', { x, y: y - 10, width: 24, height: 10, fill: colour, 'fill-opacity': 0.25 });
  else if (s.mark !== 'points' && s.mark !== 'errorbars') {
    const d = s.dash ? dash ?? '6 4' : s.dash === false ? null : dash;
    put('path', { d: `M${x} ${y - 4}h24`, stroke: colour, 'stroke-width': s.faint ? 1.2 : 2, ...(d ? { 'stroke-dasharray': d } : {}) });
  }
  if (points) put('path', { d: shape(look(s.role, theme).symbol, x + 12, y - 4), stroke: colour, 'stroke-width': 1.5, fill: s.hollow || s.role === 'measured' ? theme.paper : colour });
}

// shape is a legend-sized symbol.
function shape(symbol, x, y) {
  switch (symbol) {
    case 'square': return `M${x - 3.2} ${y - 3.2}h6.4v6.4h-6.4z`;
    case 'triangle': return `M${x} ${y - 4}l4 7h-8z`;
    case 'diamond2': return `M${x} ${y - 4.4}l4.4 4.4l-4.4 4.4l-4.4 -4.4z`;
    case 'times': case 'star': return `M${x - 3} ${y - 3}l6 6m0 -6l-6 6`;
    default: return `M${x - 3.6} ${y}a3.6 3.6 0 1 0 7.2 0a3.6 3.6 0 1 0 -7.2 0`;
  }
}

function legend(put, f, theme) {
  f.legend.forEach((row, r) => {
    const y = f.headings + 15 + r * 20;
    for (const { s, x } of row) {
      swatch(put, s, x + 2, y, theme);
      put('text', { x: x + 32, y, 'font-size': 13, fill: theme.dim }, s.name);
    }
  });
}

// spread keeps labels at least gap apart by pushing later ones down, then all back into range.
export function spread(items, gap, lo, hi) {
  items.sort((a, b) => a.y - b.y);
  for (let i = 0; i < items.length; i++) items[i].y = Math.max(items[i].y, i ? items[i - 1].y + gap : lo);
  for (let i = items.length - 1; i >= 0; i--) items[i].y = Math.min(items[i].y, i < items.length - 1 ? items[i + 1].y - gap : hi);
  return items;
}

function lastDrawn(s, f) {
  for (let i = Math.min(s.x.length, s.y.length) - 1; i >= 0; i--) {
    const px = f.px(s.x[i]), py = f.py(s.y[i]);
    if (Number.isFinite(px) && Number.isFinite(py) && px <= f.right + 1 && px >= f.left) return { px, py };
  }
  return null;
}

// atCurve writes a label beside point at; on a slope it moves to the side that is free.
function atCurve(put, s, text, fill, f, theme, taken) {
  const i = s.label.at, px = f.px(s.x[i]), py = f.py(s.y[i]), below = Boolean(s.label.below);
  if (!Number.isFinite(px) || !Number.isFinite(py) || py < f.top - 2 || py > f.bottom + 2) return;
  const a = Math.max(0, i - 1), b = Math.min(s.x.length - 1, i + 1);
  const slope = (f.py(s.y[b]) - f.py(s.y[a])) / (f.px(s.x[b]) - f.px(s.x[a]) || 1);
  const side = Math.abs(slope) < 0.2 ? 0 : slope > 0 !== below ? 1 : -1; // +1 right of the point
  const w = textWidth(text, LABEL);
  const x = Math.min(Math.max(px + side * 6 - (side > 0 ? 0 : side < 0 ? w : w / 2), f.left + 4), f.right - w - 4);
  const y = Math.max(f.top + 14, py + (below ? 20 : side ? -6 : -11));
  taken.push({ x, y, w });
  put('text', { x, y, 'font-size': 14, fill, ...halo(theme) }, text);
}

const clash = (taken, x, y, w) => taken.some((o) => x < o.x + o.w + 4 && x + w + 4 > o.x && Math.abs(o.y - y) < 15);

function curveLabels(put, spec, f, theme, taken) {
  const atEnd = [];
  for (const s of spec.series ?? []) {
    if (!s.label) continue;
    const text = typeof s.label === 'string' ? s.label : s.label.text, fill = look(s.role, theme).colour;
    if (Number.isInteger(s.label.at)) atCurve(put, s, text, fill, f, theme, taken);
    else if (f.outside) {
      const at = lastDrawn(s, f);
      if (at) atEnd.push({ y: at.py + 5, text, fill });
    }
  }
  for (const l of spread(atEnd, 20, f.top + 8, f.bottom + 4)) put('text', { x: f.right + 7, y: l.y, 'font-size': 14, fill: l.fill }, l.text);
}

function inside(f, px, py) {
  return px >= f.left - 1 && px <= f.right + 1 && py >= f.top - 1 && py <= f.bottom + 1;
}

// decadeLabels writes beside the marked points, away from the middle of the data.
function decadeLabels(put, spec, f, theme, taken) {
  for (const s of spec.series ?? []) {
    for (const d of s.decades ?? []) {
      const px = f.px(s.x[d.at]), py = f.py(s.y[d.at]);
      if (!d.text || !inside(f, px, py)) continue;
      const w = textWidth(d.text, LABEL), prev = s.y[d.at - 1], next = s.y[d.at + 1];
      const rising = (next ?? s.y[d.at]) > (prev ?? s.y[d.at]) === s.x[d.at + 1] > s.x[d.at - 1];
      // outside of an arc is up-left while it rises with Z′, up-right while it falls
      const x = Math.min(Math.max(px + (rising ? -8 - w : 8), f.left + 2), f.right - w - 2), y = Math.max(f.top + 13, py - 6);
      const onPoint = s.x.some((v, i) => { const u = f.px(v), t = f.py(s.y[i]); return i !== d.at && u > x - 3 && u < x + w + 3 && t > y - 13 && t < y + 3; });
      if (onPoint || clash(taken, x, y, w)) continue; // rather none than a heap
      taken.push({ x, y, w });
      put('text', { x, y, 'font-size': 13, fill: theme.ink, ...halo(theme) }, d.text);
    }
  }
}

// write adds every text to a drawn chart.
export function write(svg, spec, f, theme) {
  const group = svg.appendChild(element('g', { class: 'plot-text', stroke: 'none', 'text-anchor': 'start' }));
  const put = (name, attributes, text) => group.appendChild(element(name, attributes, text));
  titles(put, spec, f, theme);
  legend(put, f, theme);
  const taken = []; // boxes of labels already written
  curveLabels(put, spec, f, theme, taken);
  decadeLabels(put, spec, f, theme, taken);
  for (const n of spec.notes ?? []) {
    const px = f.px(n.x), py = f.py(n.y);
    if (inside(f, px, py)) put('text', { x: px, y: py, 'text-anchor': n.anchor ?? 'start', 'font-size': 14, fill: theme.ink, ...halo(theme) }, n.text);
  }
  const label = [spec.title, spec.sub, `${f.y.title} against ${f.x.title}`].filter(Boolean).join('; ');
  svg.setAttribute('role', 'img');
  svg.setAttribute('aria-label', label);
  svg.prepend(element('title', {}, label));
}
