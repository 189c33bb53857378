// Text in drawings: escaping, widths, and species names with their sub- and superscripts.

const ESCAPE = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;' };
export const escape = (s) => String(s).replace(/[&<>"]/g, (c) => ESCAPE[c]);

let pen = null;
const widths = new Map();

// width of a text in pixels; without a canvas (tests) an average glyph is assumed.
export function width(text, font) {
  const key = font + '|' + text;
  if (widths.has(key)) return widths.get(key);
  if (pen === null && typeof document !== 'undefined') pen = document.createElement('canvas').getContext('2d');
  let w = text.length * 0.56 * parseFloat(/[\d.]+(?=px)/.exec(font) ?? 13);
  if (pen) {
    pen.font = font;
    w = pen.measureText(text).width;
  }
  if (widths.size > 4000) widths.clear(); // dragging makes new texts without end
  widths.set(key, w);
  return w;
}

// species splits a Kröger–Vink name such as V_O••, Gd_Ce′ or e′ into base, sub and sup.
export function species(name) {
  if (typeof name === 'object' && name) return { base: name.base ?? '', sub: name.sub ?? '', sup: name.sup ?? '' };
  const m = /^([^_^•′″‴⁗×]+)(?:_([^_^•′″‴⁗×]+))?\^?([•′″‴⁗×]*)$/.exec(String(name));
  return m ? { base: m[1], sub: m[2] ?? '', sup: m[3] } : { base: String(name), sub: '', sup: '' };
}

export const speciesText = (name) => {
  const { base, sub, sup } = species(name);
  return base + sub + sup;
};

// pieces splits a text at subscripts written with an underscore (λ_D, V_O••) and at raised
// dots (h•): [{text, rise}] with rise -1, 0 or 1.
export function pieces(text) {
  const out = [], s = String(text);
  const put = (t, rise) => { if (t) out.push({ text: t, rise }); };
  let end = 0;
  for (const m of s.matchAll(/_([\p{L}\d∞*]+)([•′″‴⁗×]*)|(?<=\p{L})(•+)/gu)) {
    put(s.slice(end, m.index), 0);
    put(m[1], -1);
    put(m[2] || m[3], 1);
    end = m.index + m[0].length;
  }
  put(s.slice(end), 0);
  return out;
}

const DROP = { '-1': 4, 0: 0, 1: -5 }; // px below the baseline

// rich draws a text with its sub- and superscripts as tspans.
export function rich(text, small = 13) {
  let level = 0, out = '';
  for (const p of pieces(text)) {
    const dy = DROP[p.rise] - level;
    out += dy || p.rise ? `<tspan dy="${dy}"${p.rise ? ` font-size="${small}"` : ''}>${escape(p.text)}</tspan>` : escape(p.text);
    level = DROP[p.rise];
  }
  return out;
}

// speciesRuns draws the name as tspans; the last tspan returns to the baseline.
export function speciesRuns(name, small = 13) {
  const { base, sub, sup } = species(name);
  let out = escape(base), level = 0;
  if (sub) { out += `<tspan dy="4" font-size="${small}">${escape(sub)}</tspan>`; level = 4; }
  if (sup) { out += `<tspan dy="${-5 - level}" font-size="${small}">${escape(sup)}</tspan>`; level = -5; }
  return level ? `${out}<tspan dy="${-level}">\u200a</tspan>` : out;
}
