package engine

import (
	"context"
	"sync"
	"time"
)

// reportEvery thins progress reports: a person sees no more than that, and each
// costs a message between the two threads.
const reportEvery = 40 * time.Millisecond

// Server keeps the requests that are running. Its three functions carry answers
// away; they are called from the goroutine of the request.
type Server struct {
	Report func(id int, fraction float64, what string) // progress of a request
	Done   func(id int, result []byte)                 // its result, once
	Fail   func(id int, err error)                     // or its error, once
	Yield  func()                                      // lets messages in while a task runs; nil: nothing to let in

	mu      sync.Mutex
	running map[int]context.CancelFunc
}

// Start begins a request in its own goroutine. Ids are the caller's and must differ
// among the running requests.
func (s *Server) Start(id int, name string, payload []byte) {
	ctx, cancel := context.WithCancel(context.Background())
	s.mu.Lock()
	if s.running == nil {
		s.running = map[int]context.CancelFunc{}
	}
	s.running[id] = cancel
	s.mu.Unlock()
	go s.serve(ctx, id, name, payload)
}

// Cancel ends the context of a request; unknown ids are ignored, since the
// answer and the cancel may cross.
func (s *Server) Cancel(id int) {
	s.mu.Lock()
	cancel := s.running[id]
	s.mu.Unlock()
	if cancel != nil {
		cancel()
	}
}

func (s *Server) serve(ctx context.Context, id int, name string, payload []byte) {
	result, err := Run(ctx, name, payload, s.thinned(ctx, id))
	s.mu.Lock()
	if cancel := s.running[id]; cancel != nil {
		cancel()
		delete(s.running, id)
	}
	s.mu.Unlock()
	if err != nil {
		s.Fail(id, err)
		return
	}
	s.Done(id, result)
}

// thinned passes on the first report, the last (fraction 1), and in between one
// in reportEvery; each of those also lets waiting messages in.
func (s *Server) thinned(ctx context.Context, id int) Progress {
	var last time.Time
	return func(fraction float64, what string) {
		now := time.Now()
		if fraction < 1 && now.Sub(last) < reportEvery {
			return
		}
		last = now
		if ctx.Err() == nil {
			s.Report(id, min(max(fraction, 0), 1), what)
		}
		if s.Yield != nil {
			s.Yield()
		}
	}
}
