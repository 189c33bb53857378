// Loads the program, starts it on the page, and starts copies of it in workers.
// Everything is in memory afterwards: a worker that is restarted asks nobody.
import {fatal} from "./banner.js";

let module = null;
let workerURL = "";
let first = null; // a worker that starts while the page does

// part returns what the page carries inside (the single file) or beside it (hosted).
function part(id) {
  const el = document.getElementById(id);
  return el.dataset.href ? fetch(el.dataset.href).then(found) : new Response(embedded(el));
}

function found(response) {
  if (!response.ok) throw new Error(`a part of the page is missing (${response.status} ${response.url})`);
  return response;
}

function embedded(el) {
  const text = el.textContent.trim();
  el.remove(); // megabytes that nobody reads again
  if (el.dataset.coding !== "base64") return text;
  if (Uint8Array.fromBase64) return Uint8Array.fromBase64(text);
  const binary = atob(text);
  const bytes = new Uint8Array(binary.length);
  for (let i = 0; i < bytes.length; i++) bytes[i] = binary.charCodeAt(i);
  return bytes;
}

async function compile() {
  const packed = (await part("program")).body;
  const stream = packed.pipeThrough(new DecompressionStream("gzip"));
  return WebAssembly.compileStreaming(new Response(stream, {headers: {"Content-Type": "application/wasm"}}));
}

// lastWords keeps what the program printed last, which for a crash is the reason.
function lastWords() {
  let text = "";
  const write = globalThis.fs.writeSync;
  globalThis.fs.writeSync = function (fd, buffer) {
    text = (text + new TextDecoder().decode(buffer)).slice(-4000);
    return write.call(this, fd, buffer);
  };
  return () => /^(panic|fatal error|runtime):? .*$/m.exec(text)?.[0] ?? "";
}

export async function startProgram() {
  const worker = part("worker");
  module = await compile();
  workerURL = URL.createObjectURL(new Blob([await (await worker).text()], {type: "text/javascript"}));
  first = newWorker();
  const words = lastWords();
  const go = new Go();
  const instance = await WebAssembly.instantiate(module, go.importObject);
  performance.mark("brinkfield-start");
  await go.run(instance);
  fatal(`The program ended and cannot go on. ${words()}`.trim());
}

function launch() {
  const w = new Worker(workerURL);
  w.postMessage({module});
  return w;
}

// newWorker starts a worker; the compiled module is handed over, not compiled again.
// What the worker says before listen is kept.
export function newWorker() {
  const w = first ?? launch();
  first = null;
  w.early ??= [];
  w.onmessage ??= ({data}) => w.early.push(data);
  return w;
}

export function listen(worker, onmessage, onerror) {
  worker.onmessage = onmessage;
  worker.onerror = onerror;
  for (const data of worker.early) onmessage({data});
  worker.early = [];
}
