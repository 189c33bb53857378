package browser

import (
	"errors"
	"fmt"
	"slices"
	"sync"
	"time"
)

const (
	// graceAfterCancel is how long a cancelled task may take to stop by itself
	// before its worker is ended; starting another costs 30–80 ms.
	graceAfterCancel = 300 * time.Millisecond
	// maxFailedStarts ends the attempts when workers die before they are ready.
	maxFailedStarts = 3
)

// link is the page's end of one worker.
type link interface {
	call(id int, task string, payload []byte)
	cancel(id int)
	terminate()
}

// message is what a worker says.
type message struct {
	kind     string // "ready", "progress", "done", "error", "exit"
	id       int
	fraction float64
	text     string
	payload  []byte
}

// Engine is a pool of workers that run engine tasks. A call waits in a queue
// until a worker is free; one worker runs one call at a time. Workers that die
// fail their call and are replaced.
type Engine struct {
	loop  Loop
	start func(receive func(message)) (link, error)
	after func(time.Duration, func())

	mu      sync.Mutex
	size    int
	lastID  int
	queue   []*call
	workers []*worker
	failed  int // starts in a row that never became ready
}

type call struct {
	id         int
	task       string
	payload    []byte
	onProgress func(float64, string)
	onDone     func([]byte, error)
	cancelled  bool
}

type worker struct {
	link  link
	ready bool
	ended bool
	busy  *call
}

// Call asks the engine to run a task. onProgress (may be nil) and onDone run on
// the page's loop; onDone exactly once, unless the call is cancelled: then
// neither is called any more. The payload must not be changed afterwards.
func (e *Engine) Call(task string, payload []byte, onProgress func(fraction float64, what string), onDone func(result []byte, err error)) (cancel func()) {
	e.mu.Lock()
	defer e.mu.Unlock()
	e.lastID++
	c := &call{id: e.lastID, task: task, payload: payload, onProgress: onProgress, onDone: onDone}
	e.queue = append(e.queue, c)
	e.failed = min(e.failed, maxFailedStarts-1) // a new call earns one more attempt
	e.dispatch()
	return func() { e.cancel(c) }
}

// Warm starts one worker ahead of the first call.
func (e *Engine) Warm() {
	e.mu.Lock()
	defer e.mu.Unlock()
	if len(e.workers) == 0 {
		e.addWorker()
	}
}

// Waiting is the number of calls without an answer.
func (e *Engine) Waiting() int {
	e.mu.Lock()
	defer e.mu.Unlock()
	n := len(e.queue)
	for _, w := range e.workers {
		if w.busy != nil && !w.busy.cancelled {
			n++
		}
	}
	return n
}

func (e *Engine) cancel(c *call) {
	e.mu.Lock()
	defer e.mu.Unlock()
	if c.cancelled {
		return
	}
	c.cancelled = true
	if i := slices.Index(e.queue, c); i >= 0 {
		e.queue = slices.Delete(e.queue, i, i+1)
		return
	}
	for _, w := range e.workers {
		if w.busy == c {
			w.link.cancel(c.id)
			e.after(graceAfterCancel, func() { e.endIfStill(w, c) })
		}
	}
}

// endIfStill replaces a worker whose cancelled call goes on.
func (e *Engine) endIfStill(w *worker, c *call) {
	e.mu.Lock()
	defer e.mu.Unlock()
	if w.ended || w.busy != c {
		return
	}
	w.link.terminate()
	e.drop(w)
	e.addWorker()
	e.dispatch()
}

// dispatch gives waiting calls to free workers and starts workers for the rest.
func (e *Engine) dispatch() {
	starting := 0
	for _, w := range e.workers {
		switch {
		case !w.ready:
			starting++
		case w.busy == nil && len(e.queue) > 0:
			c := e.queue[0]
			e.queue = e.queue[1:]
			w.busy = c
			w.link.call(c.id, c.task, c.payload)
			c.payload = nil
		}
	}
	for ; starting < len(e.queue) && len(e.workers) < e.size; starting++ {
		if !e.addWorker() {
			return
		}
	}
}

// addWorker starts a worker; it fails all waiting calls when that has become hopeless.
func (e *Engine) addWorker() bool {
	w := &worker{}
	l, err := e.start(func(m message) { e.receive(w, m) })
	if err != nil {
		e.failed = maxFailedStarts
		e.failQueue(err.Error())
		return false
	}
	w.link = l
	e.workers = append(e.workers, w)
	return true
}

func (e *Engine) drop(w *worker) {
	w.ended = true
	if i := slices.Index(e.workers, w); i >= 0 {
		e.workers = slices.Delete(e.workers, i, i+1)
	}
}

func (e *Engine) receive(w *worker, m message) {
	e.mu.Lock()
	defer e.mu.Unlock()
	if w.ended {
		return
	}
	switch m.kind {
	case "ready":
		w.ready, e.failed = true, 0
	case "progress":
		if c := w.busy; c != nil && c.id == m.id && c.onProgress != nil {
			e.tell(c, func() { c.onProgress(m.fraction, m.text) })
		}
	case "done":
		e.answer(w, m, nil)
	case "error":
		e.answer(w, m, errors.New(m.text))
	case "exit":
		e.exited(w, m.text)
	}
	e.dispatch()
}

// answer hands over the result of the call a worker was busy with.
func (e *Engine) answer(w *worker, m message, err error) {
	c := w.busy
	if c == nil || c.id != m.id {
		return
	}
	w.busy = nil
	e.tell(c, func() { c.onDone(m.payload, err) })
}

// exited fails the call of a worker that died, and replaces the worker.
func (e *Engine) exited(w *worker, reason string) {
	e.drop(w)
	w.link.terminate()
	if c := w.busy; c != nil {
		e.tell(c, func() { c.onDone(nil, fmt.Errorf("engine: task %s was lost (%s), try it again", c.task, reason)) })
	}
	if !w.ready {
		e.failed++
	}
	if e.failed >= maxFailedStarts {
		e.failQueue(reason)
		return
	}
	if len(e.workers) == 0 {
		e.addWorker()
	}
}

func (e *Engine) failQueue(reason string) {
	for _, c := range e.queue {
		e.tell(c, func() {
			c.onDone(nil, fmt.Errorf("engine: no worker can be started (%s), expected a browser with Web Workers", reason))
		})
	}
	e.queue = nil
}

// tell runs f on the page's loop unless the call was cancelled by then.
func (e *Engine) tell(c *call, f func()) {
	if c.cancelled {
		return
	}
	e.loop(func() {
		if !c.cancelled {
			f()
		}
	})
}
