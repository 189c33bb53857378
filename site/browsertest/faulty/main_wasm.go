package main

import (
	"syscall/js"

	"brinkfield/wasm/engine"
	"brinkfield/wasm/page"
)

func main() {
	if js.Global().Get("document").Truthy() {
		page.Run(NewRoot)
		return
	}
	engine.Main()
}
