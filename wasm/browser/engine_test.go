package browser

import (
	"errors"
	"strings"
	"testing"
	"time"
)

// fake stands in for the workers: what the pool does is recorded, what a worker
// would say is said by the test.
type fake struct {
	e      *Engine
	links  []*fakeLink
	timers []func()
	broken error
}

type fakeLink struct {
	receive    func(message)
	calls      []int
	cancels    []int
	terminated bool
}

func (l *fakeLink) call(id int, _ string, _ []byte) { l.calls = append(l.calls, id) }
func (l *fakeLink) cancel(id int)                   { l.cancels = append(l.cancels, id) }
func (l *fakeLink) terminate()                      { l.terminated = true }

func newFake(size int) *fake {
	f := &fake{}
	f.e = &Engine{size: size, loop: func(g func()) { g() },
		start: func(receive func(message)) (link, error) {
			if f.broken != nil {
				return nil, f.broken
			}
			l := &fakeLink{receive: receive}
			f.links = append(f.links, l)
			return l, nil
		},
		after: func(d time.Duration, g func()) {
			if d != graceAfterCancel {
				panic("another delay")
			}
			f.timers = append(f.timers, g)
		}}
	return f
}

func TestEngineAnswers(t *testing.T) {
	f := newFake(2)
	var got string
	var fraction float64
	f.e.Call("t", nil, func(x float64, _ string) { fraction = x }, func(b []byte, err error) { got = string(b) })
	if len(f.links) != 1 || len(f.links[0].calls) != 0 {
		t.Fatal("a call must start one worker and wait until it is ready")
	}
	l := f.links[0]
	l.receive(message{kind: "ready"})
	l.receive(message{kind: "progress", id: 1, fraction: 0.5})
	l.receive(message{kind: "done", id: 7, payload: []byte("somebody else's")})
	l.receive(message{kind: "done", id: 1, payload: []byte("mine")})
	if got != "mine" || fraction != 0.5 || f.e.Waiting() != 0 {
		t.Errorf("got %q at %g, %d waiting", got, fraction, f.e.Waiting())
	}
}

func TestEngineQueues(t *testing.T) {
	f := newFake(2)
	for range 5 {
		f.e.Call("t", nil, nil, func([]byte, error) {})
	}
	if len(f.links) != 2 {
		t.Fatalf("%d workers, expected no more than 2", len(f.links))
	}
	f.links[0].receive(message{kind: "ready"})
	f.links[1].receive(message{kind: "ready"})
	f.links[1].receive(message{kind: "error", id: 2, text: "no"})
	if n := len(f.links[0].calls); n != 1 {
		t.Errorf("first worker got %d calls while busy", n)
	}
	if n := len(f.links[1].calls); n != 2 {
		t.Errorf("second worker got %d calls, expected the next after its first", n)
	}
	if f.e.Waiting() != 4 {
		t.Errorf("%d waiting, expected 4", f.e.Waiting())
	}
}

func TestEngineCancel(t *testing.T) {
	never := func([]byte, error) { t.Error("onDone after cancel") }
	f := newFake(1)
	stops := f.e.Call("stops by itself", nil, nil, never)
	f.links[0].receive(message{kind: "ready"})
	queued := f.e.Call("queued", nil, nil, never)
	queued()
	stops()
	stops() // twice is once
	if l := f.links[0]; len(l.cancels) != 1 {
		t.Fatalf("%d cancels sent", len(l.cancels))
	}
	f.links[0].receive(message{kind: "error", id: 1, text: "context canceled"})
	f.timers[0]()
	if f.links[0].terminated {
		t.Error("a task that stopped in time cost its worker")
	}

	goesOn := f.e.Call("goes on", nil, nil, never)
	goesOn()
	done := false
	f.e.Call("next", nil, nil, func(_ []byte, err error) { done = err == nil })
	f.timers[1]()
	if !f.links[0].terminated || len(f.links) != 2 {
		t.Fatal("a task that goes on must lose its worker, and a new one start")
	}
	f.links[0].receive(message{kind: "done", id: 3}) // late words of the dead
	f.links[1].receive(message{kind: "ready"})
	f.links[1].receive(message{kind: "done", id: 4})
	if !done {
		t.Error("the next call got no answer")
	}
}

func TestEngineWorkerDies(t *testing.T) {
	f := newFake(1)
	var got error
	f.e.Call("t", nil, nil, func(_ []byte, err error) { got = err })
	f.links[0].receive(message{kind: "ready"})
	f.links[0].receive(message{kind: "exit", text: "out of memory"})
	if got == nil || !strings.Contains(got.Error(), "out of memory") {
		t.Errorf("got %v", got)
	}
	if len(f.links) != 2 {
		t.Error("no new worker after one died")
	}
}

func TestEngineGivesUp(t *testing.T) {
	f := newFake(1)
	var got error
	f.e.Call("t", nil, nil, func(_ []byte, err error) { got = err })
	for i := 0; i < len(f.links); i++ {
		f.links[i].receive(message{kind: "exit", text: "not allowed here"})
		if i > 20 {
			t.Fatal("starts workers for ever")
		}
	}
	if len(f.links) != maxFailedStarts || got == nil {
		t.Errorf("%d starts, error %v", len(f.links), got)
	}
	f.broken, got = errors.New("no workers"), nil
	f.e.Call("t", nil, nil, func(_ []byte, err error) { got = err })
	if got == nil || !strings.Contains(got.Error(), "no workers") {
		t.Errorf("got %v", got)
	}
}
