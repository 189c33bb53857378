package page

import "brinkfield/physics/study"

// Numbers is a list of results under a heading.
type Numbers struct {
	App  *App
	Head string
	List []study.Number
}
