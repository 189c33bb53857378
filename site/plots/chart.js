// Charts of measured and computed curves, drawn with Observable Plot. The frame (domains,
// margins, ticks) is settled here in plain numbers; marks.js turns series into marks and
// labels.js writes what stands in and around the frame.

import * as Plot from '@observablehq/plot';
import { SANS } from './palette.js';
import { frameOf } from './frame.js';
import { axisMarks, seriesMarks } from './marks.js';
import { write } from './labels.js';

// chartSVG draws spec at w pixels in a theme; view = {x: [a, b], y: [a, b]} is a zoomed
// range or null. It returns the SVG element and the frame (for reading values back).
export function chartSVG(spec, w, theme, view = null) {
  const frame = frameOf(spec, w, view);
  const scale = (axis, range) => ({ type: axis.log ? 'log' : 'linear', domain: axis.domain, range, axis: null });
  const svg = Plot.plot({
    width: w, height: frame.height,
    marginLeft: frame.left, marginRight: w - frame.right, marginTop: frame.top, marginBottom: frame.height - frame.bottom,
    x: scale(frame.x, [frame.left, frame.right]), y: scale(frame.y, [frame.bottom, frame.top]),
    marks: [...axisMarks(frame, theme), ...seriesMarks(spec, frame, theme)],
  });
  // Plot's own style sheet is dropped: the page's style sheet rules, and the content
  // security policy admits no inline style.
  svg.querySelector('style')?.remove();
  svg.removeAttribute('style');
  const root = { class: 'chart-drawing', xmlns: 'http://www.w3.org/2000/svg', viewBox: `0 0 ${w} ${frame.height}`,
    'font-family': SANS, 'font-size': 13, fill: theme.ink, color: theme.ink, overflow: 'visible' };
  for (const k in root) svg.setAttribute(k, root[k]);
  write(svg, spec, frame, theme);
  return { svg, frame };
}
