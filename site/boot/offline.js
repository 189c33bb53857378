// Whether the page would open again without a network.
//   file     one file: always
//   ready    the offline worker keeps a complete copy
//   loading  it is fetching one
//   none     this browser or this address does not allow it

const single = document.documentElement.dataset.packaging === "file";
const listeners = [];
let state = single ? "file" : "loading";

export const offlineState = () => state;
export function onOffline(f) { listeners.push(f); }

function become(next) {
  if (next === state) return;
  state = next;
  for (const f of listeners) f(state);
}

export async function startOffline() {
  if (single) return;
  if (!navigator.serviceWorker) return become("none");
  try {
    await navigator.serviceWorker.register("offline-worker.js");
    await navigator.serviceWorker.ready;
    become("ready");
  } catch {
    become("none");
  }
}
