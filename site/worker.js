// The engine's end: starts the program where no document exists. The build puts
// Go's support script in front of this text.

let words = "";
const write = globalThis.fs.writeSync;
globalThis.fs.writeSync = function (fd, buffer) {
  words = (words + new TextDecoder().decode(buffer)).slice(-4000);
  return write.call(this, fd, buffer);
};

function exit(reason) {
  const line = /^(panic|fatal error|runtime):? .*$/m.exec(words)?.[0];
  postMessage({kind: "exit", message: line ?? reason});
}

// The first message brings the compiled module; the program takes over onmessage.
globalThis.onmessage = async ({data}) => {
  try {
    const go = new Go();
    const instance = await WebAssembly.instantiate(data.module, go.importObject);
    await go.run(instance);
    exit("the engine ended");
  } catch (e) {
    exit(String(e?.message ?? e));
  }
};
