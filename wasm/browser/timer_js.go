package browser

import (
	"sync/atomic"
	"time"
)

// After runs f on the page's loop when d has passed, unless stop is called before.
func (b *Browser) After(d time.Duration, f func()) (stop func()) {
	var stopped atomic.Bool
	timer := time.AfterFunc(d, func() {
		b.loop(func() {
			if !stopped.Load() {
				f()
			}
		})
	})
	return func() {
		stopped.Store(true)
		timer.Stop()
	}
}
