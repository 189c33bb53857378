package page

// Drawing is a plot with the ways to keep it.
type Drawing struct {
	App *App
	ID  string
}

func (c *Drawing) save(format string) {
	c.App.Host.SavePlot(c.ID, format, c.App.fileName("-"+c.ID+"."+format))
}
