// The frame of a chart: domains, ticks, margins and pixel positions, from the data alone.
// Pure: no document needed.

import { SANS, SERIF } from './palette.js';
import { celsius, decades, linear, minor, plain, power } from './ticks.js';
import { width as textWidth } from './text.js';

const TICK = `13px ${SANS}`;
export const TITLE = `600 16px ${SERIF}`;
export const LABEL = `14px ${SANS}`;

// finite values of an axis over all series, bands and error bars included.
function values(spec, axis) {
  const out = [];
  const put = (list) => { for (const v of list ?? []) if (typeof v === 'number' && Number.isFinite(v)) out.push(v); };
  for (const s of spec.series ?? []) {
    put(s[axis]);
    if (axis === (s.mark === 'spans' ? 'x' : 'y')) { put(s.low); put(s.high); }
  }
  return out;
}

// domainOf is the data's range with a little air, or the one asked for.
export function domainOf(spec, axis) {
  const given = spec[axis]?.domain, log = spec[axis]?.scale === 'log';
  let all = values(spec, axis);
  if (log) all = all.filter((v) => v > 0);
  let lo = all.reduce((a, b) => Math.min(a, b), Infinity), hi = all.reduce((a, b) => Math.max(a, b), -Infinity);
  if (!(hi >= lo)) [lo, hi] = log ? [1, 10] : [0, 1];
  if (spec.zero && !log) { lo = Math.min(lo, 0); hi = Math.max(hi, 0); }
  if (log) {
    const air = Math.max(0.04 * Math.log10(hi / lo), hi === lo ? 0.5 : 0);
    lo /= 10 ** air; hi *= 10 ** air;
  } else {
    const air = hi === lo ? Math.abs(hi) * 0.1 || 1 : 0.06 * (hi - lo);
    if (!(spec.zero && lo === 0)) lo -= air;
    if (!(spec.zero && hi === 0)) hi += air;
  }
  const labelled = axis === 'y' && !log && (spec.series ?? []).some((s) => Number.isInteger(s.label?.at) && !s.label.below);
  if (labelled) hi += 0.12 * (hi - lo); // room for a label above the highest curve
  const ok = (v) => typeof v === 'number' && Number.isFinite(v) && (!log || v > 0);
  return [ok(given?.[0]) ? given[0] : lo, ok(given?.[1]) ? given[1] : hi];
}

function axisOf(spec, name, domain, count) {
  const own = spec[name] ?? {}, log = own.scale === 'log';
  let ticks = own.ticks && own.ticks !== 'decades' ? own.ticks : log ? decades(...domain, count) : linear(...domain, count);
  for (let more = count + 1; ticks.length < 2 && !Array.isArray(own.ticks) && more < count + 6; more++) ticks = log ? decades(...domain, more) : linear(...domain, more);
  const s = ticks.length > 1 ? Math.abs(ticks[1] - ticks[0]) : 0;
  const title = [own.label, own.unit].filter(Boolean).join(' / ');
  return { log, domain, ticks, texts: ticks.map((t) => (log ? power(t) : plain(t, s))), minor: log ? minor(...domain) : [], title };
}

// equalise widens one domain so that a unit is as long on both axes.
export function equalise(x, y, w, h) {
  const perX = (x[1] - x[0]) / w, perY = (y[1] - y[0]) / h;
  if (perX > perY) return [x, [y[0], y[0] + perX * h]];
  return [[x[0], x[0] + perY * w], y];
}

// ends lists series whose label stands at the end of the curve.
export const endLabelled = (spec) => (spec.series ?? []).filter((s) => s.label && !Number.isInteger(s.label.at));
const labelText = (s) => (typeof s.label === 'string' ? s.label : s.label.text);

// legend lists series that are named but carry no label at the curve.
function legendOf(spec, inFrame) {
  const seen = new Set(), out = [];
  for (const s of spec.series ?? []) {
    const atEnd = s.label && !Number.isInteger(s.label.at);
    if (!s.name || s.legend === false || seen.has(s.name) || (s.label && !(atEnd && inFrame))) continue;
    seen.add(s.name);
    out.push(s);
  }
  return out.length > 1 || (spec.series ?? []).length > 1 ? out : [];
}

