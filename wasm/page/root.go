package page

import (
	"github.com/vugu/vugu"
)

// Root is the whole page.
type Root struct {
	Host       Host
	Text       string
	Understood string
	engine     interface {
		Call(string, []byte, func(float64, string), func([]byte, error)) func()
	}
}

// NewRoot returns the page's root component.
func NewRoot(h Host) vugu.Builder {
	return &Root{Host: h, Text: h.Fragment(), engine: h.NewEngine()}
}

// Edit takes what is typed.
func (c *Root) Edit(e vugu.DOMEvent) {
	c.Text = e.PropString("target", "value")
	c.Host.ReplaceFragment(c.Text)
}

// Ask sends the text as the name of a task.
func (c *Root) Ask() {
	c.engine.Call(c.Text, nil, nil, func(b []byte, err error) {
		c.Understood = string(b)
		if err != nil {
			c.Understood = err.Error()
		}
	})
}
