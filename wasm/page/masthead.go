package page

import "brinkfield/physics/study"

// Masthead is the head of the page: the case and what can be done with it.
type Masthead struct{ App *App }

const cautions = study.Cautions

func (c *Masthead) offlineClass() string {
	if c.App.OfflineReady() {
		return "offline ready"
	}
	return "offline"
}

func (c *Masthead) themeName() string {
	if c.App.Host.Theme() == "dark" {
		return "Light"
	}
	return "Dark"
}
