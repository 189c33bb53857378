import test from 'node:test';
import assert from 'node:assert/strict';
import fs from 'node:fs';
import { THEMES, look, roles } from './palette.js';

// Relative luminance and contrast ratio: W3C, WCAG 2.2, definitions of those terms.
const channel = (c) => (c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4);
const luminance = (hex) => [1, 3, 5].map((i) => channel(parseInt(hex.slice(i, i + 2), 16) / 255)).reduce((s, v, i) => s + v * [0.2126, 0.7152, 0.0722][i], 0);
const contrast = (a, b) => {
  const [hi, lo] = [luminance(a), luminance(b)].sort((x, y) => y - x);
  return (hi + 0.05) / (lo + 0.05);
};

test('contrast of the formula itself', () => assert.ok(Math.abs(contrast('#000000', '#ffffff') - 21) < 1e-9));

test('text colours reach 4.5 : 1 on paper and card (WCAG 2.2, 1.4.3)', () => {
  for (const [name, t] of Object.entries(THEMES)) {
    for (const ground of [t.paper, t.card]) {
      for (const k of ['ink', 'dim', 'potential', 'carrier', 'carrier2', 'carrier3', 'carrier4', 'carrier5', 'carrier6', 'dopant', 'good', 'flag']) {
        const c = contrast(t[k], ground);
        assert.ok(c >= 4.5, `${name} ${k} on ${ground}: ${c.toFixed(2)}`);
      }
    }
    assert.ok(contrast(t.paper, t.ink) >= 4.5 && contrast(t.paper, t.potential) >= 4.5, `${name}: inverted text`);
    assert.ok(contrast(t.ink, t.core) >= 4.5, `${name}: charges on the core`);
  }
});

test('edges of controls reach 3 : 1 (WCAG 2.2, 1.4.11)', () => {
  for (const [name, t] of Object.entries(THEMES)) {
    for (const ground of [t.paper, t.card]) assert.ok(contrast(t.edge, ground) >= 3, `${name} edge on ${ground}: ${contrast(t.edge, ground).toFixed(2)}`);
  }
});

test('carriers differ in dash and symbol, not in colour alone', () => {
  const forms = ['carrier', 'carrier2', 'carrier3', 'carrier4', 'carrier5', 'carrier6'].map((r) => look(r, THEMES.light));
  assert.equal(new Set(forms.map((f) => f.dash)).size, forms.length);
  assert.equal(new Set(forms.map((f) => f.symbol)).size, forms.length);
  for (const r of roles) assert.match(look(r, THEMES.dark).colour, /^#[0-9a-f]{6}$/);
  assert.equal(look('no such role', THEMES.light).colour, THEMES.light.ink);
});

test('the style sheet uses the same colours', () => {
  const css = fs.readFileSync(new URL('../style.css', import.meta.url), 'utf8');
  const blocks = [...css.matchAll(/color-scheme: (light|dark);([^}]*)/g)];
  assert.equal(blocks.length, 4); // light, dark chosen, dark by system, print
  blocks.forEach(([, scheme, body], i) => {
    const theme = i === 3 ? THEMES.white : THEMES[scheme];
    for (const k in theme) assert.match(body, new RegExp(`--${k}: ${theme[k]}`), `block ${i}: ${k}`);
  });
});
