package browsertest

import (
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
	"time"
)

var forms = []struct {
	name string
	kind kind
}{{"hosted", hosted}, {"single", single}}

// The page comes up in both forms, both themes and both widths, without a
// complaint in the console and without asking for anything afterwards.
func TestPageOpens(t *testing.T) {
	for _, f := range forms {
		for _, dark := range []bool{false, true} {
			for _, phone := range []bool{false, true} {
				name := f.name + map[bool]string{false: "-light", true: "-dark"}[dark] + map[bool]string{false: "-desk", true: "-phone"}[phone]
				t.Run(name, func(t *testing.T) {
					b := open(t, options{kind: f.kind, dark: dark, phone: phone})
					time.Sleep(700 * time.Millisecond) // whatever starts late shows now
					if got, want := eval[string](b, `document.documentElement.dataset.theme`), map[bool]string{false: "light", true: "dark"}[dark]; got != want {
						t.Errorf("theme %q, expected %q", got, want)
					}
					if !eval[bool](b, `document.getElementById("banner").hidden`) {
						t.Errorf("banner: %s", b.text("#banner"))
					}
					b.quiet()
					b.shot(name)
				})
			}
		}
	}
}

// The policy allows no eval, no inline code without a hash, and no other origin;
// the single file may not connect to anything.
func TestPolicy(t *testing.T) {
	for _, name := range []string{"index.html", "brinkfield.html"} {
		text, err := os.ReadFile(filepath.Join(dist(t, false), name))
		if err != nil {
			t.Fatal(err)
		}
		m := regexp.MustCompile(`http-equiv="Content-Security-Policy" content="([^"]*)"`).FindSubmatch(text)
		if m == nil {
			t.Fatalf("%s has no policy", name)
		}
		policy := string(m[1])
		for _, bad := range []string{"'unsafe-eval'", "'unsafe-inline'", "'unsafe-hashes'", "http:", "https:", "*", "//"} {
			if strings.Contains(policy, bad) {
				t.Errorf("%s: policy contains %s: %s", name, bad, policy)
			}
		}
		want := []string{"default-src 'none'", "'wasm-unsafe-eval'", "base-uri 'none'"}
		if name == "brinkfield.html" {
			want = append(want, "connect-src 'none'")
		}
		for _, w := range want {
			if !strings.Contains(policy, w) {
				t.Errorf("%s: policy lacks %s: %s", name, w, policy)
			}
		}
	}
}

// The policy is enforced, not only written.
func TestPolicyHolds(t *testing.T) {
	b := open(t, options{kind: single})
	// In a timer: what the protocol evaluates directly is exempt from the policy.
	if !eval[bool](b, `new Promise((done) => setTimeout(() => { try { new Function("return 1")(); done(false); } catch { done(true); } }))`) {
		t.Error("code from text was run")
	}
	if !eval[bool](b, `fetch("data:text/plain,x").then(() => false, () => true)`) {
		t.Error("the single file could connect")
	}
}

// After the first visit the hosted page opens without its host.
func TestOffline(t *testing.T) {
	s := serve(t, dist(t, false))
	b := open(t, options{kind: hosted, server: s})
	b.wait(`window.brinkfield.offlineState() === "ready"`)
	s.http.Close()
	b.navigate(s.address + "?after=1#closing")
	b.wait(`window.brinkfield.offlineState() === "ready"`)
	b.navigate(s.address + "index.html")
	for _, r := range s.requests() {
		if strings.Contains(r, "after") {
			t.Errorf("asked the host: %s", r)
		}
	}
}

// A new version on the host is taken as a whole, at the visit after it was found.
func TestNewVersion(t *testing.T) {
	s := serve(t, dist(t, true))
	b := open(t, options{kind: hosted, server: s})
	b.wait(`window.brinkfield.offlineState() === "ready"`)
	old := eval[string](b, `document.documentElement.dataset.version`)
	s.replace(dist(t, false))
	b.navigate(s.address + "?visit=2")
	if got := eval[string](b, `document.documentElement.dataset.version`); got != old {
		t.Errorf("version %s in the visit that finds the new one, expected the old %s", got, old)
	}
	deadline := time.Now().Add(patience)
	for visit := "a"; ; visit += "a" {
		time.Sleep(1500 * time.Millisecond) // the browser looks for a new version about a second after a visit
		b.navigate(s.address + "?visit=" + visit)
		if eval[string](b, `document.documentElement.dataset.version`) != old {
			break
		}
		if time.Now().After(deadline) {
			t.Fatal("the new version never came")
		}
	}
	b.quiet()
}
