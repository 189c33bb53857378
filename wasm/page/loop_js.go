package page

import (
	"fmt"
	"sync"
	"syscall/js"

	"github.com/vugu/vugu"
	"github.com/vugu/vugu/domrender"

	"brinkfield/wasm/browser"
)

// maxFailedWrites in a row end the page with the banner to reload. A root that
// cannot be built does not count: undoing the last edit may mend it.
const maxFailedWrites = 3

// Main runs the page and never returns.
func Main() { Run(NewRoot) }

// Run runs a page of any root component: it renders it into #page, and again once
// per animation frame after events. It returns only after a fatal banner.
func Run(newRoot func(Host) vugu.Builder) {
	l := &loop{wishes: newGate(), glue: js.Global().Get("brinkfield")}
	l.guard = guard{report: l.report, told: map[string]bool{}}
	l.browser = browser.New(l.do)
	l.newRenderer()
	var root vugu.Builder
	if !l.guard.run(func() { root = newRoot(l.browser) }) {
		l.fatal("The page could not be built.")
		select {}
	}
	l.run(root)
}

// loop owns the renderer. The renderer's lock (env) is held by whoever changes
// the state of components: a handler of an event, or work brought in by do.
type loop struct {
	guard   guard
	browser *browser.Browser
	wishes  *gate
	glue    js.Value
	frame   js.Func
	failed  int // writes to the page in a row that failed

	mu       sync.Mutex
	renderer *domrender.JSRenderer
	env      vugu.EventEnv
	build    *vugu.BuildEnv
}

// newRenderer starts a renderer, at the beginning or after one broke while it
// wrote to the page: its buffer then still holds the instruction that failed.
func (l *loop) newRenderer() {
	r, err := domrender.New("#page")
	if err != nil {
		panic(err)
	}
	build, err := vugu.NewBuildEnv(r.EventEnv())
	if err != nil {
		panic(err)
	}
	l.mu.Lock()
	l.renderer, l.env = r, r.EventEnv()
	if l.build == nil {
		l.build = build
	}
	l.mu.Unlock()
	go func() {
		for r.EventWait() {
			l.wishes.open()
		}
	}()
}

// do runs f like a handler: alone, recovered, and with a render to follow. It
// returns at once, so it may be called from a handler, where the lock is taken.
func (l *loop) do(f func()) {
	go func() {
		l.mu.Lock()
		env := l.env
		l.mu.Unlock()
		env.Lock()
		l.glue.Call("hold") // events that f causes wait until it is done
		l.guard.run(f)
		l.glue.Call("release")
		env.UnlockRender()
	}()
}

func (l *loop) run(root vugu.Builder) {
	turn := make(chan struct{}, 1)
	l.frame = js.FuncOf(func(js.Value, []js.Value) any {
		turn <- struct{}{}
		return nil
	})
	for first := true; ; first = false {
		<-l.wishes.wish
		if !first {
			l.glue.Call("nextFrame", l.frame)
			<-turn
		}
		l.render(root)
		if first {
			js.Global().Get("performance").Call("mark", "brinkfield-shown")
		}
		if l.failed >= maxFailedWrites {
			l.fatal("The page cannot be drawn any more.")
			return
		}
	}
}

// render builds and draws the page once. When it fails, what was last drawn stays.
func (l *loop) render(root vugu.Builder) {
	var results *vugu.BuildResults
	if !l.guard.run(func() { results = l.build.RunBuild(root) }) {
		return
	}
	l.guard.build(results, results.Out)
	written := l.guard.run(func() {
		if err := l.renderer.Render(results); err != nil {
			panic(err)
		}
	})
	if !written {
		l.failed++
		l.newRenderer()
		l.wishes.open()
		return
	}
	l.failed = 0
	l.env.Lock()
	l.glue.Call("hold")
	l.guard.run(l.browser.Rendered)
	l.glue.Call("release")
	l.env.UnlockOnly()
}

func (l *loop) report(v any) {
	js.Global().Get("console").Call("warn", fmt.Sprint(v), stack())
	l.glue.Call("report", describe(v))
}

func (l *loop) fatal(message string) { l.glue.Call("fatal", message) }
