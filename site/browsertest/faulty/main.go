//go:build !js

package main

func main() { panic("faulty is a page: build it with GOOS=js GOARCH=wasm") }
