// The potential band of the section: Δφ(x) on a small volt scale of its own, its height at
// the interface (Φ₀) measured off with a dimension line. Negative potentials hang from zero.

import { SANS, SERIF } from './palette.js';
import { linear, plain } from './ticks.js';
import { escape, rich, width as textWidth } from './text.js';

const PAD = 9; // px kept free above and below the curve

function voltScale(spec, at) {
  const all = [...at.right.potential, ...at.left.potential, spec.phi0_V ?? 0, 0].filter(Number.isFinite);
  let lo = Math.min(...all), hi = Math.max(...all);
  if (hi - lo < 1e-4) hi = lo + 0.1; // a flat layer is drawn flat, not as magnified noise
  const [top, bottom] = at.potential;
  return { lo, hi, y: (v) => bottom - PAD - ((v - lo) / (hi - lo)) * (bottom - top - 2 * PAD) };
}

// curve runs from the far left grain over the core to the far right.
function curve(at, y) {
  const left = at.left.x.map((d, i) => [at.px(d, -1), at.left.potential[i]]).reverse();
  const right = at.right.x.map((d, i) => [at.px(d, 1), at.right.potential[i]]);
  return [...left, ...right].filter((p) => Number.isFinite(p[1])).map(([x, v]) => [x, y(v)]);
}

const trace = (points) => 'M' + points.map(([x, y]) => `${x.toFixed(1)} ${y.toFixed(1)}`).join('L');

// free finds the first place right of the core where a box w px wide stays clear of the curve
// and of its own dimension line; null when the layer fills the band.
function free(points, at, w, inner) {
  for (let x = at.centre + at.halfCore + 26; x + w < at.x1 - 4; x += 8) {
    const clear = points.every(([px, py]) => px < x - 14 || px > x + w || !inner(py));
    if (clear) return x;
  }
  return null;
}

// phi0 draws the dimension line of the space-charge potential and its value.
function phi0(spec, at, scale, points, theme) {
  const v = spec.phi0_V;
  if (!Number.isFinite(v) || at.phone || !spec.phi0_text) return '';
  const up = v >= 0, yv = scale.y(v), y0 = scale.y(0);
  const w = Math.max(textWidth(spec.phi0_text, `21px ${SERIF}`), textWidth(spec.interval_text ?? '', `14px ${SANS}`)) + 12;
  const mid = Math.min(Math.max((yv + y0) / 2, at.potential[0] + 24), at.potential[1] - 24);
  const x = free(points, at, w, (py) => py > mid - 24 && py < mid + 24) ?? at.x1 - w - 6;
  const edge = at.centre + at.halfCore;
  let out = `<path d="M${edge.toFixed(1)} ${yv.toFixed(1)}H${(x + 5).toFixed(1)}" stroke="${theme.dim}" stroke-dasharray="2 3" fill="none"/>`;
  const a = up ? 5 : -5;
  out += `<path d="M${x.toFixed(1)} ${yv.toFixed(1)}V${y0.toFixed(1)}M${x - 3} ${(yv + a).toFixed(1)}L${x} ${yv.toFixed(1)}L${x + 3} ${(yv + a).toFixed(1)}M${x - 3} ${(y0 - a).toFixed(1)}L${x} ${y0.toFixed(1)}L${x + 3} ${(y0 - a).toFixed(1)}" stroke="${theme.ink}" fill="none"/>`;
  const halo = `paint-order="stroke" stroke="${theme.card}" stroke-width="4" stroke-linejoin="round"`;
  out += `<text x="${x + 10}" y="${(mid + (spec.interval_text ? 0 : 7)).toFixed(1)}" font-family='${SERIF}' font-size="21" fill="${theme.ink}" ${halo}>${rich(spec.phi0_text, 14)}</text>`;
  if (spec.interval_text) out += `<text x="${x + 10}" y="${(mid + 18).toFixed(1)}" font-size="14" fill="${theme.dim}" ${halo}>${escape(spec.interval_text)}</text>`;
  return out;
}

// volts draws the ticks at the left edge; the unit stands at the top one.
function volts(at, scale, theme) {
  const ticks = linear(scale.lo, scale.hi, 3), s = ticks.length > 1 ? Math.abs(ticks[1] - ticks[0]) : 1;
  let path = '', text = '';
  const top = Math.max(...ticks);
  for (const t of ticks) {
    const y = scale.y(t);
    path += `M${at.x0 - 5} ${y.toFixed(1)}h5`;
    text += `<text x="${at.x0 - 8}" y="${(y + 4.5).toFixed(1)}" text-anchor="end">${plain(t, s)}${t === top && !at.phone ? ' V' : ''}</text>`;
  }
  if (at.phone) text += `<text x="${at.x0 - 8}" y="${at.potential[0] - 8}" text-anchor="end">V</text>`;
  return `<path d="M${at.x0} ${at.potential[0]}V${at.potential[1]}${path}" stroke="${theme.dim}" fill="none"/><g fill="${theme.dim}">${text}</g>`;
}

export function potentialBand(spec, at, theme) {
  const scale = voltScale(spec, at), points = curve(at, scale.y), y0 = scale.y(0).toFixed(1);
  let out = `<path d="M${at.x0} ${y0}H${at.x1}" stroke="${theme.line}"/>` + volts(at, scale, theme);
  if (points.length < 2) return out;
  out += `<path d="${trace(points)}L${points.at(-1)[0].toFixed(1)} ${y0}L${points[0][0].toFixed(1)} ${y0}Z" fill="${theme.potential}" fill-opacity="0.13"/>`;
  out += phi0(spec, at, scale, points, theme);
  return out + `<path d="${trace(points)}" fill="none" stroke="${theme.potential}" stroke-width="2.8" stroke-linejoin="round"/>`;
}