function flow(items, w, widthOf) {
  const rows = [[]];
  let x = 0;
  for (const s of items) {
    const need = widthOf(s);
    if (x > 0 && x + need > w) { rows.push([]); x = 0; }
    rows.at(-1).push({ s, x });
    x += need;
  }
  return items.length ? rows : [];
}

// frameOf settles the whole geometry of a chart w pixels wide.
export function frameOf(spec, w, view) {
  const narrow = w < 440;
  const ends = endLabelled(spec);
  const endWidth = Math.max(0, ...ends.map((s) => textWidth(labelText(s), LABEL))) + 10;
  const outside = ends.length > 0 && endWidth < 0.3 * w; // labels stand right of the frame
  const legend = flow(legendOf(spec, ends.length > 0 && !outside), w - 8, (s) => 32 + textWidth(s.name, TICK) + 16);
  const wordy = [spec.y?.label, spec.y?.unit].filter(Boolean).length > 0;
  const titleWidth = spec.title ? textWidth(spec.title, TITLE) + 12 : 0;
  const subBelow = Boolean(spec.sub) && titleWidth + textWidth(spec.sub, TICK) > w - 4;
  const subRow = subBelow && spec.title ? 18 : 0;
  const headings = (spec.title || spec.sub ? 22 : 0) + subRow;
  const top = headings + legend.length * 20 + (wordy ? 20 : 6) + (spec.x?.top ? 20 : 0) + 4;

  let xd = view?.x ?? domainOf(spec, 'x'), yd = view?.y ?? domainOf(spec, 'y');
  let height = spec.height ?? Math.round(Math.min(320, Math.max(200, w * 0.56)));
  const foot = 44, rightMargin = outside ? Math.ceil(endWidth) : 14;
  let left = 48;
  if (spec.equal && !spec.height) { // as high as the data need
    const want = ((yd[1] - yd[0]) / (xd[1] - xd[0])) * (w - left - rightMargin);
    height = Math.round(top + foot + Math.min(narrow ? 300 : 380, Math.max(120, want)));
  }
  height = Math.max(height, top + foot + 40);
  const inner = height - top - foot;
  if (spec.equal) [xd, yd] = equalise(xd, yd, w - left - rightMargin, inner);
  const y = axisOf(spec, 'y', yd, Math.max(2, Math.floor(inner / 30)));
  left = Math.max(30, Math.ceil(Math.max(...y.texts.map((t) => textWidth(t, TICK)), 8)) + 14);
  if (spec.equal) [xd, y.domain] = equalise(xd, view?.y ?? domainOf(spec, 'y'), w - left - rightMargin, inner);
  const x = axisOf(spec, 'x', xd, Math.max(2, Math.floor((w - left - rightMargin) / (narrow ? 58 : 76))));
  if (spec.equal) Object.assign(y, axisOf(spec, 'y', y.domain, Math.max(2, Math.floor(inner / 30))));
  if (spec.x?.reverse) x.domain = [x.domain[1], x.domain[0]];
  if (spec.y?.reverse) y.domain = [y.domain[1], y.domain[0]];
  const frame = { w, height, left, right: w - rightMargin, top, bottom: height - foot, x, y, narrow, headings, subBelow, titleWidth, legend, outside,
    clipped: Boolean(view || spec.x?.domain || spec.y?.domain) }; // without a chosen range nothing lies outside
  frame.px = projector(x, frame.left, frame.right);
  frame.py = projector(y, frame.bottom, frame.top);
  if (spec.x?.top?.fn === 'celsius') frame.celsius = celsius(...x.domain, frame.px, 44);
  return frame;
}

// projector maps a value to pixels and, by .back, pixels to a value.
export function projector({ log, domain: [a, b] }, p, q) {
  const f = log ? Math.log10 : (v) => v, g = log ? (v) => 10 ** v : (v) => v;
  const u = f(a), k = (q - p) / (f(b) - u || 1);
  const to = (v) => p + (f(v) - u) * k;
  to.back = (px) => g(u + (px - p) / k);
  return to;
}
