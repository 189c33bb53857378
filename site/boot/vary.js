// Varying a value without typing: dragging a field's name sideways, or the arrow
// keys in the field. The program sees what it would see of typing.

const leading = /^\s*([+\-−]?)((?:\d+[.,]?\d*|[.,]\d+)(?:[eE][+-]?\d+)?)/;

// varied multiplies the number a text begins with and keeps the rest: unit, sign,
// decimal mark. Three digits are enough to drag with. Whole numbers without a unit
// (charges) and texts without a number are left alone: null.
export function varied(text, factor) {
  const found = leading.exec(text);
  if (!found) return null;
  const rest = text.slice(found[0].length);
  const value = Number(found[2].replace(",", "."));
  if (!(value > 0) || !Number.isFinite(value)) return null;
  const comma = found[2].includes(",");
  let number = String(Number((value * factor).toPrecision(3)));
  if (comma) number = number.replace(".", ",");
  return found[1] + number + rest;
}

function enter(input, text) {
  if (text === null || text === input.value) return;
  input.value = text;
  input.dispatchEvent(new Event("input", {bubbles: true}));
}

const pixelsPerE = 160; // dragging this far multiplies by e

function startDrag(down) {
  const label = down.target.closest?.("label[data-drag]");
  const input = label && document.getElementById(label.dataset.drag);
  if (!input || down.button !== 0 || varied(input.value, 1) === null) return;
  const from = input.value;
  let dragged = false;
  const move = (e) => {
    const dx = e.clientX - down.clientX;
    if (!dragged && Math.abs(dx) < 4) return;
    dragged = true;
    document.documentElement.classList.add("varying");
    enter(input, varied(from, Math.exp(dx / pixelsPerE)));
  };
  const end = () => {
    document.documentElement.classList.remove("varying");
    window.removeEventListener("pointermove", move);
    window.removeEventListener("pointerup", end);
    window.removeEventListener("pointercancel", end);
    // a drag is no click: the label must not move the focus
    if (dragged) window.addEventListener("click", (e) => e.preventDefault(), {capture: true, once: true});
  };
  window.addEventListener("pointermove", move);
  window.addEventListener("pointerup", end);
  window.addEventListener("pointercancel", end);
}

function arrow(e) {
  const up = e.key === "ArrowUp", down = e.key === "ArrowDown";
  const input = e.target;
  if ((!up && !down) || e.ctrlKey || e.metaKey || e.altKey) return;
  if (!input.matches?.(".entry input") || !document.querySelector(`label[data-drag="${CSS.escape(input.id)}"]`)) return;
  const step = e.shiftKey ? 1.25 : 1.02;
  const text = varied(input.value, up ? step : 1 / step);
  if (text === null) return;
  e.preventDefault();
  enter(input, text);
}

export function listenVary() {
  document.addEventListener("pointerdown", startDrag);
  document.addEventListener("keydown", arrow);
}
