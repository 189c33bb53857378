package main

import (
	"bytes"
	"crypto/sha256"
	"encoding/base64"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"html"
	"net/url"
	"slices"
	"strings"
	"text/template"
)

// page writes its two forms.
type page struct {
	sources  source
	packed   []byte // the program, gzipped
	licences string
	template []byte
	offline  []byte
}

// view is what index.html is filled with.
type view struct {
	Packaging, Version, Policy, Icon, Head, Tail string
}

// icon: two grains and the boundary between them.
const icon = `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 32 32"><rect width="32" height="32" rx="6" fill="#f4f1ea"/><path d="M3 8h7c3 0 4 15 6 15s3-15 6-15h7" fill="none" stroke="#1f3f8f" stroke-width="3"/><path d="M16 3v26" stroke="#222" stroke-width="1.5" stroke-dasharray="2 2"/></svg>`

// hosted returns the files of the folder: an index, parts named by their hashes,
// and the worker that keeps an offline copy.
func (p *page) hosted() (map[string][]byte, error) {
	files := map[string][]byte{}
	add := func(stem, ext string, data []byte) string {
		name := fmt.Sprintf("%s.%s.%s", stem, digest(data), ext)
		files[name] = data
		return name
	}
	v := view{Packaging: "hosted"}
	style := add("style", "css", []byte(p.sources.style))
	program := add("program", "bin", p.packed)
	worker := add("worker", "js", []byte(p.sources.worker))
	v.Head = fmt.Sprintf(`<link rel="stylesheet" href=%q>`, style) +
		fmt.Sprintf("\n<link rel=\"preload\" as=\"fetch\" crossorigin=\"anonymous\" href=%q>", program)
	v.Tail = fmt.Sprintf(`<script type="text/plain" id="program" data-href=%q></script>`, program) +
		fmt.Sprintf("\n<script type=\"text/plain\" id=\"worker\" data-href=%q></script>\n", worker) + p.licencesBlock()
	for _, s := range p.sources.scripts {
		v.Tail += fmt.Sprintf("\n<script src=%q></script>", add(s.name, "js", []byte(s.text)))
	}
	v.Policy = policy(map[string][]string{
		"script-src":  {"'self'", "'wasm-unsafe-eval'"},
		"style-src":   append([]string{"'self'"}, hashes(p.sources.plotsStyles...)...),
		"connect-src": {"'self'"},
		"worker-src":  {"'self'", "blob:"},
	})
	return files, p.finish(files, v)
}

// finish gives the hosted folder its version, index and offline worker. The
// version is a hash of all names and of the index before it is known.
func (p *page) finish(files map[string][]byte, v view) error {
	names := []string{"./", "licences.txt"}
	for name := range files {
		names = append(names, name)
	}
	slices.Sort(names)
	draft, err := p.fill(v)
	if err != nil {
		return err
	}
	v.Version = digest([]byte(strings.Join(names, " ") + string(draft) + string(p.offline)))
	if files["index.html"], err = p.fill(v); err != nil {
		return err
	}
	list, err := json.Marshal(names)
	if err != nil {
		return err
	}
	text := strings.NewReplacer("{{version}}", v.Version, "{{files}}", string(list)).Replace(string(p.offline))
	files["offline-worker.js"] = []byte(text)
	return nil
}

// single returns the page as one file.
func (p *page) single() ([]byte, error) {
	v := view{Packaging: "file"}
	style, err := inline("style", "", p.sources.style)
	if err != nil {
		return nil, err
	}
	worker, err := inline("script", ` type="text/plain" id="worker"`, p.sources.worker)
	if err != nil {
		return nil, err
	}
	v.Head = style
	v.Tail = `<script type="text/plain" id="program" data-coding="base64">` +
		base64.StdEncoding.EncodeToString(p.packed) + "</script>\n" + worker + "\n" + p.licencesBlock()
	var texts []string
	for _, s := range p.sources.scripts {
		script, err := inline("script", "", s.text)
		if err != nil {
			return nil, err
		}
		v.Tail += "\n" + script
		texts = append(texts, s.text)
	}
	v.Policy = policy(map[string][]string{
		"script-src":  append(hashes(texts...), "'wasm-unsafe-eval'"),
		"style-src":   hashes(append([]string{p.sources.style}, p.sources.plotsStyles...)...),
		"connect-src": {"'none'"},
		"worker-src":  {"blob:"},
	})
	v.Version = digest([]byte(v.Head + v.Tail))
	return p.fill(v)
}

func (p *page) fill(v view) ([]byte, error) {
	v.Icon = html.EscapeString(url.PathEscape(icon))
	t, err := template.New("index.html").Parse(string(p.template))
	if err != nil {
		return nil, err
	}
	var b bytes.Buffer
	err = t.Execute(&b, v)
	return b.Bytes(), err
}

func (p *page) licencesBlock() string {
	return `<script type="text/plain" id="licences">` + strings.ReplaceAll(p.licences, "</", "< /") + "</script>"
}

// policy is the Content-Security-Policy: nothing is allowed but what is listed.
func policy(own map[string][]string) string {
	rules := []string{"default-src 'none'"}
	for _, name := range []string{"script-src", "style-src", "connect-src", "worker-src"} {
		rules = append(rules, name+" "+strings.Join(own[name], " "))
	}
	return strings.Join(append(rules, "img-src data: blob:", "base-uri 'none'", "form-action 'none'"), "; ")
}

// inline refuses text that would end its own element.
func inline(element, attributes, text string) (string, error) {
	if strings.Contains(strings.ToLower(text), "</"+element) || strings.Contains(text, "<!--") {
		return "", fmt.Errorf("pack: a %s contains its own end or a comment and cannot stand inline", element)
	}
	return "<" + element + attributes + ">" + text + "</" + element + ">", nil
}

func hashes(texts ...string) []string {
	var list []string
	for _, t := range texts {
		sum := sha256.Sum256([]byte(t))
		list = append(list, "'sha256-"+base64.StdEncoding.EncodeToString(sum[:])+"'")
	}
	return list
}

func digest(b []byte) string {
	sum := sha256.Sum256(b)
	return hex.EncodeToString(sum[:6])
}
