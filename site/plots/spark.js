// A tiny line for a station's headline: no axes, one curve, its last point marked.

import { look } from './palette.js';
import { escape } from './text.js';

// sparkSVG draws spec = {x, y, role, label} in w × h pixels.
export function sparkSVG(spec, w, theme, h = 24) {
  const pairs = (spec.y ?? []).map((y, i) => [spec.x?.[i] ?? i, y]).filter((p) => p.every(Number.isFinite));
  const label = escape(spec.label ?? 'trend');
  const open = `<svg xmlns="http://www.w3.org/2000/svg" class="spark-drawing" role="img" aria-label="${label}" viewBox="0 0 ${w} ${h}" width="${w}" height="${h}">`;
  if (pairs.length < 2) return { svg: `${open}</svg>`, height: h };
  const range = (k) => pairs.reduce(([a, b], p) => [Math.min(a, p[k]), Math.max(b, p[k])], [Infinity, -Infinity]);
  const [x0, x1] = range(0), [y0, y1] = range(1);
  const at = pairs.map(([x, y]) => [3 + ((x - x0) / (x1 - x0 || 1)) * (w - 6), h - 4 - ((y - y0) / (y1 - y0 || 1)) * (h - 8)].map((v) => v.toFixed(1)));
  const { colour } = look(spec.role, theme), last = at.at(-1);
  return { height: h, svg: `${open}<path d="M${at.map((p) => p.join(' ')).join('L')}" fill="none" stroke="${colour}" stroke-width="1.6"/><circle cx="${last[0]}" cy="${last[1]}" r="2.4" fill="${colour}"/></svg>` };
}
