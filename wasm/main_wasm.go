// Command brinkfield is the whole program of the page, compiled to WebAssembly.
//
// One binary has two lives: where a document exists it is the page; in a Web
// Worker, where none does, it is the engine that calculates for the page.
package main

import (
	"syscall/js"

	"brinkfield/wasm/engine"
	"brinkfield/wasm/page"
)

func main() {
	if js.Global().Get("document").Truthy() {
		page.Main()
		return
	}
	engine.Main()
}
