// Package browsertest looks at the built page with a real browser.
//
// build.sh test sets BRINKFIELD_DIST (site/dist), BRINKFIELD_FAULTY (a page of
// mistakes, folder faulty, packed the same way) and CHROMIUM; without the first
// the tests skip, so that go test ./... needs no browser. One browser serves all
// tests; each tab has a profile of its own. BRINKFIELD_SHOTS names a folder for
// screenshots.
//
//	func TestTitle(t *testing.T) {
//		tab := open(t, options{kind: single, fragment: "T=300C", phone: true})
//		tab.fill("#temperature", "350 °C")
//		tab.wait(`document.querySelector("#phi0").textContent.includes("V")`)
//		tab.shot("title")
//		tab.quiet() // no console error, no exception, no request since the load
//	}
package browsertest
