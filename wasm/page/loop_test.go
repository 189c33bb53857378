package page

import (
	"fmt"
	"strings"
	"testing"

	"github.com/vugu/vugu"
	"github.com/vugu/vugu/js"
)

// child and parent are components as the generator writes them, reduced to what the guard walks.
type child struct{ node *vugu.VGNode }

func (c *child) Build(*vugu.BuildIn) *vugu.BuildOut {
	return &vugu.BuildOut{Out: []*vugu.VGNode{c.node}}
}

type parent struct {
	node *vugu.VGNode
	kid  *child
}

func (p *parent) Build(*vugu.BuildIn) *vugu.BuildOut {
	return &vugu.BuildOut{Out: []*vugu.VGNode{p.node}, Components: []vugu.Builder{p.kid}}
}

func button(f func(vugu.DOMEvent)) *vugu.VGNode {
	return &vugu.VGNode{Type: vugu.ElementNode, Data: "button",
		DOMEventHandlerSpecList: []vugu.DOMEventHandlerSpec{{EventType: "click", Func: f}}}
}

func TestGuardReachesEveryHandler(t *testing.T) {
	inner := button(func(vugu.DOMEvent) { panic("inner") })
	leaf := button(func(vugu.DOMEvent) { panic("leaf") })
	leaf.JSCreateHandler = vugu.JSValueFunc(func(js.Value) { panic("create") })
	outer := &vugu.VGNode{Type: vugu.ElementNode, Data: "div"}
	outer.AppendChild(&vugu.VGNode{Type: vugu.TextNode, Data: "text"})
	outer.AppendChild(leaf)
	root := &parent{node: outer, kid: &child{node: inner}}
	env, err := vugu.NewBuildEnv(nil)
	if err != nil {
		t.Fatal(err)
	}
	results := env.RunBuild(root)

	var heard []string
	g := guard{report: func(v any) { heard = append(heard, fmt.Sprint(v)) }, told: map[string]bool{}}
	g.build(results, results.Out)
	leaf.DOMEventHandlerSpecList[0].Func(nil)
	inner.DOMEventHandlerSpecList[0].Func(nil)
	leaf.JSCreateHandler.JSValueHandle(js.Undefined())
	if got := strings.Join(heard, " "); got != "leaf inner create" {
		t.Errorf("heard %q", got)
	}
}

func TestGuardCutsWhatIsTooLong(t *testing.T) {
	var heard []string
	g := guard{report: func(v any) { heard = append(heard, fmt.Sprint(v)) }, told: map[string]bool{}}
	long := strings.Repeat("é", largest) // two bytes each, so a cut at an odd place splits one
	for range 2 {
		text := &vugu.VGNode{Type: vugu.TextNode, Data: "x" + long}
		g.node(text)
		if len(text.Data) > largest || !strings.HasPrefix(text.Data, "xé") || strings.ContainsRune(text.Data, '\uFFFD') {
			t.Errorf("text of %d bytes is left", len(text.Data))
		}
		el := &vugu.VGNode{Type: vugu.ElementNode, Data: "p", Attr: []vugu.VGAttribute{{Key: "title", Val: long}, {Key: "id", Val: "short"}},
			Prop: []vugu.VGProperty{{Key: "value", JSONVal: []byte(`"` + long + `"`)}}}
		g.node(el)
		if el.Attr[0].Val != "" || el.Attr[1].Val != "short" || string(el.Prop[0].JSONVal) != `""` {
			t.Errorf("attributes %d and %d bytes, property %d bytes", len(el.Attr[0].Val), len(el.Attr[1].Val), len(el.Prop[0].JSONVal))
		}
	}
	if len(heard) != 3 {
		t.Errorf("%d reports, expected one for each kind: %q", len(heard), heard)
	}
}

func TestGateKeepsOneWish(t *testing.T) {
	g := newGate()
	for range 5 {
		g.open()
	}
	<-g.wish
	select {
	case <-g.wish:
		t.Error("two wishes were kept")
	default:
	}
}
