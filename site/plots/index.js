// window.brinkfieldPlots: every drawing of the page.
//   draw(el, kind, spec)  kind 'chart', 'section' or 'spark'; calling it again replaces the drawing
//   svg(el)               the drawing as a standalone SVG text
//   png(el)               the same as a Promise of a PNG blob at twice the size
// Clicking a measured point sends 'plotpick' from el, detail {series, index, x, y, shift}.
// The meaning of each field of a spec is written in README.md beside this file.

import { draw, start } from './stage.js';
import { png, svg } from './export.js';

start();
window.brinkfieldPlots = { draw, svg, png };
