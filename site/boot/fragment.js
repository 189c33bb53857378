// The address bar: parameters stand behind "#", which no browser sends to a host.

const quiet = 350; // ms without a change before writing; Chromium drops rapid replaceState calls

let pending = null;
let timer = 0;
let written = location.hash.slice(1);

// startFragment returns the parameters the page was opened with. Those behind "?"
// are moved behind "#", in front of those already there.
export function startFragment() {
  const query = location.search.slice(1);
  if (!query) return written;
  written = written ? `${query}&${written}` : query;
  write();
  return written;
}

// shown is how the address bar shows a text behind "#".
function shown(text) { return new URL(`#${text}`, location.href).hash; }

function write(again = true) {
  const text = written;
  // Chromium may drop the change without a word: look again, and write again.
  if (again) setTimeout(() => { if (pending === null && written === text && location.hash !== shown(text)) write(false); }, 1000);
  try {
    history.replaceState(null, "", `${location.pathname}#${written}`);
  } catch {
    // Some browsers keep the search part of a file's address; the fragment can always be set.
    try { location.replace(`#${written}`); } catch { /* too long for this browser: the page goes on without */ }
  }
}

// replaceFragment writes text behind "#" once edits have paused.
export function replaceFragment(text) {
  pending = text;
  clearTimeout(timer);
  timer = setTimeout(flushFragment, quiet);
}

export function flushFragment() {
  clearTimeout(timer);
  if (pending === null) return;
  const text = pending;
  pending = null;
  if (text === written) return;
  written = text;
  write();
}

// onFragment calls back when a person pastes another link into this tab.
export function onFragment(callback) {
  window.addEventListener("hashchange", () => {
    const now = location.hash.slice(1);
    if (now === written) return;
    written = now;
    pending = null;
    callback(now);
  });
}

window.addEventListener("pagehide", flushFragment);
document.addEventListener("visibilitychange", () => { if (document.hidden) flushFragment(); });
