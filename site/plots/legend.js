// The legend under the section: one entry a carrier (symbol, name, interior value, mobile or
// frozen), the potential, and a note on thinned dots; it flows over as many rows as it needs.

import { look, SANS, SERIF } from './palette.js';
import { symbolOf } from './bands.js';
import { escape, speciesRuns, speciesText, width as textWidth } from './text.js';

function entries(spec, theme, thinned) {
  const list = (spec.carriers ?? []).map((c, i) => {
    const s = symbolOf(c, i), { colour } = look(c.role ?? (c.mobile === false ? 'dopant' : 'carrier'), theme);
    const state = c.mobile === false ? 'frozen' : 'mobile';
    const rest = [c.bulk_text, state].filter(Boolean).join(', ');
    let marks = '';
    for (const [x, y] of [[3, -7], [11, -9], [7, -2], [15, -4]]) marks += `M${x} ${y}${s.d}`;
    return {
      mark: `<path d="${c.mobile === false ? `M3 -8${s.d}M13 -8${s.d}M8 -2${s.d}` : marks}" fill="none" stroke="${colour}" stroke-width="${s.w}" stroke-linecap="${s.cap}"/>`,
      name: speciesRuns(c.name), rest,
      width: 24 + textWidth(speciesText(c.name), `16px ${SERIF}`) + 8 + textWidth(rest, `13px ${SANS}`) + 22,
    };
  });
  list.push({
    mark: `<path d="M0 -5H18" stroke="${theme.potential}" stroke-width="2.8"/>`, name: '', rest: 'potential',
    width: 24 + textWidth('potential', `13px ${SANS}`) + 22,
  });
  const notes = [thinned && 'dots thinned: density as ln(1 + c/c∞)', spec.note].filter(Boolean);
  for (const n of notes) list.push({ mark: '', name: '', rest: n, width: textWidth(n, `13px ${SANS}`) + 22 });
  return list;
}

// legendRows draws the legend from y downwards and tells how high it became.
export function legendRows(spec, at, theme, y, thinned) {
  let x = at.phone ? 4 : at.x0, row = 0, out = '';
  const start = x;
  for (const e of entries(spec, theme, thinned)) {
    if (x > start && x + e.width - 22 > at.w) { x = start; row++; }
    const skip = e.mark ? 24 : 0;
    out += `<g transform="translate(${x.toFixed(1)} ${y + 16 + row * 22})">${e.mark}<text x="${skip}" fill="${theme.ink}">`
      + (e.name ? `<tspan font-family='${SERIF}' font-size="16">${e.name}</tspan><tspan dx="6" fill="${theme.dim}">${escape(e.rest)}</tspan>` : `<tspan fill="${theme.dim}">${escape(e.rest)}</tspan>`)
      + '</text></g>';
    x += e.width;
  }
  return { svg: out, height: (row + 1) * 22 + 4 };
}
