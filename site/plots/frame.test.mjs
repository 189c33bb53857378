import test from 'node:test';
import assert from 'node:assert/strict';
import { domainOf, equalise, frameOf, projector } from './frame.js';
import { pieces, rich, species, width } from './text.js';

const spec = { title: 'Spectrum', sub: 'points measured', zero: true, x: { label: 'Z′', unit: 'kΩ' }, y: { label: '−Z″', unit: 'kΩ' },
  series: [{ name: 'measured', mark: 'points', x: [0, 300, 538], y: [0, 173, NaN] }, { name: 'fit', mark: 'line', x: [0, 538], y: [0, null] }] };

test('domains cover the data, error bars and zero, and skip what cannot be drawn', () => {
  assert.equal(domainOf(spec, 'x')[0], 0);
  assert.ok(domainOf(spec, 'x')[1] > 538);
  const bars = { y: { scale: 'log' }, series: [{ mark: 'errorbars', x: [1], y: [10], low: [-1], high: [1000] }] };
  const [lo, hi] = domainOf(bars, 'y');
  assert.ok(lo > 0 && lo < 10 && hi > 1000);
  assert.deepEqual(domainOf({ ...spec, x: { domain: [5, null] } }, 'x')[0], 5);
  assert.deepEqual(domainOf({ series: [] }, 'y').map(Number.isFinite), [true, true]);
});

test('equal scales: a unit is as long on both axes, at any width and when zoomed', () => {
  for (const w of [340, 600, 1000]) {
    for (const view of [null, { x: [100, 400], y: [0, 200] }, { x: [0, 10], y: [0, 150] }]) {
      const f = frameOf({ ...spec, equal: true }, w, view);
      const ux = f.px(1) - f.px(0), uy = f.py(0) - f.py(1);
      assert.ok(Math.abs(ux / uy - 1) < 1e-9, `${w}: ${ux} ${uy}`);
      if (view) assert.ok(f.x.domain[0] <= view.x[0] && f.x.domain[1] >= view.x[1] && f.y.domain[1] >= view.y[1]);
    }
  }
  assert.deepEqual(equalise([0, 10], [0, 1], 100, 100), [[0, 10], [0, 10]]);
});

test('pixels and values are inverse, reversed and logarithmic axes too', () => {
  for (const axis of [{ log: false, domain: [2, 8] }, { log: false, domain: [8, 2] }, { log: true, domain: [1e-3, 1e6] }]) {
    const to = projector(axis, 40, 500), v = axis.log ? 37 : 3.7;
    assert.ok(Math.abs(to.back(to(v)) / v - 1) < 1e-12);
    assert.ok(Math.abs(to(axis.domain[0]) - 40) < 1e-9 && Math.abs(to(axis.domain[1]) - 500) < 1e-9);
  }
});

test('every axis has at least two ticks inside its domain', () => {
  for (const y of [[0.206, 0.2501], [1e5, 1.02e5], [-3, -2.9]]) {
    const f = frameOf({ height: 170, x: {}, y: {}, series: [{ x: [0, 1], y }] }, 400, null);
    assert.ok(f.y.ticks.length >= 2 && f.y.ticks.every((t) => t >= f.y.domain[0] && t <= f.y.domain[1]), String(f.y.ticks));
  }
});

test('species names and subscripts', () => {
  assert.deepEqual(species('V_O••'), { base: 'V', sub: 'O', sup: '••' });
  assert.deepEqual(species('Gd_Ce′'), { base: 'Gd', sub: 'Ce', sup: '′' });
  assert.deepEqual(species('e′'), { base: 'e', sub: '', sup: '′' });
  assert.deepEqual(species({ base: 'O', sub: 'i', sup: '″' }), { base: 'O', sub: 'i', sup: '″' });
  assert.deepEqual(species('any text'), { base: 'any text', sub: '', sup: '' });
  assert.deepEqual(pieces('2λ_eff = 3 nm').map((p) => p.rise), [0, -1, 0]);
  assert.match(rich('a<b_x'), /^a&lt;b<tspan dy="4"/);
  assert.ok(width('wide', '26px x') > width('wide', '13px x'));
});
