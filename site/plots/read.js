// Reading the section with the pointer: a plumb line with distance, potential and each
// carrier's concentration there.

import { between } from './bands.js';
import { box, inDrawing } from './interact.js';
import { element } from './labels.js';
import { plain } from './ticks.js';
import { speciesText } from './text.js';

const short = (v, n = 3) => plain(Number(v.toPrecision(n)));

// valuesAt interpolates one grain at distance d: {potential, relative: [c/c∞ or null, …]}.
export function valuesAt(grain, d) {
  const { x } = grain;
  let j = 0;
  while (j + 2 < x.length && x[j + 1] < d) j++;
  const t = Math.min(1, Math.max(0, (d - x[j]) / (x[j + 1] - x[j] || 1))), [a, b] = [grain.potential[j], grain.potential[j + 1]];
  return { potential: a + (b - a) * t, relative: grain.carriers.map((c) => (c.relative ? between(x, c.relative, d, () => j) : null)) };
}

// linesAt is what the tip says at pixel px; null inside the core or beyond the profile.
export function linesAt(spec, at, px) {
  const grain = px < at.centre ? at.left : at.right, half = at.halfCore > 1 ? at.halfCore : 0;
  const d = (Math.abs(px - at.centre) - half) / at.scale;
  if (d < 0 || px < at.x0 || px > at.x1 || grain.x.length < 2 || d > grain.x.at(-1)) return null;
  const v = valuesAt(grain, d), micro = at.reach > 2000;
  const lines = [`${short(micro ? d / 1000 : d)} ${micro ? 'µm' : 'nm'} from the core`];
  if (Number.isFinite(v.potential)) lines.push(`Δφ ${short(v.potential)} V`);
  (spec.carriers ?? []).forEach((c, i) => { if (v.relative[i] !== null) lines.push(`${speciesText(c.name)} ${short(v.relative[i])} of its interior value`); });
  return lines;
}

export function readSection(svg, spec, at, theme) {
  const layer = svg.appendChild(element('g', { class: 'plot-tip', 'pointer-events': 'none' }));
  svg.addEventListener('pointermove', (e) => {
    const [px, py] = inDrawing(svg, at.w, e), lines = py >= at.potential[0] && py <= at.body[1] ? linesAt(spec, at, px) : null;
    layer.replaceChildren();
    if (!lines) return;
    layer.append(element('path', { d: `M${px} ${at.potential[0]}V${at.body[1]}`, stroke: theme.ink, 'stroke-dasharray': '3 2' }));
    box(layer, lines, px, py, at.w, at.height, theme);
  });
  svg.addEventListener('pointerleave', () => layer.replaceChildren());
}
