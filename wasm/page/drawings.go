package page

// Drawings is a row of plots, side by side where there is room.
type Drawings struct {
	App   *App
	Class string
	IDs   []string
}
