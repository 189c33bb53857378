// The section across the page: grain | core | grain on a symmetric distance axis, the
// potential in its own band above, the carriers as stippled densities below, to scale.
// sectionSVG is pure: spec, width and theme in, SVG text out; no layout is read back, all
// colours are attributes, so the same text serves screen, print and exported file.

import { SANS, SERIF } from './palette.js';
import { linear, plain } from './ticks.js';
import { escape, rich, speciesText, width as textWidth } from './text.js';
import { potentialBand } from './potential.js';
import { carrierBands } from './bands.js';
import { legendRows } from './legend.js';

const FONT = `15px ${SERIF}`;

// side normalises one grain's arrays: distances ascending, potential and carriers alike.
function side(spec, own) {
  const from = own ?? spec;
  return {
    x: from.x_nm ?? [], potential: from.potential_V ?? [], half: from.half_nm ?? null,
    carriers: (spec.carriers ?? []).map((c, i) => ({ ...c, ...(own?.carriers?.[i] ?? {}) })),
    width: from.width_nm ?? null,
  };
}

// layout fixes every height and the distance scale for a drawing w pixels wide.
function layout(spec, w) {
  const phone = w < 560;
  const right = side(spec, null), left = spec.left ? side(spec, spec.left) : right;
  const lanes = (spec.carriers ?? []).filter((c) => c.mobile !== false).length > 1;
  const rows = lanes ? spec.carriers.length : 1;
  const laneNames = lanes && !phone;
  const m = { left: laneNames ? 72 : phone ? 44 : 50, right: phone ? 10 : 20 };
  const y0 = phone ? 46 : 26;
  const potential = [y0, y0 + (phone ? 84 : 86)];
  const body = [potential[1], potential[1] + Math.max(rows * (phone ? 34 : 36), phone ? 84 : 102)];
  const reach = Math.max(right.x.at(-1) ?? 1, left.x.at(-1) ?? 1, 1e-3);
  const wide = Math.max(0, spec.core?.width_nm ?? 0);
  const scale = (w - m.left - m.right) / (2 * reach + wide);
  const centre = m.left + (reach + wide / 2) * scale;
  const halfCore = Math.max((wide * scale) / 2, 1);
  return {
    w, phone, lanes, laneNames, m, potential, body, reach, scale, centre, halfCore, right, left,
    x0: m.left, x1: w - m.right,
    // px of a distance from the core on one side (+1 right, -1 left)
    px: (d, s) => centre + s * ((wide * scale) / 2 + d * scale),
  };
}

// core draws the boundary plane and its charges; filled marks show the occupied share.
function core(spec, at, theme) {
  const { core: c = {} } = spec, top = at.potential[0], bottom = at.body[1];
  const draw = Math.max(at.halfCore, 1.5);
  let out = `<rect x="${(at.centre - draw).toFixed(1)}" y="${top}" width="${(2 * draw).toFixed(1)}" height="${bottom - top}" fill="${theme.core}"/>`;
  const sign = Math.sign(c.sign ?? 0);
  if (!sign) return out;
  const count = Math.max(4, Math.floor((bottom - top - 16) / 19)), pitch = (bottom - top) / count;
  const share = c.occupancy ?? 1;
  let full = '', empty = '';
  for (let i = 0; i < count; i++) {
    const y = Math.round(top + (i + 0.5) * pitch), x = at.centre;
    // evenly spread the occupied sites: site i is filled when the running share steps up
    const filled = Math.floor((i + 1) * share + 0.5) > Math.floor(i * share + 0.5);
    if (filled) full += `M${(x - 4).toFixed(1)} ${y}h8` + (sign > 0 ? `M${x.toFixed(1)} ${y - 4}v8` : '');
    else empty += `M${(x - 2.5).toFixed(1)} ${y}a2.5 2.5 0 1 0 5 0a2.5 2.5 0 1 0 -5 0`;
  }
  out += `<path d="${full}" stroke="${theme.ink}" stroke-width="2.2" fill="none"/>`;
  return empty ? out + `<path d="${empty}" stroke="${theme.dim}" stroke-width="1.2" fill="${theme.card}"/>` : out;
}

