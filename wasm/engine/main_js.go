package engine

import (
	"errors"
	"syscall/js"
)

// Main serves requests in a Web Worker and never returns.
//
// Messages in: {kind: "call", id, task, payload: Uint8Array}, {kind: "cancel", id}.
// Messages out: {kind: "ready"}, {kind: "progress", id, fraction, what},
// {kind: "done", id, payload: Uint8Array}, {kind: "error", id, message}.
// Payloads are transferred, not copied, so the sender loses them.
func Main() {
	s := &Server{
		Report: func(id int, fraction float64, what string) {
			post(map[string]any{"kind": "progress", "id": id, "fraction": fraction, "what": what})
		},
		Done:  postResult,
		Fail:  postError,
		Yield: yielder(),
	}
	js.Global().Set("onmessage", js.FuncOf(func(_ js.Value, args []js.Value) any {
		receive(s, args[0].Get("data"))
		return nil
	}))
	post(map[string]any{"kind": "ready"})
	select {}
}

func receive(s *Server, m js.Value) {
	id := m.Get("id").Int()
	switch m.Get("kind").String() {
	case "call":
		array := m.Get("payload")
		payload := make([]byte, array.Length())
		js.CopyBytesToGo(payload, array)
		s.Start(id, m.Get("task").String(), payload)
	case "cancel":
		s.Cancel(id)
	}
}

func post(m map[string]any) { js.Global().Call("postMessage", m) }

func postResult(id int, result []byte) {
	array := js.Global().Get("Uint8Array").New(len(result))
	js.CopyBytesToJS(array, result)
	m := map[string]any{"kind": "done", "id": id, "payload": array}
	js.Global().Call("postMessage", m, []any{array.Get("buffer")})
}

func postError(id int, err error) {
	var inside *PanicError
	if errors.As(err, &inside) {
		js.Global().Get("console").Call("warn", string(inside.Stack))
	}
	post(map[string]any{"kind": "error", "id": id, "message": err.Error()})
}

// yielder returns a function that gives the worker's event loop one turn. A
// message channel takes part of a millisecond, where a timer is clamped to four.
func yielder() func() {
	channel := js.Global().Get("MessageChannel").New()
	turn := make(chan struct{}, 1)
	channel.Get("port1").Set("onmessage", js.FuncOf(func(js.Value, []js.Value) any {
		select {
		case turn <- struct{}{}:
		default:
		}
		return nil
	}))
	port := channel.Get("port2")
	return func() {
		port.Call("postMessage", nil)
		<-turn
	}
}
