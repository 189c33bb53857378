// Guards around vugu's renderer: no eval, and no event may enter the program
// while it renders or handles another one, which would deadlock it.

let rendering = false;
let handling = 0;

// hold and release bracket work the program does of its own accord (an answer of
// the engine, a file that was dropped): events fired meanwhile wait.
export function hold() { handling++; }
export function release() { handling = Math.max(0, handling - 1); }

// listening tells whether the element an event came from is still listened to.
// The renderer ends the program when it finds no handler for an event, which
// happens to events delivered late. The event's address stands at the head of its JSON.
const address = /^\{"position_id":"([^"]*)","event_type":"([^"]*)","capture":(true|false),"passive":(true|false)/;
const decoder = new TextDecoder();

function listening(event) {
  const head = decoder.decode(event.subarray(4, 1028));
  const m = address.exec(head);
  if (!m) return true;
  const key = `${m[2]}|${m[3] === "true" ? 1 : 0}|${m[4] === "true" ? 1 : 0}`;
  return Boolean(window.vuguState?.eventHandlerMap?.[m[1]]?.[key]);
}

export function guardRenderer() {
  // The helper text is loaded as a script of its own; vugu would evaluate it again.
  window.eval = () => {};
  const render = window.vuguRender;
  const setHandler = window.vuguSetEventHandler;
  window.vuguRender = () => {
    rendering = true;
    try { return render.call(window); } finally { rendering = false; }
  };
  window.vuguSetEventHandler = (handler) => setHandler(function deliver(event) {
    if (rendering) return; // e.g. blur of an input that is being removed
    if (handling > 0) { // e.g. focus() inside a handler: deliver afterwards
      const copy = event.slice();
      setTimeout(() => deliver(copy));
      return;
    }
    if (!listening(event)) return;
    handling++;
    try { handler.call(null, event); } finally { handling--; }
  });
}
