package page

import "time"

// pause is how long edits must rest before the engine is asked: while a person
// drags, every step would be thrown away.
const pause = 120 * time.Millisecond

// superseding lets at most one call live: a newer one, or stop, ends the older.
type superseding struct {
	engine interface {
		Call(task string, payload []byte, onProgress func(float64, string), onDone func([]byte, error)) (cancel func())
	}
	after  func(d time.Duration, f func()) (stop func())
	cancel func()
}

func (s *superseding) stop() {
	if s.cancel != nil {
		s.cancel()
		s.cancel = nil
	}
}

// Call starts the task after the pause, instead of whatever ran before.
func (s *superseding) Call(task string, payload []byte, onProgress func(float64, string), onDone func([]byte, error)) {
	s.stop()
	s.cancel = s.after(pause, func() {
		s.cancel = s.engine.Call(task, payload, onProgress, func(data []byte, err error) {
			s.cancel = nil
			onDone(data, err)
		})
	})
}
