package browsertest

import (
	"bufio"
	"encoding/base64"
	"encoding/json"
	"fmt"
	"io"
	"net"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"
)

// A second browser reads the same page: Firefox, where it is installed (Debian's
// package firefox-esr). It is driven by its own remote protocol, lines of
// "length:[0,id,command,parameters]" on a port it writes into its profile.
type fox struct {
	t    *testing.T
	conn net.Conn
	in   *bufio.Reader
	id   int
}

func startFox(t *testing.T) *fox {
	path, err := exec.LookPath("firefox-esr")
	if err != nil {
		t.Skip("no firefox-esr here")
	}
	profile := t.TempDir()
	settings := `user_pref("marionette.port", 0);
user_pref("datareporting.policy.dataSubmissionEnabled", false);
user_pref("browser.shell.checkDefaultBrowser", false);
user_pref("network.captive-portal-service.enabled", false);
`
	if err := os.WriteFile(filepath.Join(profile, "user.js"), []byte(settings), 0o644); err != nil {
		t.Fatal(err)
	}
	c := exec.Command(path, "--headless", "--no-remote", "--marionette", "--profile", profile, "--width", "1280", "--height", "720")
	c.Env = append(os.Environ(), "HOME="+profile)
	if err := c.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		_ = c.Process.Signal(os.Interrupt)
		ended := make(chan struct{})
		go func() { _ = c.Wait(); close(ended) }()
		select {
		case <-ended:
		case <-time.After(5 * time.Second):
			_ = c.Process.Kill()
			<-ended
		}
	})
	f := &fox{t: t}
	f.connect(filepath.Join(profile, "MarionetteActivePort"))
	f.command("WebDriver:NewSession", map[string]any{})
	return f
}

func (f *fox) connect(portFile string) {
	f.t.Helper()
	for end := time.Now().Add(patience); time.Now().Before(end); time.Sleep(50 * time.Millisecond) {
		port, err := os.ReadFile(portFile)
		if err != nil || len(port) == 0 {
			continue
		}
		if f.conn, err = net.Dial("tcp", "127.0.0.1:"+strings.TrimSpace(string(port))); err == nil {
			f.in = bufio.NewReader(f.conn)
			f.t.Cleanup(func() { f.conn.Close() })
			f.read() // its greeting
			return
		}
	}
	f.t.Fatal("Firefox did not come up")
}

func (f *fox) read() []byte {
	f.t.Helper()
	_ = f.conn.SetReadDeadline(time.Now().Add(patience))
	head, err := f.in.ReadString(':')
	if err != nil {
		f.t.Fatal(err)
	}
	n, err := strconv.Atoi(strings.TrimSuffix(head, ":"))
	if err != nil {
		f.t.Fatal(err)
	}
	b := make([]byte, n)
	if _, err := io.ReadFull(f.in, b); err != nil {
		f.t.Fatal(err)
	}
	return b
}

func (f *fox) command(name string, parameters map[string]any) json.RawMessage {
	f.t.Helper()
	f.id++
	text, err := json.Marshal([]any{0, f.id, name, parameters})
	if err != nil {
		f.t.Fatal(err)
	}
	fmt.Fprintf(f.conn, "%d:%s", len(text), text)
	var reply [4]json.RawMessage // 1, id, error, result
	if err := json.Unmarshal(f.read(), &reply); err != nil {
		f.t.Fatal(err)
	}
	if string(reply[2]) != "null" {
		f.t.Fatalf("%s: %s", name, reply[2])
	}
	return reply[3]
}

// eval evaluates an expression, awaiting a promise.
func (f *fox) eval(expression string) any {
	f.t.Helper()
	r := f.command("WebDriver:ExecuteScript", map[string]any{"script": "return " + expression, "args": []any{}})
	var value struct{ Value any }
	if err := json.Unmarshal(r, &value); err != nil {
		f.t.Fatal(err)
	}
	return value.Value
}

func (f *fox) wait(expression string) {
	f.t.Helper()
	for end := time.Now().Add(patience); time.Now().Before(end); time.Sleep(30 * time.Millisecond) {
		if f.eval("Boolean("+expression+")") == true {
			return
		}
	}
	f.t.Fatalf("%s did not come true; the page says %v", expression, f.eval("document.body.innerText.slice(0, 600)"))
}

func (f *fox) open(address string) {
	f.t.Helper()
	f.command("WebDriver:Navigate", map[string]any{"url": address})
	f.wait(`performance.getEntriesByName("brinkfield-shown").length > 0`)
}

func (f *fox) shot(name string) {
	f.t.Helper()
	dir := os.Getenv("BRINKFIELD_SHOTS")
	if dir == "" {
		return
	}
	var value struct{ Value string }
	if err := json.Unmarshal(f.command("WebDriver:TakeScreenshot", map[string]any{"full": false}), &value); err != nil {
		f.t.Fatal(err)
	}
	image, err := base64.StdEncoding.DecodeString(value.Value)
	if err != nil {
		f.t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(dir, name+".png"), image, 0o644); err != nil {
		f.t.Fatal(err)
	}
}

func TestFirefox(t *testing.T) {
	dir, faulty := dist(t, false), dist(t, true)
	f := startFox(t)
	for name, address := range map[string]string{"single": "file://" + dir + "/brinkfield.html", "hosted": serve(t, dir).address} {
		f.open(address)
		time.Sleep(time.Second)
		if f.eval(`document.getElementById("banner").hidden`) != true {
			t.Errorf("%s: banner: %v", name, f.eval(`document.getElementById("banner").textContent`))
		}
		t.Logf("%s: shown after %v ms", name, f.eval(`Math.round(performance.getEntriesByName("brinkfield-shown")[0].startTime)`))
		f.shot("firefox-" + name)
	}
	for name, address := range map[string]string{"single": "file://" + faulty + "/brinkfield.html", "hosted": serve(t, faulty).address} {
		t.Log(name)
		f.open(address + "?a=1#b=2")
		f.wait(`location.hash === "#a=1&b=2" && document.getElementById("field").value === "a=1&b=2"`)
		f.eval(`document.getElementById("call").click()`)
		f.wait(`document.getElementById("heard").textContent === "echo a=1&b=2"`)
		f.eval(`document.getElementById("panic").click()`)
		f.wait(`document.getElementById("banner").textContent.includes("in a handler")`)
		f.eval(`document.getElementById("draw").click()`)
		f.wait(`document.querySelector("#plot .plot-chart svg")`)
		f.eval(`document.getElementById("crash").click()`)
		f.wait(`document.getElementById("heard").textContent.includes("panic: in a goroutine")`)
		f.eval(`document.getElementById("call").click()`)
		f.wait(`document.getElementById("heard").textContent === "echo a=1&b=2"`)
	}
}
