package page

import (
	"time"

	"brinkfield/physics/study"
)

// mergeWithin joins keystrokes in one field into one step of undo.
const mergeWithin = 1500 * time.Millisecond

// maxSteps bounds the memory of undo.
const maxSteps = 200

// history holds the inputs before and after the present ones.
type history struct {
	past, future []study.Inputs
	last         string
	when         time.Time
	started      bool
}

// push remembers the inputs that an edit replaces.
func (h *history) push(before study.Inputs, what string) {
	now := time.Now()
	if !h.started { // the first inputs replace nothing
		h.started = true
		return
	}
	merge := what != "" && what == h.last && now.Sub(h.when) < mergeWithin && len(h.past) > 0
	h.last, h.when, h.future = what, now, nil
	if merge {
		return
	}
	h.past = append(h.past, before)
	if len(h.past) > maxSteps {
		h.past = h.past[1:]
	}
}

func (h *history) back(now study.Inputs) (study.Inputs, bool) {
	return move(&h.past, &h.future, now, &h.last)
}

func (h *history) forth(now study.Inputs) (study.Inputs, bool) {
	return move(&h.future, &h.past, now, &h.last)
}

func move(from, to *[]study.Inputs, now study.Inputs, last *string) (study.Inputs, bool) {
	n := len(*from)
	if n == 0 {
		return now, false
	}
	in := (*from)[n-1]
	*from, *to, *last = (*from)[:n-1], append(*to, now), ""
	return in, true
}

// CanUndo and CanRedo grey the buttons.
func (a *App) CanUndo() bool { return len(a.history.past) > 0 }

// CanRedo is the counterpart of CanUndo.
func (a *App) CanRedo() bool { return len(a.history.future) > 0 }
