package page

import (
	"fmt"
	"runtime/debug"
	"strings"

	"github.com/vugu/vugu"
	vjs "github.com/vugu/vugu/js"
)

// largest is what vugu's instruction buffer (16384 bytes) takes of one name and
// value with room for its lengths; anything longer makes the render fail.
const largest = 16384 - 64

// guard wraps what a build produced, so that a mistake in a handler is reported
// instead of ending the program, and a text too long for the renderer is cut.
type guard struct {
	report func(any)
	told   map[string]bool // what was too long, so that it is said once and not at every render
}

func (g guard) build(br *vugu.BuildResults, bo *vugu.BuildOut) {
	if bo == nil {
		return
	}
	for _, n := range bo.Out {
		g.node(n)
	}
	for _, c := range bo.Components {
		g.build(br, br.ResultFor(c))
	}
}

func (g guard) node(n *vugu.VGNode) {
	for i := range n.DOMEventHandlerSpecList {
		n.DOMEventHandlerSpecList[i].Func = g.handler(n.DOMEventHandlerSpecList[i].Func)
	}
	n.JSCreateHandler = g.element(n.JSCreateHandler)
	n.JSPopulateHandler = g.element(n.JSPopulateHandler)
	g.lengths(n)
	for k := n.FirstChild; k != nil; k = k.NextSibling {
		g.node(k)
	}
}

func (g guard) handler(f func(vugu.DOMEvent)) func(vugu.DOMEvent) {
	return func(e vugu.DOMEvent) { g.run(func() { f(e) }) }
}

func (g guard) element(h vugu.JSValueHandler) vugu.JSValueHandler {
	if h == nil {
		return nil
	}
	return vugu.JSValueFunc(func(v vjs.Value) { g.run(func() { h.JSValueHandle(v) }) })
}

// lengths cuts what the renderer cannot take.
func (g guard) lengths(n *vugu.VGNode) {
	if n.Type == vugu.TextNode && len(n.Data) > largest {
		g.tooLong("text of an element", len(n.Data))
		n.Data = strings.ToValidUTF8(n.Data[:largest], "")
	}
	for i, a := range n.Attr {
		if len(a.Key)+len(a.Val) > largest {
			g.tooLong("attribute "+a.Key, len(a.Val))
			n.Attr[i].Val = ""
		}
	}
	for i, p := range n.Prop {
		if len(p.Key)+len(p.JSONVal) > largest {
			g.tooLong("property "+p.Key, len(p.JSONVal))
			n.Prop[i].JSONVal = []byte(`""`)
		}
	}
}

func (g guard) tooLong(what string, n int) {
	if !g.told[what] {
		g.told[what] = true
		g.report(fmt.Errorf("page: %s is too long (%d bytes), expected at most %d", what, n, largest))
	}
}

// run calls f and reports a panic; it tells whether f came to its end.
func (g guard) run(f func()) (ok bool) {
	defer func() {
		if v := recover(); v != nil {
			g.report(v)
		}
	}()
	f()
	return true
}

// describe is what the banner says about a recovered value.
func describe(v any) string {
	if err, isError := v.(error); isError {
		v = err.Error()
	}
	return fmt.Sprintf("A part of the program failed (%v). Your inputs are kept; please undo the last step or reload.", v)
}

// gate turns any number of wishes for a render into one.
type gate struct{ wish chan struct{} }

func newGate() *gate {
	g := &gate{wish: make(chan struct{}, 1)}
	g.open()
	return g
}

func (g *gate) open() {
	select {
	case g.wish <- struct{}{}:
	default:
	}
}

func stack() string { return string(debug.Stack()) }
