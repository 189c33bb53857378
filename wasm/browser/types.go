package browser

// File is one file a person picked, dropped or pasted. Err says why it could not
// be taken (too large, a folder); Data is then nil.
type File struct {
	Name string
	Data []byte
	Err  error
}

// Pick is a click on a point of a plot.
type Pick struct {
	Plot   string  `json:"-"` // id of the plot's element
	Series string  `json:"series"`
	Index  int     `json:"index"` // position of the point in its series
	X      float64 `json:"x"`
	Y      float64 `json:"y"`
	Shift  bool    `json:"shift"` // the shift key was held
}

// Offline says whether the page would open again without a network.
type Offline string

// The states of the offline mark.
const (
	OfflineFile    Offline = "file"    // the page is one file: always
	OfflineReady   Offline = "ready"   // a complete copy is kept by the browser
	OfflineLoading Offline = "loading" // the copy is being made
	OfflineNone    Offline = "none"    // this browser or address does not allow it
)

// Loop runs f on the page's loop: alone, with the renderer's lock held, followed
// by a render. It returns at once.
type Loop func(f func())
