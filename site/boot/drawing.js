// The bridge to the plots (site/plots, window.brinkfieldPlots).
import {report} from "./banner.js";
import {downloadBlob} from "./output.js";

const decoder = new TextDecoder();

// draw returns false when no element of that id stands on the page.
export function draw(id, kind, bytes) {
  const el = document.getElementById(id);
  if (!el) return false;
  // vugu may reuse an element for another plot: the old drawing must not shine through.
  if (el.brinkfieldPlot !== id) { el.replaceChildren(); el.brinkfieldPlot = id; }
  try {
    window.brinkfieldPlots.draw(el, kind, JSON.parse(decoder.decode(bytes)));
  } catch (e) {
    console.warn(e);
    report(`plot ${id} cannot be drawn (${e?.message ?? e})`);
  }
  return true;
}

export async function savePlot(id, format, name) {
  try {
    const el = document.getElementById(id);
    if (!el) throw new Error("it is not on the page");
    const blob = format === "png"
      ? await window.brinkfieldPlots.png(el)
      : new Blob([window.brinkfieldPlots.svg(el)], {type: "image/svg+xml"});
    downloadBlob(name, blob);
  } catch (e) {
    console.warn(e);
    report(`plot ${id} cannot be saved as ${format} (${e?.message ?? e})`);
  }
}

// listenPicks reports clicks on points as JSON. The event does not bubble, so it is caught on its way down.
export function listenPicks(callback) {
  document.addEventListener("plotpick", (e) => callback(e.target.id, JSON.stringify(e.detail ?? {})), true);
}
