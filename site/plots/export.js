// Drawings as files: the same drawing again in the light theme on white, with every style as
// an attribute, so that it opens alike in a browser, an editor or a text processor.

import { THEMES } from './palette.js';
import { actOf, render } from './stage.js';

const WIDTH = 720; // px, of a drawing that is not on screen

function paper(el) {
  const act = actOf(el);
  if (!act) throw new Error('plots: nothing drawn here, expected an element given to draw');
  const { svg } = render(act.kind, act.spec, act.width || WIDTH, THEMES.white, act.view);
  const [, , w, h] = svg.getAttribute('viewBox').split(' ').map(Number);
  svg.setAttribute('width', w);
  svg.setAttribute('height', h);
  svg.querySelectorAll('.plot-tip').forEach((g) => g.remove());
  const sheet = document.createElementNS('http://www.w3.org/2000/svg', 'rect');
  for (const [k, v] of Object.entries({ width: w, height: h, fill: '#ffffff', stroke: 'none' })) sheet.setAttribute(k, v);
  const title = svg.querySelector('title');
  title ? title.after(sheet) : svg.prepend(sheet);
  return { text: new XMLSerializer().serializeToString(svg), w, h };
}

// svg gives the drawing in el as a standalone SVG document.
export function svg(el) {
  return `<?xml version="1.0" encoding="UTF-8"?>\n${paper(el).text}\n`;
}

// png gives the drawing in el as an image of twice its size in pixels. A data: URL is used:
// a blob: URL would taint the canvas when the page is opened from a file.
export async function png(el) {
  const { text, w, h } = paper(el);
  const image = new Image();
  image.src = `data:image/svg+xml;charset=utf-8,${encodeURIComponent(text)}`;
  await image.decode();
  const canvas = document.createElement('canvas');
  canvas.width = 2 * w;
  canvas.height = 2 * h;
  canvas.getContext('2d').drawImage(image, 0, 0, canvas.width, canvas.height);
  return new Promise((resolve, reject) => {
    canvas.toBlob((blob) => (blob ? resolve(blob) : reject(new Error('plots: the browser made no image'))), 'image/png');
  });
}
