// What leaves the page: files to the download folder, text to the clipboard.

export function download(name, mime, data) {
  downloadBlob(name, new Blob([data], {type: mime}));
}

export function downloadBlob(name, blob) {
  const url = URL.createObjectURL(blob);
  const a = document.createElement("a");
  a.href = url;
  a.download = name;
  a.click();
  setTimeout(() => URL.revokeObjectURL(url), 60_000);
}

// copyText calls back with an empty string, or with the reason it failed.
export async function copyText(text, callback) {
  try {
    await navigator.clipboard.writeText(text);
    callback("");
  } catch (e) {
    callback(copyByHand(text) ? "" : `the browser does not allow copying (${e?.message ?? e})`);
  }
}

// copyByHand is the old way, for pages without clipboard rights.
function copyByHand(text) {
  const area = document.createElement("textarea");
  const before = document.activeElement;
  area.value = text;
  area.className = "file-picker";
  document.body.append(area);
  area.select();
  try { return document.execCommand("copy"); } catch { return false; } finally { area.remove(); before?.focus?.(); }
}
