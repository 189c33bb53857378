// Light or dark: the person's choice if there is one, else the system's.

const key = "brinkfield-theme";
const system = window.matchMedia("(prefers-color-scheme: dark)");
const listeners = [];

// Storage may be forbidden (a page opened from a file, private windows): then the choice lasts for this visit.
let chosen = "";
try { chosen = localStorage.getItem(key) ?? ""; } catch { /* no storage */ }

export function theme() {
  return chosen === "light" || chosen === "dark" ? chosen : system.matches ? "dark" : "light";
}

function apply() {
  document.documentElement.dataset.theme = theme();
  for (const f of listeners) f(theme());
}

// setTheme takes "light", "dark", or "" for the system's.
export function setTheme(name) {
  chosen = name;
  try { if (name) localStorage.setItem(key, name); else localStorage.removeItem(key); } catch { /* no storage */ }
  apply();
}

export function onTheme(f) { listeners.push(f); }

system.addEventListener("change", apply);
apply();
