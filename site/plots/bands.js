// The carriers of the section. One mobile carrier shares the band with the frozen dopants,
// several get a lane each. All dots of a carrier are one path; the symbol differs between
// carriers so that grey prints stay legible.

import { look, SERIF } from './palette.js';
import { dots, thinning } from './stipple.js';
import { speciesRuns } from './text.js';

// Each symbol is a relative path drawn at the dot, and how it is stroked.
export const SYMBOLS = {
  carrier: { d: 'h.01', w: 3.1, cap: 'round' },
  carrier2: { d: 'm-1.7 0a1.7 1.7 0 1 0 3.4 0a1.7 1.7 0 1 0 -3.4 0', w: 1.2, cap: 'butt' },
  carrier3: { d: 'm0 -2.2l2 3.6h-4z', w: 1.1, cap: 'butt' },
  carrier4: { d: 'm-1.8 -1.8l3.6 3.6m0 -3.6l-3.6 3.6', w: 1.3, cap: 'butt' },
  carrier5: { d: 'h.01', w: 3, cap: 'square' },
  carrier6: { d: 'm-2.1 0h4.2m-2.1 -2.1v4.2', w: 1.3, cap: 'butt' },
  dopant: { d: 'm-2.6 0h5.2', w: 1.2, cap: 'butt' },
};
export const symbolOf = (c, i) => SYMBOLS[c.role] ?? (c.mobile === false ? SYMBOLS.dopant : SYMBOLS[i ? `carrier${i + 1}` : 'carrier'] ?? SYMBOLS.carrier);

// columns interpolates c/c∞ at every pixel column of the band; inside the core it is 0.
// Between points ln c is taken as linear where both are positive: near a charged core
// concentrations are exponential in x.
export function columns(at, index) {
  const n = Math.ceil(at.x1 - at.x0), out = new Float64Array(n);
  for (const [s, grain] of [[-1, at.left], [1, at.right]]) {
    const r = grain.carriers[index]?.relative, x = grain.x;
    let j = 0;
    for (let k = 0; k < n; k++) {
      const col = s > 0 ? k : n - 1 - k; // outward from the core: d ascends
      const d = s * (at.x0 + col + 0.5 - at.centre) / at.scale - (at.halfCore > 1 ? at.halfCore / at.scale : 0);
      if (d < 0) continue;
      out[col] = r ? between(x, r, d, () => { while (j + 2 < x.length && x[j + 1] < d) j++; return j; }) : d <= x.at(-1) ? 1 : 0;
    }
  }
  return out;
}

// between is c/c∞ at a distance d; seek gives the interval it lies in.
export function between(x, r, d, seek) {
  const j = seek();
  const a = r[j], b = r[Math.min(j + 1, r.length - 1)], span = x[j + 1] - x[j];
  const t = span > 0 ? Math.min(1, Math.max(0, (d - x[j]) / span)) : 0;
  if (!Number.isFinite(a) || !Number.isFinite(b)) return 0;
  return a > 0 && b > 0 ? a * (b / a) ** t : a + (b - a) * t;
}

const highest = (column) => column.reduce((a, b) => (b > a ? b : a), 0);

// lattice draws frozen dopants as staggered dashes: in place, not drifting. A profile that
// is not flat thins the lattice, or is scaled to its own highest value.
function lattice(at, column, y0, y1, d) {
  const dx = 28, dy = 14, top = Math.max(1, highest(column));
  let out = '';
  for (let row = 0, y = y0 + 8; y < y1 - 4; row++, y += dy) {
    const shift = row % 2 ? dx / 2 : 0;
    const first = Math.ceil((at.x0 + 4 - at.centre - shift) / dx);
    for (let i = first; at.centre + shift + i * dx < at.x1 - 3; i++) {
      const x = at.centre + shift + i * dx;
      const keep = (((i * 0.6180339887 + row * 0.7548776662) % 1) + 1) % 1; // even spread of thresholds
      if (keep < column[Math.min(column.length - 1, Math.floor(x - at.x0))] / top) out += `M${x.toFixed(1)} ${y}${d}`;
    }
  }
  return out;
}

function stipple(at, column, y0, y1, shift, d) {
  const top = highest(column), law = thinning(top);
  const density = Float32Array.from(column, law.of);
  let out = '';
  const box = { x0: at.x0 + 2, x1: at.x1 - 2, y0: y0 + 3, y1: y1 - 3 };
  dots(box, density.subarray(2), at.centre + shift, y0 + shift, (x, y) => { out += `M${x.toFixed(1)} ${y.toFixed(1)}${d}`; });
  return { path: out, log: law.log };
}

export function carrierBands(spec, at, theme) {
  const list = spec.carriers ?? [], rows = at.lanes ? list.length : 1;
  const pitch = (at.body[1] - at.body[0]) / rows;
  let svg = '', thinned = false;
  list.forEach((c, i) => {
    const y0 = at.body[0] + (at.lanes ? i * pitch : 0), y1 = at.lanes ? y0 + pitch : at.body[1];
    const { colour } = look(c.role ?? (c.mobile === false ? 'dopant' : 'carrier'), theme);
    const s = symbolOf(c, i), column = columns(at, i);
    let path;
    if (c.mobile === false) path = lattice(at, column, y0, y1, s.d);
    else {
      const drawn = stipple(at, column, y0, y1, i * 37.3, s.d);
      path = drawn.path;
      thinned ||= drawn.log;
    }
    svg += `<path d="${path}" fill="none" stroke="${colour}" stroke-width="${s.w}" stroke-linecap="${s.cap}" stroke-opacity="${c.mobile === false ? 0.85 : 0.82}"/>`;
    if (at.lanes && i) svg += `<path d="M${at.x0} ${y0}H${at.x1}" stroke="${theme.line}"/>`;
    if (at.laneNames) svg += `<text x="${at.x0 - 8}" y="${((y0 + y1) / 2 + 5).toFixed(1)}" text-anchor="end" font-family='${SERIF}' font-size="15" fill="${theme.ink}">${speciesRuns(c.name)}</text>`;
  });
  return { svg, thinned };
}
