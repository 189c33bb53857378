import test from 'node:test';
import assert from 'node:assert/strict';
import { THEMES } from './palette.js';
import { columns, SYMBOLS } from './bands.js';
import { describe, sectionSVG } from './section.js';
import { linesAt } from './read.js';

const x = Array.from({ length: 101 }, (_, i) => i * 0.07);
const potential = x.map((d) => (d < 1.7 ? 0.22 * (1 - d / 1.7) ** 2 : 0));
const spec = {
  temperature: '300 °C', core: { width_nm: 0.4, charge_text: 'core +0.136 C/m²', sign: 1, occupancy: 0.5 },
  x_nm: x, potential_V: potential, phi0_V: 0.22, phi0_text: 'Φ₀ = 0.220 V',
  carriers: [
    { name: 'V_O••', role: 'carrier', mobile: true, bulk_text: '1.25×10²⁶ m⁻³', relative: potential.map((v) => Math.exp(-2 * v / 0.0494)) },
    { name: 'Gd_Ce′', role: 'dopant', mobile: false }],
  width_nm: 1.7, width_text: '2λ* = 3.4 nm', debye_nm: 0.26,
};
const draw = (change, w = 1000) => sectionSVG({ ...spec, ...change }, w, THEMES.light);

// wellFormed is a small check that tags nest and no value is NaN.
function wellFormed(svg) {
  assert.doesNotMatch(svg, /NaN|undefined|Infinity/);
  const open = [];
  for (const [, close, name, self] of svg.matchAll(/<(\/?)([a-z]+)[^>]*?(\/?)>/g)) {
    if (self) continue;
    if (close) assert.equal(open.pop(), name);
    else open.push(name);
  }
  assert.equal(open.length, 0);
}

// dotsOf reads back the x of every dot of the carrier in its colour.
function dotsOf(svg, colour) {
  const path = svg.match(new RegExp(`<path d="([^"]*)" fill="none" stroke="${colour}" stroke-width="3.1"`))[1];
  return [...path.matchAll(/M([\d.]+) /g)].map((m) => Number(m[1]));
}

test('every case is well formed, from 1 nm to 10 µm, on desktop and phone', () => {
  const many = Array.from({ length: 6 }, (_, i) => ({ name: 'h•', role: i ? `carrier${i + 1}` : 'carrier', mobile: true, relative: spec.carriers[0].relative }));
  for (const w of [320, 390, 700, 1200]) {
    for (const change of [{}, { carriers: many }, { carriers: [] }, { stale: true }, { x_nm: x.map((d) => d / 7), half_nm: 0.9 }, { x_nm: x.map((d) => d * 1500) },
      { core: {} }, { core: undefined }, { potential_V: potential.map((v) => -v), phi0_V: -0.22 }, { potential_V: potential.map(() => 0), phi0_V: 0 },
      { x_nm: [], potential_V: [] }, { phi0_V: NaN, potential_V: [NaN, ...potential.slice(1)] }]) {
      wellFormed(draw(change, w).svg);
    }
  }
  assert.match(draw({ x_nm: x.map((d) => d * 1500) }).svg, /distance from the core \/ µm/);
});

test('no text is smaller than 13 px', () => {
  for (const w of [390, 1200]) for (const [, size] of draw({}, w).svg.matchAll(/font-size="([\d.]+)"/g)) assert.ok(Number(size) >= 13, size);
});

