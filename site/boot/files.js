// Files in: picked, dropped anywhere on the page, or pasted.

const maxBytes = 64 * 2 ** 20;
const maxFiles = 200;

const megabytes = (n) => `${(n / 2 ** 20).toFixed(n < 2 ** 20 ? 2 : 0)} MB`;

// read returns {name, data} or {name, error}; the size is looked at before the content.
async function read(file) {
  if (file.size > maxBytes) {
    return {name: file.name, error: `file is too large (${megabytes(file.size)}), expected at most ${megabytes(maxBytes)}`};
  }
  try {
    return {name: file.name, data: new Uint8Array(await file.arrayBuffer())};
  } catch (e) {
    return {name: file.name, error: `file cannot be read (${e?.message ?? e}), expected a readable file, not a folder`};
  }
}

async function readAll(files, callback) {
  const list = [...files];
  const results = await Promise.all(list.slice(0, maxFiles).map(read));
  for (const f of list.slice(maxFiles)) results.push({name: f.name, error: `too many files at once (${list.length}), expected at most ${maxFiles}`});
  if (results.length > 0) callback(results);
}

// pick opens the browser's file dialogue; it must be called while a click is handled.
export function pick(accept, multiple, callback) {
  const input = document.createElement("input");
  input.type = "file";
  input.accept = accept;
  input.multiple = multiple;
  input.hidden = true;
  input.className = "file-picker";
  input.addEventListener("change", () => { readAll(input.files, callback); input.remove(); });
  input.addEventListener("cancel", () => input.remove());
  document.body.append(input); // attached, or some browsers collect it before the choice is made
  input.click();
}

const hasFiles = (e) => [...(e.dataTransfer?.types ?? [])].includes("Files");
const isField = (el) => el?.closest?.("input, textarea, select, [contenteditable]");

// listenFiles reports files dropped or pasted, and text pasted outside of any field.
export function listenFiles(onFiles, onText) {
  const root = document.documentElement;
  let depth = 0; // dragenter and dragleave come once for every element passed
  const mark = (n) => { depth = Math.max(0, n); root.classList.toggle("dropping", depth > 0); };
  window.addEventListener("dragenter", (e) => { if (hasFiles(e)) { e.preventDefault(); mark(depth + 1); } });
  window.addEventListener("dragleave", (e) => { if (hasFiles(e)) mark(depth - 1); });
  window.addEventListener("dragover", (e) => { if (hasFiles(e)) { e.preventDefault(); e.dataTransfer.dropEffect = "copy"; } });
  window.addEventListener("drop", (e) => {
    if (!hasFiles(e)) return;
    e.preventDefault(); // or the browser leaves the page for the file
    mark(0);
    readAll(e.dataTransfer.files, onFiles);
  });
  window.addEventListener("paste", (e) => {
    if (isField(e.target)) return;
    const files = e.clipboardData?.files ?? [];
    const text = e.clipboardData?.getData("text/plain") ?? "";
    if (files.length > 0) { e.preventDefault(); readAll(files, onFiles); }
    else if (text.trim() !== "") { e.preventDefault(); onText(text); }
  });
}
