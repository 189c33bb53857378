package engine

import (
	"context"
	"errors"
	"strings"
	"sync"
	"testing"
	"time"
)

func init() {
	Register("test/echo", func(_ context.Context, in []byte, progress func(float64, string)) ([]byte, error) {
		progress(1, "echo")
		return append([]byte("<"), in...), nil
	})
	Register("test/panic", func(context.Context, []byte, func(float64, string)) ([]byte, error) {
		panic("broken on purpose")
	})
	Register("test/wait", func(ctx context.Context, _ []byte, progress func(float64, string)) ([]byte, error) {
		progress(0, "waiting")
		<-ctx.Done()
		return nil, ctx.Err()
	})
	Register("test/count", func(_ context.Context, _ []byte, progress func(float64, string)) ([]byte, error) {
		for i := range 10000 {
			progress(float64(i)/10000, "counting")
		}
		progress(7, "beyond the end")
		return nil, nil
	})
}

func TestRun(t *testing.T) {
	ctx := context.Background()
	out, err := Run(ctx, "test/echo", []byte("a"), nil)
	if err != nil || string(out) != "<a" {
		t.Fatalf("echo: %q, %v", out, err)
	}
	if _, err = Run(ctx, "no such task", nil, nil); err == nil || !strings.Contains(err.Error(), "unknown task (no such task)") {
		t.Errorf("unknown task: %v", err)
	}
	var inside *PanicError
	if _, err = Run(ctx, "test/panic", nil, nil); !errors.As(err, &inside) || inside.Value != "broken on purpose" || len(inside.Stack) == 0 {
		t.Errorf("panic: %v", err)
	}
}

func TestRegisterTwice(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("no panic for a name registered twice")
		}
	}()
	Register("test/echo", func(context.Context, []byte, func(float64, string)) ([]byte, error) { return nil, nil })
}

// answers collects what a server sends.
type answers struct {
	mu       sync.Mutex
	progress []float64
	done     chan []byte
	fail     chan error
}

func newServer() (*Server, *answers) {
	a := &answers{done: make(chan []byte, 9), fail: make(chan error, 9)}
	return &Server{
		Report: func(_ int, f float64, _ string) { a.mu.Lock(); a.progress = append(a.progress, f); a.mu.Unlock() },
		Done:   func(_ int, r []byte) { a.done <- r },
		Fail:   func(_ int, err error) { a.fail <- err },
	}, a
}

func TestServerSurvivesPanic(t *testing.T) {
	s, a := newServer()
	s.Start(1, "test/panic", nil)
	if err := <-a.fail; !strings.Contains(err.Error(), "broken on purpose") {
		t.Errorf("got %v", err)
	}
	s.Start(2, "test/echo", []byte("still here"))
	if r := <-a.done; string(r) != "<still here" {
		t.Errorf("got %q", r)
	}
}

func TestServerCancel(t *testing.T) {
	s, a := newServer()
	s.Start(1, "test/wait", nil)
	s.Cancel(1)
	s.Cancel(99) // never started: ignored
	select {
	case err := <-a.fail:
		if !errors.Is(err, context.Canceled) {
			t.Errorf("got %v", err)
		}
	case <-time.After(5 * time.Second):
		t.Fatal("a cancelled task went on")
	}
	if len(s.running) != 0 {
		t.Errorf("%d requests left behind", len(s.running))
	}
}

func TestProgressIsThinned(t *testing.T) {
	s, a := newServer()
	s.Start(1, "test/count", nil)
	<-a.done
	n := len(a.progress)
	if n < 2 || n > 1000 {
		t.Errorf("%d reports for 10001 calls, expected a few", n)
	}
	if a.progress[0] != 0 || a.progress[n-1] != 1 {
		t.Errorf("first %g, last %g, expected 0 and 1", a.progress[0], a.progress[n-1])
	}
}