// axis draws the distance scale, counted from the core on both sides.
function axis(at, theme) {
  const y = at.body[1], micro = at.reach > 2000, unit = micro ? 1000 : 1;
  const room = (at.reach * at.scale) / (at.phone ? 46 : 80);
  const ticks = linear(0, at.reach / unit, Math.max(2, Math.floor(room)));
  const s = ticks.length > 1 ? ticks[1] - ticks[0] : 1;
  let path = '', text = '';
  const put = (x, t) => { text += `<text x="${x.toFixed(1)}" y="${y + 19}" text-anchor="middle">${t}</text>`; };
  for (const t of ticks) {
    if (t === 0) continue;
    for (const sgn of [-1, 1]) {
      const x = at.px(t * unit, sgn);
      path += `M${x.toFixed(1)} ${y}v5`;
      if (x > at.x0 + 4 || !at.phone) put(x, plain(t, s));
    }
  }
  if (at.halfCore < 22) put(at.centre, '0');
  path += `M${at.px(0, -1).toFixed(1)} ${y}v5M${at.px(0, 1).toFixed(1)} ${y}v5`;
  return { unit: micro ? 'µm' : 'nm',
    svg: `<path d="M${at.x0} ${y}H${at.x1}${path}" stroke="${theme.dim}" fill="none"/><g fill="${theme.dim}" font-size="13" font-family='${SANS}'>${text}</g>` };
}

// measures draws what is measured off the picture below the axis: the width of the layer as
// a dimension line, the Debye length as a scale bar, and the axis title where there is room.
function measures(spec, at, unit, theme, y) {
  const title = at.phone ? `from the core / ${unit}` : `distance from the core / ${unit}`;
  const tw = textWidth(title, `13px ${SANS}`);
  let out = '', guides = '', rows = 0, titled = false;
  if (spec.width_nm > 0) {
    const lw = at.left.width ?? spec.width_nm;
    const a = at.px(Math.min(lw, at.reach), -1), b = at.px(Math.min(spec.width_nm, at.reach), 1);
    const mid = y + 9, w = textWidth(spec.width_text ?? '', FONT) + 12;
    const inside = w < b - a - 16;
    const cx = inside ? (a + b) / 2 : Math.min(Math.max(at.centre, at.x0 + w / 2), at.x1 - w / 2);
    const ty = inside ? mid + 5 : mid + 23;
    out += `<path d="M${a.toFixed(1)} ${mid - 6}v12M${b.toFixed(1)} ${mid - 6}v12M${a.toFixed(1)} ${mid}H${b.toFixed(1)}" stroke="${theme.dim}" fill="none"/>`;
    if (inside) out += `<rect x="${(cx - w / 2).toFixed(1)}" y="${mid - 8}" width="${w.toFixed(1)}" height="16" fill="${theme.paper}"/>`;
    out += `<text x="${cx.toFixed(1)}" y="${ty}" text-anchor="middle" font-family='${SERIF}' font-size="15" fill="${theme.ink}">${rich(spec.width_text ?? '')}</text>`;
    rows = inside ? 1 : 2;
    titled = Math.max(b, cx + w / 2) + 14 < at.x1 - tw;
    guides = `<path d="M${a.toFixed(1)} ${at.body[0]}V${at.body[1]}M${b.toFixed(1)} ${at.body[0]}V${at.body[1]}" stroke="${theme.dim}" stroke-dasharray="1 4" fill="none"/>`;
  }
  const alone = rows > 0 && !titled;
  if (alone) rows++;
  const ty = y + (alone ? (rows - 1) * 20 : 0) + 14;
  out += `<text x="${at.x1}" y="${ty}" text-anchor="end" font-family='${SANS}' font-size="13" fill="${theme.dim}">${title}</text>`;
  if (spec.debye_nm > 0) {
    const w = spec.debye_nm * at.scale, label = spec.debye_text ?? `λ_D = ${plain(Number(spec.debye_nm.toPrecision(2)))} nm`;
    if (w < (at.x1 - at.x0) / 3) {
      out += `<path d="M${at.x0 + 0.5} ${ty - 9}v9M${at.x0 + 0.5} ${ty - 4.5}h${Math.max(w, 1).toFixed(1)}v-4.5v9" stroke="${theme.ink}" stroke-width="1.5" fill="none"/>`;
      out += `<text x="${(at.x0 + w + 7).toFixed(1)}" y="${ty}" font-family='${SANS}' font-size="13" fill="${theme.dim}">${rich(label)}</text>`;
    }
  }
  return { svg: out, guides, height: Math.max(1, rows) * 20 };
}

