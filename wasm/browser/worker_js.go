package browser

import (
	"fmt"
	"syscall/js"
	"time"
)

// poolSize: one worker for the answer to the last edit, one for long work beside it.
const poolSize = 2

// NewEngine returns a pool of Web Workers; the first starts at once.
func (b *Browser) NewEngine() *Engine {
	e := &Engine{loop: b.loop, size: poolSize, start: startWorker,
		after: func(d time.Duration, f func()) { time.AfterFunc(d, f) }}
	e.Warm()
	return e
}

// workerLink is a Web Worker; engine.Main states the messages.
type workerLink struct{ w js.Value }

func startWorker(receive func(message)) (l link, err error) {
	defer func() {
		if v := recover(); v != nil {
			err = fmt.Errorf("%v", v)
		}
	}()
	w := glue().Call("newWorker")
	glue().Call("listen", w, js.FuncOf(func(_ js.Value, args []js.Value) any {
		m := decode(args[0].Get("data"))
		go receive(m)
		return nil
	}), js.FuncOf(func(_ js.Value, args []js.Value) any {
		args[0].Call("preventDefault")
		m := message{kind: "exit", text: text(args[0].Get("message"))}
		go receive(m)
		return nil
	}))
	return &workerLink{w}, nil
}

func decode(v js.Value) message {
	m := message{kind: text(v.Get("kind")), text: text(v.Get("what")) + text(v.Get("message"))}
	if id := v.Get("id"); id.Type() == js.TypeNumber {
		m.id = id.Int()
	}
	if f := v.Get("fraction"); f.Type() == js.TypeNumber {
		m.fraction = f.Float()
	}
	if p := v.Get("payload"); p.Truthy() {
		m.payload = bytesOf(p)
	}
	return m
}

func (l *workerLink) call(id int, task string, payload []byte) {
	array := arrayOf(payload)
	m := map[string]any{"kind": "call", "id": id, "task": task, "payload": array}
	l.w.Call("postMessage", m, []any{array.Get("buffer")})
}

func (l *workerLink) cancel(id int) {
	l.w.Call("postMessage", map[string]any{"kind": "cancel", "id": id})
}

func (l *workerLink) terminate() {
	l.w.Set("onmessage", js.Null())
	l.w.Call("terminate")
}
