// Series → marks of Observable Plot. Data are points, models are lines, intervals are bands;
// a gap in the data (null, NaN, a non-positive value on a log axis) stays a gap.

import * as Plot from '@observablehq/plot';
import { look } from './palette.js';

export function axisMarks(frame, theme) {
  const { x, y } = frame, grid = { stroke: theme.line, strokeOpacity: 1 };
  const tick = { stroke: theme.dim, strokeWidth: 1, tickSize: 5, tickPadding: 4, label: null, fill: theme.dim, fontSize: 13 };
  const text = (axis) => (v) => axis.texts[axis.ticks.indexOf(v)] ?? '';
  return [
    Plot.gridX(x.ticks, grid), Plot.gridY(y.ticks, grid),
    Plot.tickX(x.minor, { x: (d) => d, stroke: theme.dim, strokeOpacity: 0.6, insetTop: frame.bottom - frame.top - 3 }),
    Plot.tickY(y.minor, { y: (d) => d, stroke: theme.dim, strokeOpacity: 0.6, insetRight: frame.right - frame.left - 3 }),
    Plot.axisX(x.ticks, { ...tick, tickFormat: text(x) }), Plot.axisY(y.ticks, { ...tick, tickFormat: text(y) }),
    ...(frame.celsius ? [Plot.axisX(frame.celsius.map((c) => c.at), { ...tick, anchor: 'top', tickFormat: (v) => frame.celsius.find((c) => c.at === v)?.text ?? '' })] : []),
    Plot.frame({ stroke: theme.edge, strokeWidth: 1 }),
  ];
}

// column replaces what cannot be drawn by NaN.
const column = (list, log) => Array.from(list ?? [], (v) => (typeof v === 'number' && Number.isFinite(v) && (!log || v > 0) ? v : NaN));

// parts splits point indices into kept, left out, and decade points.
function parts(s, n) {
  const muted = new Set(s.muted ?? []), marked = new Set((s.decades ?? []).map((d) => d.at));
  const all = Array.from({ length: n }, (_, i) => i);
  return { kept: all.filter((i) => !muted.has(i) && !marked.has(i)), muted: all.filter((i) => muted.has(i)), marked: all.filter((i) => marked.has(i) && !muted.has(i)) };
}

function points(s, x, y, frame, theme, form) {
  const pick = (list) => ({ x: list.map((i) => x[i]), y: list.map((i) => y[i]) });
  const { kept, muted, marked } = parts(s, Math.min(x.length, y.length));
  const base = { stroke: form.colour, symbol: form.symbol, r: s.r ?? 3.4, strokeWidth: 1.5, clip: frame.clipped };
  const stroked = form.symbol === 'times';
  const fill = s.hollow || s.role === 'measured' ? theme.paper : form.colour;
  const out = [Plot.dot(kept, { ...base, ...pick(kept), ...(stroked ? {} : { fill }) })];
  if (marked.length) out.push(Plot.dot(marked, { ...base, ...pick(marked), r: 4.2, ...(stroked ? {} : { fill: form.colour }) }));
  if (muted.length) out.push(Plot.dot(muted, { ...base, ...pick(muted), symbol: 'times', stroke: theme.dim, r: 3.6 }));
  return out;
}

function one(s, frame, theme) {
  const form = look(s.role, theme), x = column(s.x, frame.x.log), y = column(s.y, frame.y.log);
  const dash = s.dash ? form.dash ?? '6 4' : s.dash === false ? null : form.dash;
  const line = { stroke: form.colour, strokeWidth: s.faint ? 1.2 : 2, strokeOpacity: s.faint ? 0.6 : 1, clip: frame.clipped, ...(dash ? { strokeDasharray: dash } : {}) };
  const low = column(s.low, frame.y.log), high = column(s.high, frame.y.log);
  switch (s.mark) {
    case 'points': return points(s, x, y, frame, theme, form);
    case 'dots+line': return [Plot.line(x, { ...line, x, y }), ...points(s, x, y, frame, theme, form)];
    case 'band': return [Plot.areaY(low, { x, y1: low, y2: high, fill: form.colour, fillOpacity: 0.18, clip: frame.clipped })];
    case 'errorbars': return [...bars(x, low, high, frame, form.colour), ...points(s, x, y, frame, theme, form)];
    case 'spans': return spans(s, x, y, frame, theme, form);
    case 'rule': return [
      ...(s.y?.length ? [Plot.ruleY(y, { ...line, y })] : []),
      ...(s.x?.length ? [Plot.ruleX(x, { ...line, x })] : []),
    ];
    default: return [Plot.line(x, { ...line, x, y })];
  }
}

// spans are horizontal intervals, one a row; low and high are values of x.
function spans(s, x, y, frame, theme, form) {
  const low = column(s.low, frame.x.log), high = column(s.high, frame.x.log);
  const ok = x.map((_, i) => i).filter((i) => Number.isFinite(low[i]) && Number.isFinite(high[i]));
  const rule = { y: ok.map((i) => y[i]), x1: ok.map((i) => low[i]), x2: ok.map((i) => high[i]), stroke: form.colour, clip: frame.clipped };
  return [Plot.ruleY(ok, { ...rule, strokeWidth: 5, strokeOpacity: 0.35 }), ...points(s, x, y, frame, theme, form)];
}

// bars are error bars with caps; a bar without a finite end is left out.
function bars(x, low, high, frame, colour) {
  const ok = x.map((_, i) => i).filter((i) => Number.isFinite(low[i]) && Number.isFinite(high[i]));
  const mark = { stroke: colour, strokeWidth: 1.4, clip: frame.clipped };
  const cap = (end) => Plot.link(ok, {
    ...mark, x1: ok.map((i) => frame.px.back(frame.px(x[i]) - 4)), x2: ok.map((i) => frame.px.back(frame.px(x[i]) + 4)),
    y1: ok.map((i) => end[i]), y2: ok.map((i) => end[i]),
  });
  return [Plot.ruleX(ok, { ...mark, x: ok.map((i) => x[i]), y1: ok.map((i) => low[i]), y2: ok.map((i) => high[i]) }), cap(low), cap(high)];
}

const ORDER = { spans: 4, band: 0, rule: 1, line: 2, 'dots+line': 3, errorbars: 4, points: 4 };

// seriesMarks draws bands first, then lines, points on top.
export function seriesMarks(spec, frame, theme) {
  const list = [...(spec.series ?? [])].sort((a, b) => (ORDER[a.mark] ?? 2) - (ORDER[b.mark] ?? 2));
  return list.flatMap((s) => one(s, frame, theme));
}
