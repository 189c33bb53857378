// Ticks and number text for axes. Pure functions; numbers carry a true minus sign.

const SUPERSCRIPT = { '-': '⁻', 0: '⁰', 1: '¹', 2: '²', 3: '³', 4: '⁴', 5: '⁵', 6: '⁶', 7: '⁷', 8: '⁸', 9: '⁹' };

export const superscript = (n) => String(n).replace(/[-0-9]/g, (c) => SUPERSCRIPT[c]);
const minus = (s) => s.replace('-', '−');

// step is the smallest of 1, 2, 5 × 10^k that cuts span into at most count pieces.
export function step(span, count) {
  if (!(span > 0) || !(count > 0)) return 1;
  const raw = span / count;
  const power = 10 ** Math.floor(Math.log10(raw) + 1e-12);
  const m = [1, 2, 5, 10].find((k) => k * power >= raw * (1 - 1e-9));
  return m * power;
}

// linear lists the multiples of a step within [a, b].
export function linear(a, b, count) {
  const lo = Math.min(a, b), hi = Math.max(a, b), s = step(hi - lo, count);
  const ticks = [];
  for (let i = Math.ceil(lo / s - 1e-9); i * s <= hi + s * 1e-9; i++) ticks.push(tidy(i * s, s));
  return ticks;
}

// tidy removes the last-digit noise of i*s (0.30000000000000004 → 0.3).
function tidy(v, s) {
  const digits = Math.max(0, Math.min(20, 1 - Math.floor(Math.log10(s))));
  return digits > 15 ? v : Number(v.toFixed(digits));
}

// decades lists powers of ten within [a, b], thinned to at most count of them; when fewer
// than two fall inside, 1-2-5 marks are used instead.
export function decades(a, b, count) {
  const lo = Math.log10(Math.min(a, b)), hi = Math.log10(Math.max(a, b));
  const first = Math.ceil(lo - 1e-9), last = Math.floor(hi + 1e-9);
  if (last - first >= 1) {
    const every = Math.max(1, Math.ceil((last - first + 1) / Math.max(1, count)));
    const ticks = [];
    for (let k = Math.ceil(first / every) * every; k <= last; k += every) ticks.push(10 ** k);
    return ticks;
  }
  const ticks = [];
  for (let k = first - 1; k <= last + 1; k++) {
    for (const m of [1, 2, 5]) {
      const v = m * 10 ** k;
      if (v >= 10 ** (lo - 1e-9) && v <= 10 ** (hi + 1e-9)) ticks.push(v);
    }
  }
  return ticks.length > 1 ? ticks : linear(a, b, 4);
}

// minor lists 2…9 × 10^k within [a, b], only where they stay readable (at most six decades).
export function minor(a, b) {
  const lo = Math.min(a, b), hi = Math.max(a, b), ticks = [];
  if (hi / lo > 1e6) return ticks;
  for (let k = Math.floor(Math.log10(lo)); k <= Math.log10(hi); k++) {
    for (let m = 2; m < 10; m++) if (m * 10 ** k >= lo && m * 10 ** k <= hi) ticks.push(m * 10 ** k);
  }
  return ticks;
}

// plain prints a number to the digits its tick step needs: 0.05, 250, 2×10⁵.
export function plain(v, s = 0) {
  if (v === 0) return '0';
  const size = Math.abs(v);
  if (size >= 1e5 || size < 1e-3) {
    const k = Math.floor(Math.log10(size) + 1e-12), m = Number((v / 10 ** k).toPrecision(3));
    if (m === 1) return `10${superscript(k)}`;
    return minus(`${m}×10${superscript(k)}`);
  }
  const digits = s > 0 ? Math.max(0, -Math.floor(Math.log10(s) + 1e-9)) : 0;
  return minus(s > 0 ? v.toFixed(digits) : String(Number(v.toPrecision(4))));
}

// power prints a decade tick, 10⁻³, and 1-2-5 marks between decades as plain numbers.
export function power(v) {
  const k = Math.log10(v), near = Math.round(k);
  return Math.abs(k - near) < 1e-9 ? `10${superscript(near)}` : plain(v);
}

// celsius lists round Celsius temperatures for an axis of 1000/T (1/K), as {at, text}, evenly
// stepped in T and nowhere closer than gap pixels; px maps the axis value to pixels.
export function celsius(a, b, px, gap) {
  const zero = 273.15; // exact by definition of the Celsius scale
  const at = (t) => 1000 / (t + zero);
  const lo = 1000 / Math.max(a, b) - zero, hi = 1000 / Math.min(a, b) - zero;
  for (let count = 12; count > 0; count--) {
    const ts = linear(lo, hi, count);
    const near = ts.some((t, i) => i > 0 && Math.abs(px(at(t)) - px(at(ts[i - 1]))) < gap);
    if (!near || count === 1) return (near ? ts.slice(0, 1) : ts).map((t) => ({ at: at(t), text: minus(String(t)) }));
  }
  return [];
}
