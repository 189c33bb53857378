package page

import "github.com/vugu/vugu"

// Root is the whole page.
type Root struct {
	App      *App
	stations []vugu.Builder
}

// station is one link of the chain: one component here, one section of study.
type station struct {
	id  string
	new func(*App) vugu.Builder
}

// stations in the order of the work. A new station is one line here.
var stations = []station{
	{"specimen", func(a *App) vugu.Builder { return &Specimen{App: a} }},
	{"spectra", func(a *App) vugu.Builder { return &Spectra{App: a} }},
	{"boundary", func(a *App) vugu.Builder { return &Boundary{App: a} }},
	{"profile", func(a *App) vugu.Builder { return &Profile{App: a} }},
}

// NewRoot returns the page's root component.
func NewRoot(h Host) vugu.Builder {
	c := &Root{App: newApp(h)}
	for _, s := range stations {
		c.stations = append(c.stations, &onShow{app: c.App, id: s.id, station: s.new(c.App)})
	}
	return &framed{c}
}

// framed is the root with its plots.
type framed struct{ *Root }

// Build builds the page and names the drawings that follow its render.
func (d *framed) Build(in *vugu.BuildIn) *vugu.BuildOut {
	out := d.Root.Build(in)
	d.App.draw()
	return out
}

// onShow builds a station only while it is shown: an edit must not pay for what
// nobody sees.
type onShow struct {
	app     *App
	id      string
	station vugu.Builder
}

// Build builds the station, or an empty section in its place.
func (o *onShow) Build(in *vugu.BuildIn) *vugu.BuildOut {
	if o.app.Shows(o.id) {
		return o.station.Build(in)
	}
	section := &vugu.VGNode{Type: vugu.ElementNode, Data: "section", Attr: []vugu.VGAttribute{{Key: "class", Val: "station"}, {Key: "id", Val: o.id}}}
	section.Prop = append(section.Prop, vugu.VGProperty{Key: "hidden", JSONVal: []byte("true")})
	section.SetInnerHTML(vugu.HTML("")) // what stood here goes
	return &vugu.BuildOut{Out: []*vugu.VGNode{section}}
}
