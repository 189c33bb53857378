// Keys that browsers use for what the page does better itself: it prints every
// station, saves the case, and undoes edits across fields.

const control = { p: "print", s: "save", z: "undo", y: "redo", o: "open" };

export function listenKeys() {
  document.addEventListener("keydown", (e) => {
    if (!(e.ctrlKey || e.metaKey) || e.altKey) return;
    const key = e.key.toLowerCase();
    const id = key === "z" && e.shiftKey ? "redo" : control[key];
    const button = id && document.getElementById(id);
    if (!button || e.target.matches?.("textarea")) return;
    e.preventDefault();
    button.click();
  });
}
