package browsertest

import (
	"context"
	"fmt"
	"net/http"
	"net/http/httptest"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/log"
	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/cdproto/page"
	"github.com/chromedp/cdproto/runtime"
	"github.com/chromedp/chromedp"
)

// patience is how long anything on the page may take before a test gives up.
const patience = 20 * time.Second

// theBrowser is started by the first test and ended by TestMain.
var theBrowser struct {
	once sync.Once
	ctx  context.Context
	end  func()
	err  error
}

func TestMain(m *testing.M) {
	code := m.Run()
	if theBrowser.end != nil {
		theBrowser.end()
	}
	os.Exit(code)
}

func startBrowser() {
	opts := []chromedp.ExecAllocatorOption{
		chromedp.NoFirstRun, chromedp.NoDefaultBrowserCheck, chromedp.NoSandbox, chromedp.DisableGPU,
		chromedp.Flag("headless", "new"), chromedp.Flag("disable-quic", true),
		chromedp.Flag("disable-background-networking", true), chromedp.Flag("disable-component-update", true),
		chromedp.Flag("disable-sync", true), chromedp.Flag("disable-dev-shm-usage", true),
		// No name resolves: the page can reach this machine's test server and nothing else.
		chromedp.Flag("host-resolver-rules", "MAP * ~NOTFOUND , EXCLUDE 127.0.0.1"),
	}
	if path := os.Getenv("CHROMIUM"); path != "" {
		opts = append(opts, chromedp.ExecPath(path))
	}
	alloc, endAlloc := chromedp.NewExecAllocator(context.Background(), opts...)
	ctx, endBrowser := chromedp.NewContext(alloc)
	theBrowser.ctx, theBrowser.end = ctx, func() { endBrowser(); endAlloc() }
	theBrowser.err = chromedp.Do(ctx)
}

// kind is the form of the page.
type kind int

const (
	hosted kind = iota // the folder behind a server
	single             // the one file, from file://
)

type options struct {
	kind     kind
	faulty   bool   // the page of mistakes instead of the real one
	path     string // under the server, e.g. "?T=300C"
	fragment string // behind "#", percent-encoded
	phone    bool   // 390×844 instead of 1280×720
	dark     bool
	script   string // runs before the page's own scripts
	server   *server
}

// tab is one page under test.
type tab struct {
	t      testing.TB
	ctx    context.Context
	server *server

	mu       sync.Mutex
	problems []string
	requests []string // since the page was shown
	shown    bool
}

// dist is the folder under test.
func dist(t testing.TB, faulty bool) string {
	name := "BRINKFIELD_DIST"
	if faulty {
		name = "BRINKFIELD_FAULTY"
	}
	dir := os.Getenv(name)
	if dir == "" {
		t.Skipf("%s is not set; run ./build.sh test", name)
	}
	return dir
}

// open opens the page and waits until it is shown.
func open(t testing.TB, o options) *tab {
	t.Helper()
	dir := dist(t, o.faulty)
	theBrowser.once.Do(startBrowser)
	if theBrowser.err != nil {
		t.Fatalf("no browser: %v", theBrowser.err)
	}
	ctx, end := chromedp.NewContext(theBrowser.ctx, chromedp.WithNewBrowserContext())
	t.Cleanup(end)
	b := &tab{t: t, ctx: ctx, server: o.server}
	if err := chromedp.Listen(ctx, b.listen); err != nil {
		t.Fatal(err)
	}
	b.prepare(o)
	address := "file://" + filepath.Join(dir, "brinkfield.html")
	if o.kind == hosted {
		if b.server == nil {
			b.server = serve(t, dir)
		}
		address = b.server.address + o.path
	}
	if o.fragment != "" {
		address += "#" + o.fragment
	}
	b.navigate(address)
	return b
}

func (b *tab) prepare(o options) {
	width, height := int64(1280), int64(720)
	if o.phone {
		width, height = 390, 844
	}
	scheme := "light"
	if o.dark {
		scheme = "dark"
	}
	call(b, network.Enable, network.EnableParams{})
	call(b, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{
		Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: scheme}}})
	b.do(chromedp.EmulateViewport(width, height))
	if o.script != "" {
		call(b, page.AddScriptToEvaluateOnNewDocument, page.AddScriptToEvaluateOnNewDocumentParams{Source: o.script})
	}
}

// navigate loads an address and waits for the program's first render.
func (b *tab) navigate(address string) {
	b.t.Helper()
	b.mu.Lock()
	b.shown = false
	b.mu.Unlock()
	b.do(chromedp.Navigate(address))
	b.wait(`performance.getEntriesByName("brinkfield-shown").length > 0`)
	b.mu.Lock()
	b.shown, b.requests = true, nil
	b.mu.Unlock()
}

func (b *tab) listen(ev any) {
	b.mu.Lock()
	defer b.mu.Unlock()
	switch e := ev.(type) {
	case *runtime.EventExceptionThrown:
		b.problems = append(b.problems, "exception: "+e.ExceptionDetails.Text+" "+arguments([]*runtime.RemoteObject{e.ExceptionDetails.Exception}))
	case *runtime.EventConsoleAPICalled:
		if e.Type == "error" || e.Type == "warning" {
			b.problems = append(b.problems, fmt.Sprintf("console %s: %s", e.Type, arguments(e.Args)))
		}
	case *log.EventEntryAdded:
		if e.Entry.Level == "error" || e.Entry.Level == "warning" {
			b.problems = append(b.problems, fmt.Sprintf("log %s: %s %s", e.Entry.Level, e.Entry.Text, e.Entry.URL))
		}
	case *network.EventRequestWillBeSent:
		if b.shown {
			b.requests = append(b.requests, e.Request.URL)
		}
	}
}

func arguments(list []*runtime.RemoteObject) string {
	var s []string
	for _, a := range list {
		if a == nil {
			continue
		}
		s = append(s, strings.Trim(string(a.Value), `"`)+a.Description)
	}
	return strings.Join(s, " ")
}

// server serves a folder and counts what is asked for.
type server struct {
	address string
	http    *httptest.Server
	mu      sync.Mutex
	dir     string
	asked   []string
}

// serve serves dir under a path, as a page in a corner of somebody's site.
func serve(t testing.TB, dir string) *server {
	s := &server{dir: dir}
	s.http = httptest.NewServer(http.StripPrefix("/some/corner/", http.HandlerFunc(s.file)))
	t.Cleanup(s.http.Close)
	s.address = s.http.URL + "/some/corner/"
	return s
}

func (s *server) file(w http.ResponseWriter, r *http.Request) {
	s.mu.Lock()
	s.asked = append(s.asked, r.URL.String())
	dir := s.dir
	s.mu.Unlock()
	r.Header.Del("If-Modified-Since") // a new version may have been built before the old one
	http.FileServer(http.Dir(dir)).ServeHTTP(w, r)
}

// replace serves another folder from now on, as when a new version is put there.
func (s *server) replace(dir string) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.dir = dir
}

// requests returns what was asked for since the last call.
func (s *server) requests() []string {
	s.mu.Lock()
	defer s.mu.Unlock()
	list := s.asked
	s.asked = nil
	return list
}
