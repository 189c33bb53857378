import test from 'node:test';
import assert from 'node:assert/strict';
import { AREA, TILE, blueNoise, dots, thinning } from './stipple.js';

const box = { x0: 0, x1: 512, y0: 0, y1: 128 };
const draw = (density, b = box) => {
  const out = [];
  dots(b, density, 0, 0, (x, y) => out.push(`${x},${y}`));
  return out;
};
const flat = (v) => new Float64Array(512).fill(v);

test('the same seed gives the same points, all on the tile', () => {
  const a = blueNoise(500), b = blueNoise(500);
  assert.deepEqual(a, b);
  assert.notDeepEqual(a, blueNoise(500, 21));
  assert.ok(a.every((v) => v >= 0 && v < TILE));
});

// Poisson points have a mean nearest-neighbour distance of 0.5/√density (Clark & Evans,
// Ecology 35, 445 (1954), from memory); an evenly spread set lies well above.
test('every prefix is spread more evenly than chance', () => {
  const p = blueNoise(2000);
  for (const n of [100, 500, 2000]) {
    let sum = 0, least = Infinity;
    for (let i = 0; i < n; i++) {
      let best = Infinity;
      for (let j = 0; j < n; j++) {
        if (i === j) continue;
        const dx = Math.abs(p[2 * i] - p[2 * j]), dy = Math.abs(p[2 * i + 1] - p[2 * j + 1]);
        best = Math.min(best, Math.hypot(Math.min(dx, TILE - dx), Math.min(dy, TILE - dy)));
      }
      sum += best;
      least = Math.min(least, best);
    }
    const chance = 0.5 * Math.sqrt((TILE * TILE) / n);
    assert.ok(sum / n > 1.35 * chance, `${n} points: ${(sum / n / chance).toFixed(2)} of chance`);
    assert.ok(least > 0.2 * chance, `${n} points: closest pair ${(least / chance).toFixed(2)}`);
  }
});

test('the number of dots follows the density', () => {
  const full = (512 * 128) / AREA;
  for (const d of [0.1, 0.25, 0.5, 1]) {
    const n = draw(flat(d)).length;
    assert.ok(Math.abs(n / (d * full) - 1) < 0.05, `${d}: ${n} of ${d * full}`);
  }
  assert.equal(draw(flat(0)).length, 0);
});

test('dots come and go but never move', () => {
  const few = draw(flat(0.2)), more = new Set(draw(flat(0.3)));
  assert.ok(few.every((d) => more.has(d)));
  const half = draw(Float64Array.from(flat(0.3), (v, i) => (i < 256 ? v : 0)));
  assert.ok(half.length > 0 && half.every((d) => more.has(d) && Number(d.split(',')[0]) < 256));
});

test('thinning is linear up to an enrichment of 20, logarithmic above, and never exceeds 1', () => {
  for (const top of [0, 1, 3, 20]) {
    const law = thinning(top);
    assert.equal(law.log, false);
    assert.ok(Math.abs(law.of(0.5) - 0.5 * law.of(1)) < 1e-15 && law.of(top) <= 1 + 1e-12);
  }
  const law = thinning(1000);
  assert.equal(law.log, true);
  assert.ok(Math.abs(law.of(1000) - 1) < 1e-12 && law.of(1) > 0.05 && law.of(0) === 0);
});
