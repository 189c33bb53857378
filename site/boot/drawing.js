// The bridge to the plots (site/plots, window.brinkfieldPlots).
import {report} from "./banner.js";
import {downloadBlob} from "./output.js";

const decoder = new TextDecoder();

// Each drawing lives in a holder of its own inside the element the program knows.
// vugu empties elements that look static to it and takes away classes it did not
// set; the holder is then put back, drawing and all.
const holders = new Map(); // id → holder

function place(id, holder) {
  const el = document.getElementById(id);
  if (el && (holder.parentNode !== el || el.childNodes.length !== 1)) el.replaceChildren(holder);
  return Boolean(el);
}

// keepDrawings is called after each render.
export function keepDrawings() { holders.forEach((holder, id) => place(id, holder)); }

function holderOf(id) {
  let holder = holders.get(id);
  if (!holder) {
    holder = document.createElement("div");
    holder.brinkfieldPlot = id;
    holders.set(id, holder);
  }
  return holder;
}

// draw returns false when no element of that id stands on the page.
export function draw(id, kind, bytes) {
  const holder = holderOf(id);
  if (!place(id, holder)) return false;
  try {
    window.brinkfieldPlots.draw(holder, kind, JSON.parse(decoder.decode(bytes)));
  } catch (e) {
    console.warn(e);
    report(`plot ${id} cannot be drawn (${e?.message ?? e})`);
  }
  return true;
}

export async function savePlot(id, format, name) {
  try {
    const holder = holders.get(id);
    if (!holder) throw new Error("it has not been drawn");
    const blob = format === "png"
      ? await window.brinkfieldPlots.png(holder)
      : new Blob([window.brinkfieldPlots.svg(holder)], {type: "image/svg+xml"});
    downloadBlob(name, blob);
  } catch (e) {
    console.warn(e);
    report(`plot ${id} cannot be saved as ${format} (${e?.message ?? e})`);
  }
}

// listenPicks reports clicks on points as JSON. The event does not bubble, so it is caught on its way down.
export function listenPicks(callback) {
  document.addEventListener("plotpick", (e) => callback(e.target.brinkfieldPlot ?? e.target.id, JSON.stringify(e.detail ?? {})), true);
}
