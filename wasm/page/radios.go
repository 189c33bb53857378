package page

import "brinkfield/physics/study"

// Radios is a choice of a few, side by side.
type Radios struct {
	Name, Legend string
	Options      []study.Option
	Chosen       string
	Pick         func(string)
}
