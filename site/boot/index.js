// Everything the page needs before and around the program: one idea per module.
// The program sees them as window.brinkfield (used by wasm/browser only).
import {guardRenderer, hold, release} from "./guards.js";
import {report, fatal} from "./banner.js";
import {startFragment, replaceFragment, onFragment} from "./fragment.js";
import {pick, listenFiles} from "./files.js";
import {download, copyText} from "./output.js";
import {draw, keepDrawings, savePlot, listenPicks} from "./drawing.js";
import {theme, setTheme, onTheme} from "./theme.js";
import {offlineState, onOffline, startOffline} from "./offline.js";
import {nextFrame, focusSoon, reveal} from "./frames.js";
import {listenKeys} from "./keys.js";
import {listenVary} from "./vary.js";
import {startProgram, newWorker, listen} from "./program.js";

window.brinkfield = {
  hold, release, report, fatal,
  startFragment, replaceFragment, onFragment,
  pick, listenFiles, download, copyText,
  draw, keepDrawings, savePlot, listenPicks,
  theme, setTheme, onTheme, offlineState, onOffline,
  nextFrame, focusSoon, reveal, newWorker, listen,
};

window.addEventListener("error", (e) => {
  // The browser's own remark about a resize that took two rounds is no error.
  if (!String(e.message).startsWith("ResizeObserver loop")) report(e.message || "a part of the page failed");
});
window.addEventListener("unhandledrejection", (e) => report(String(e.reason?.message ?? e.reason)));

guardRenderer();
listenKeys();
listenVary();
startProgram().catch((e) => fatal(`The program could not start: ${e?.message ?? e}`));
startOffline();
