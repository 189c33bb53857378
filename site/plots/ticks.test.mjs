import test from 'node:test';
import assert from 'node:assert/strict';
import { celsius, decades, linear, minor, plain, power, step, superscript } from './ticks.js';

test('step is the next 1, 2 or 5 × 10^k', () => {
  for (const [span, count, want] of [[10, 5, 2], [1, 4, 0.5], [0.044, 2, 0.05], [7, 7, 1], [5.5e5, 6, 1e5], [3e-9, 3, 1e-9]]) {
    assert.ok(Math.abs(step(span, count) / want - 1) < 1e-12, `${span}/${count}: ${step(span, count)}`);
  }
  assert.equal(step(0, 5), 1);
});

test('linear ticks are multiples of the step, inside the range, free of rounding noise', () => {
  assert.deepEqual(linear(0, 0.6, 6), [0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6]);
  assert.deepEqual(linear(-0.13, 0.01, 3), [-0.1, -0.05, 0]);
  assert.deepEqual(linear(5, 1, 4), [1, 2, 3, 4, 5]);
});

test('decades: powers of ten, thinned; 1-2-5 within one decade', () => {
  assert.deepEqual(decades(1e-2, 1e6, 20), [0.01, 0.1, 1, 10, 100, 1000, 1e4, 1e5, 1e6]);
  assert.deepEqual(decades(1e-2, 1e6, 5), [0.01, 1, 100, 1e4, 1e6]);
  assert.deepEqual(decades(3, 40, 5), [5, 10, 20]);
  assert.ok(decades(41, 43, 5).length >= 2, 'a narrow range still has ticks');
});

test('minor ticks stop where they would merge', () => {
  assert.equal(minor(1, 100).length, 16);
  assert.deepEqual(minor(1, 1e8), []);
});

test('numbers carry a true minus and digits of their step', () => {
  const rows = [[0, 0, '0'], [-0.05, 0.05, '−0.05'], [0.1, 0.05, '0.10'], [250, 50, '250'], [2e5, 1e5, '2×10⁵'], [1e-4, 0, '10⁻⁴'], [-3.2e-7, 0, '−3.2×10⁻⁷'], [99999.5, 0.5, '99999.5']];
  for (const [v, s, want] of rows) assert.equal(plain(v, s), want);
  assert.equal(power(1e-3), '10⁻³');
  assert.equal(power(1e26), '10²⁶');
  assert.equal(power(0.02), '0.02');
  assert.equal(superscript(-12), '⁻¹²');
});

// 0 °C is 273.15 K by the definition of the Celsius scale.
test('Celsius marks on 1000/T stand at their temperature and keep their distance', () => {
  const px = (v) => (v - 1.6) * 800, marks = celsius(1.6, 2.12, px, 44);
  assert.ok(marks.length >= 3);
  for (const m of marks) assert.ok(Math.abs(1000 / m.at - 273.15 - Number(m.text)) < 1e-9, m.text);
  for (let i = 1; i < marks.length; i++) assert.ok(Math.abs(px(marks[i].at) - px(marks[i - 1].at)) >= 44);
  assert.ok(marks.some((m) => m.text === '300'));
});