test('dots follow the concentration: none in the core, few in the layer, even in the grain', () => {
  const { svg } = draw({}), at = dotsOf(svg, THEMES.light.carrier);
  const scale = (1000 - 50 - 20) / (14 + 0.4), centre = 50 + 7.2 * scale;
  const within = (a, b) => at.filter((px) => { const d = Math.abs(px - centre) / scale - 0.2; return d >= a && d < b; }).length;
  assert.equal(within(-1, 0), 0);
  const want = (a, b) => { // mean of c/c∞ over the interval, by the midpoint rule on the same profile
    let sum = 0;
    for (let i = 0; i < 200; i++) { const d = a + ((i + 0.5) / 200) * (b - a); sum += d < 1.7 ? Math.exp((-2 * 0.22 * (1 - d / 1.7) ** 2) / 0.0494) : 1; }
    return sum / 200;
  };
  const grain = within(2, 6) / 4; // dots per nm where c = c∞
  for (const [a, b] of [[0, 0.8], [0.8, 1.3], [1.3, 1.7]]) {
    const got = within(a, b) / (b - a) / grain;
    assert.ok(Math.abs(got - want(a, b)) < 0.08, `${a}…${b} nm: ${got.toFixed(3)}, expected ${want(a, b).toFixed(3)}`);
  }
});

test('concentration columns are symmetric and interpolate ln c', () => {
  const grain = { x: [0, 1], carriers: [{ relative: [1e-4, 1] }] };
  const at = { x0: 0, x1: 200, centre: 100, scale: 100, halfCore: 1, left: grain, right: grain };
  const c = columns(at, 0);
  for (let i = 0; i < 100; i++) assert.ok(Math.abs(c[i] - c[199 - i]) < 1e-12);
  assert.ok(Math.abs(c[149] / 10 ** (-4 + 4 * 0.495) - 1) < 1e-9);
});

test('a carrier is one path, and an unequal left grain is drawn as given', () => {
  const { svg } = draw({ left: { x_nm: x, potential_V: potential.map((v) => v / 2), carriers: [{ relative: x.map(() => 1) }] } });
  const at = dotsOf(svg, THEMES.light.carrier), centre = 50 + 7.2 * ((1000 - 70) / 14.4);
  const near = (s) => at.filter((px) => s * (px - centre) > 14 && s * (px - centre) < 60).length;
  assert.ok(near(-1) > 10 && near(1) <= 2, `left ${near(-1)}, right ${near(1)}`);
  assert.equal(Object.keys(SYMBOLS).length, 7);
});

test('strong accumulation says that dots are thinned', () => {
  const rich = [{ name: 'V_O••', role: 'carrier', mobile: true, relative: x.map((d) => 1 + 500 * Math.exp(-d)) }];
  assert.match(draw({ carriers: rich }).svg, /dots thinned/);
  assert.doesNotMatch(draw({}).svg, /dots thinned/);
});

test('the drawing is described in words, and what is typed is escaped', () => {
  // exp(−2 × 0.22/0.0494) = 1.35e-4, recomputed
  assert.equal(describe(spec), 'Section through one grain boundary; at 300 °C; core +0.136 C/m²; Φ₀ = 0.220 V; 2λ* = 3.4 nm; VO•• mobile, 1.4×10⁻⁴ times its interior value at the core; GdCe′ frozen');
  assert.match(draw({ note: '<b> & "x"' }).svg, /&lt;b&gt; &amp; &quot;x&quot;/);
});

test('the pointer reads distance, potential and concentration of its own side', () => {
  const { at } = draw({ left: { x_nm: x, potential_V: potential.map((v) => v / 2), carriers: [{ relative: x.map(() => 1) }] } });
  const right = linesAt(spec, at, at.px(0.85, 1)), left = linesAt(spec, at, at.px(0.85, -1));
  assert.equal(right[0], '0.85 nm from the core');
  // 0.22 × (1 − 0.85/1.7)² = 0.055 V, read between two points of a convex curve 0.07 nm apart
  assert.ok(Math.abs(Number(right[1].match(/[\d.]+/)) - 0.055) < 1e-3, right[1]);
  assert.ok(Math.abs(Number(left[1].match(/[\d.]+/)) - 0.0275) < 1e-3, left[1]);
  assert.equal(left[2], 'VO•• 1 of its interior value');
  assert.equal(linesAt(spec, at, at.centre), null);
  assert.equal(linesAt(spec, at, 10), null);
});