// head names the two grains and the core above the drawing, and marks grain centres.
function head(spec, at, theme) {
  const y = at.phone ? 38 : 17;
  const t = (x, anchor, s, more = '') => `<text x="${x.toFixed(1)}" y="${y}" text-anchor="${anchor}"${more}>${escape(s)}</text>`;
  const charge = spec.core?.charge_text ?? '', half = textWidth(charge, FONT) / 2;
  const cx = Math.min(Math.max(at.centre, half + 2), at.w - half - 2);
  let out = '';
  const first = [spec.temperature, 'grain'].filter(Boolean);
  if (at.phone) out += `<text x="${at.x0}" y="16">${escape([spec.temperature, spec.phi0_text].filter(Boolean).join(' · '))}</text>`;
  const label = at.phone ? 'grain' : first.join(' · ');
  if (at.x0 + textWidth(label, FONT) + 12 < cx - half) out += t(at.x0, 'start', label);
  if (charge) out += t(cx, 'middle', charge);
  if (at.x1 - textWidth('grain', FONT) - 12 > cx + half) out += t(at.x1, 'end', spec.stale ? 'last good result' : 'grain');
  let line = '';
  for (const [s, half_nm] of [[-1, at.left.half], [1, at.right.half]]) {
    if (half_nm > 0 && half_nm <= at.reach * 1.0001) line += `M${at.px(half_nm, s).toFixed(1)} ${at.potential[0]}V${at.body[1]}`;
  }
  if (line) line = `<path d="${line}" stroke="${theme.dim}" stroke-dasharray="8 3 2 3" fill="none"/>`;
  return `<g font-family='${SERIF}' font-size="15" fill="${theme.ink}">${out}</g>${line}`;
}

// describe is the drawing in words, for readers who do not see it.
export function describe(spec) {
  const parts = ['Section through one grain boundary', spec.temperature && `at ${spec.temperature}`, spec.core?.charge_text,
    spec.phi0_text, spec.interval_text, spec.width_text,
    ...(spec.carriers ?? []).map((c) => {
      const r = c.relative?.[0];
      const near = Number.isFinite(r) ? `, ${plain(Number(r.toPrecision(2)))} times its interior value at the core` : '';
      return `${speciesText(c.name)} ${c.mobile === false ? 'frozen' : 'mobile'}${near}`;
    }), spec.note, spec.stale && 'last good result, inputs have changed since'];
  return parts.filter(Boolean).join('; ');
}

// greyed takes the colour out of a stale drawing but keeps its text legible.
function greyed(theme) {
  const out = { ...theme, ink: theme.dim, potential: theme.dim };
  for (const k in out) if (k.startsWith('carrier') || k === 'dopant') out[k] = theme.edge;
  return out;
}

// sectionSVG draws spec at w pixels; it returns the SVG text, its height and its geometry.
export function sectionSVG(spec, w, colours) {
  const theme = spec.stale ? greyed(colours) : colours;
  const at = layout(spec, w);
  const scale = axis(at, theme);
  const bands = carrierBands(spec, at, theme);
  const below = at.body[1] + 23;
  const m = measures(spec, at, scale.unit, theme, below);
  const legend = legendRows(spec, at, theme, below + m.height, bands.thinned);
  const h = Math.ceil(below + m.height + legend.height);
  const [top, bottom] = [at.potential[0], at.body[1]];
  const body = `<rect x="${at.x0}" y="${top}" width="${at.x1 - at.x0}" height="${bottom - top}" fill="${theme.card}"/>`;
  const split = `<path d="M${at.x0} ${at.body[0]}H${at.x1}" stroke="${theme.line}"/>`;
  const label = describe(spec);
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" class="section-drawing" role="img" aria-label="${escape(label)}" viewBox="0 0 ${w} ${h}" width="${w}" height="${h}" font-family='${SANS}' font-size="13">`
    + `<title>${escape(label)}</title><g>${body}${bands.svg}${m.guides}${split}${core(spec, at, theme)}`
    + `${potentialBand(spec, at, theme)}${head(spec, at, theme)}${scale.svg}${m.svg}${legend.svg}</g></svg>`;
  return { svg, height: h, at };
}

export const sectionColours = (theme) => look('potential', theme);
