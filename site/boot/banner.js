// The banner says what went wrong without taking the page away.
import {flushFragment} from "./fragment.js";

let ended = false;

function button(label, onclick) {
  const b = document.createElement("button");
  b.type = "button";
  b.className = "btn";
  b.textContent = label;
  b.addEventListener("click", onclick);
  return b;
}

function show(message, fatal, ...buttons) {
  const banner = document.getElementById("banner");
  const text = document.createElement("p");
  text.textContent = message;
  banner.classList.toggle("fatal", fatal);
  banner.replaceChildren(text, ...buttons);
  banner.hidden = false;
}

// report shows a mistake of the program; the page goes on.
export function report(message) {
  console.warn(message);
  if (ended) return;
  const banner = document.getElementById("banner");
  show(message, false, button("Dismiss", () => { banner.hidden = true; }));
}

// fatal is the last resort: the program has ended. The address bar still holds the inputs.
export function fatal(message) {
  console.warn(message);
  if (ended) return;
  ended = true;
  document.documentElement.classList.add("ended");
  flushFragment();
  show(message, true,
    button("Reload with these inputs", () => location.reload()),
    button("Start afresh", () => { history.replaceState(null, "", "#"); location.reload(); }));
}
