// Reading, picking and zooming in a chart with the pointer. The view (zoomed range) belongs
// to the stage; a redraw replaces the SVG and calls listen again.

import { look, SANS } from './palette.js';
import { element } from './labels.js';
import { plain } from './ticks.js';
import { width as textWidth } from './text.js';

const HOVER = 28, PICK = 14, DRAG = 8; // px

// nearest finds the drawn point closest to (px, py), measured points preferred to lines.
export function nearest(spec, frame, px, py, reach) {
  let best = null, least = reach * reach;
  (spec.series ?? []).forEach((s, series) => {
    if (s.mark === 'rule' || s.mark === 'band' || s.faint) return;
    const point = s.mark && s.mark !== 'line';
    for (let i = 0; i < Math.min(s.x?.length ?? 0, s.y?.length ?? 0); i++) {
      const dx = frame.px(s.x[i]) - px, dy = frame.py(s.y[i]) - py;
      const d = dx * dx + dy * dy + (point ? 0 : 60);
      if (d < least) { least = d; best = { series, index: i, point, x: s.x[i], y: s.y[i], px: px + dx, py: py + dy }; }
    }
  });
  return best;
}

const digits = (v) => plain(Number(v.toPrecision(4)));

// tipText is what hovering says: the series' own text, or name and both values.
export function tipText(spec, hit) {
  const s = spec.series[hit.series], own = s.tip?.[hit.index];
  if (own) return String(own).split('\n');
  const say = (axis, v) => `${axis?.label ?? ''} ${digits(v)}${axis?.unit ? ` ${axis.unit}` : ''}`.trim();
  return [s.name, say(spec.x, hit.x), say(spec.y, hit.y)].filter(Boolean);
}

function showTip(layer, spec, frame, theme, hit) {
  layer.replaceChildren();
  if (!hit) return;
  layer.append(element('circle', { cx: hit.px, cy: hit.py, r: 6.5, fill: 'none', stroke: look(spec.series[hit.series].role, theme).colour, 'stroke-width': 2 }));
  box(layer, tipText(spec, hit), hit.px, hit.py, frame.w, frame.height, theme);
}

// box writes lines beside (px, py), turned inwards at the edges of the drawing.
export function box(layer, lines, px, py, width, height, theme) {
  const w = Math.max(...lines.map((l) => textWidth(l, `13px ${SANS}`))) + 16, h = lines.length * 18 + 8;
  const x = px + 12 + w < width ? px + 12 : Math.max(0, px - 12 - w), y = Math.min(Math.max(0, py - h - 8), height - h);
  layer.append(element('rect', { x, y, width: w, height: h, rx: 3, fill: theme.card, stroke: theme.edge }),
    ...lines.map((l, i) => element('text', { x: x + 8, y: y + 18 + i * 18, 'font-size': 13, fill: theme.ink }, l)));
}

// inDrawing gives pointer coordinates in the units of a drawing w wide.
export function inDrawing(svg, w, e) {
  const rect = svg.getBoundingClientRect(), k = w / (rect.width || w);
  return [(e.clientX - rect.left) * k, (e.clientY - rect.top) * k];
}

// listen wires one drawn chart. zoom(view) is called with the dragged range.
export function listen(svg, el, spec, frame, theme, zoom) {
  const layer = svg.appendChild(element('g', { class: 'plot-tip', 'pointer-events': 'none', 'text-anchor': 'start' }));
  const at = (e) => inDrawing(svg, frame.w, e);
  const clampX = (v) => Math.min(Math.max(v, frame.left), frame.right), clampY = (v) => Math.min(Math.max(v, frame.top), frame.bottom);
  let start = null;
  svg.addEventListener('pointerdown', (e) => {
    if (e.button !== 0 || e.pointerType === 'touch') return;
    const [x, y] = at(e);
    if (x < frame.left || x > frame.right || y < frame.top || y > frame.bottom) return;
    start = [x, y];
    svg.setPointerCapture?.(e.pointerId);
  });
  svg.addEventListener('pointermove', (e) => {
    const [x, y] = at(e);
    if (!start) return showTip(layer, spec, frame, theme, nearest(spec, frame, x, y, HOVER));
    const [a, b, c, d] = [clampX(Math.min(start[0], x)), clampX(Math.max(start[0], x)), clampY(Math.min(start[1], y)), clampY(Math.max(start[1], y))];
    layer.replaceChildren(element('rect', { x: a, y: c, width: b - a, height: d - c, fill: theme.potential, 'fill-opacity': 0.12, stroke: theme.potential }));
  });
  svg.addEventListener('pointerleave', () => { if (!start) layer.replaceChildren(); });
  svg.addEventListener('pointercancel', () => { start = null; layer.replaceChildren(); });
  svg.addEventListener('pointerup', (e) => {
    if (!start) return;
    const from = start, to = at(e).map((v, i) => (i ? clampY(v) : clampX(v)));
    start = null;
    layer.replaceChildren();
    if (Math.abs(from[0] - to[0]) < DRAG || Math.abs(from[1] - to[1]) < DRAG) return;
    const sort = (a, b) => [Math.min(a, b), Math.max(a, b)];
    zoom({ x: sort(frame.px.back(from[0]), frame.px.back(to[0])), y: sort(frame.py.back(from[1]), frame.py.back(to[1])) });
  });
  svg.addEventListener('click', (e) => {
    const hit = nearest({ series: (spec.series ?? []).map((s) => (s.mark && s.mark !== 'line' ? s : { ...s, mark: 'band' })) }, frame, ...at(e), PICK);
    if (!hit) return;
    showTip(layer, spec, frame, theme, hit);
    el.dispatchEvent(new CustomEvent('plotpick', { bubbles: true, detail: { series: spec.series[hit.series].name ?? '', index: hit.index, x: hit.x, y: hit.y, shift: e.shiftKey } }));
  });
  svg.addEventListener('dblclick', () => zoom(null));
}
