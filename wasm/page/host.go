package page

import (
	"time"

	"brinkfield/wasm/browser"
)

// Host is what the page asks of the browser. *browser.Browser is the real one;
// native tests hand in their own. Callbacks run on the page's loop, a render follows.
type Host interface {
	Fragment() string
	ReplaceFragment(percentEncoded string)
	OnFragment(func(fragment string))
	Address() string

	PickFiles(accept string, multiple bool, f func([]browser.File))
	OnFiles(onFiles func([]browser.File), onText func(string))
	Download(name, mime string, data []byte)
	CopyText(s string, f func(error))
	Print()

	Theme() string
	SetTheme(name string)
	Offline() browser.Offline
	OnEnvironment(func())

	DrawPlot(id, kind string, specJSON []byte)
	SavePlot(id, format, filename string)
	OnPlotPick(func(browser.Pick))

	Focus(id string)
	FocusAndSelect(id string)
	Reveal(id string)
	AfterRender(func())
	After(d time.Duration, f func()) (stop func())
	Report(message string)
	Licences() string

	NewEngine() *browser.Engine
}
