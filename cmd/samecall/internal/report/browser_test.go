package report_test

import (
	"bytes"
	"context"
	_ "embed"
	"fmt"
	"net/url"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/chromedp"

	"samecall/cmd/samecall/internal/report"
)

//go:embed testdata/page.js
var lookAtPage string

// chromium returns the browser to test with. Without one tests are skipped,
// but not where CI is set to true: there it must be.
func chromium(t *testing.T) string {
	t.Helper()
	for _, name := range []string{"chromium", "chromium-browser", "google-chrome"} {
		if path, err := exec.LookPath(name); err == nil {
			return path
		}
	}
	lacking(t, "no chromium is installed: the record is not looked at in a browser")
	return ""
}

// lacking skips a test for want of something that CI must have.
func lacking(t *testing.T, why string) {
	t.Helper()
	if os.Getenv("CI") == "true" {
		t.Fatal(why)
	}
	t.Skip(why)
}

// browser is the one that all tests share, with a fresh profile; tabs are
// children of its context. TestMain ends it.
var browser struct {
	once  sync.Once
	ctx   context.Context
	err   error
	close []func()
}

func TestMain(m *testing.M) {
	status := m.Run()
	for i := len(browser.close) - 1; i >= 0; i-- {
		browser.close[i]()
	}
	os.Exit(status)
}

func startBrowser(t *testing.T) context.Context {
	t.Helper()
	path := chromium(t)
	b := &browser
	b.once.Do(func() {
		profile, err := os.MkdirTemp("", "samecall-test-")
		if err != nil {
			b.err = err
			return
		}
		options := append(chromedp.DefaultExecAllocatorOptions[:],
			chromedp.ExecPath(path),
			chromedp.NoSandbox,
			chromedp.DisableGPU,
			chromedp.Flag("disable-component-update", true),
			chromedp.Flag("hide-scrollbars", true),
			chromedp.UserDataDir(profile),
		)
		allocator, stop := chromedp.NewExecAllocator(context.Background(), options...)
		ctx, end := chromedp.NewContext(allocator)
		b.close = append(b.close, func() { _ = os.RemoveAll(profile) }, stop, end)
		b.ctx, b.err = ctx, chromedp.Do(ctx)
	})
	if b.err != nil {
		t.Fatalf("the browser does not start: %v", b.err)
	}
	return b.ctx
}

// tab is a page of the browser, with what it asked for and complained of.
type tab struct {
	t   *testing.T
	ctx context.Context

	mu       sync.Mutex
	requests []string
	console  []string
}

func openTab(t *testing.T, shared context.Context) *tab {
	t.Helper()
	ctx, end := chromedp.NewContext(shared)
	t.Cleanup(end)
	ctx, cancel := context.WithTimeout(ctx, 2*time.Minute)
	t.Cleanup(cancel)
	b := &tab{t: t, ctx: ctx}
	b.do(chromedp.Steps())
	if _, err := chromedp.Call(ctx, network.Enable, network.EnableParams{}); err != nil {
		t.Fatal(err)
	}
	err := chromedp.Listen(ctx, func(event any) {
		if e, ok := event.(*network.EventRequestWillBeSent); ok {
			b.mu.Lock()
			b.requests = append(b.requests, e.Request.URL)
			b.mu.Unlock()
		}
	})
	if err != nil {
		t.Fatal(err)
	}
	messages := chromedp.Console(ctx)
	go func() {
		for m, err := range messages {
			if err != nil {
				return
			}
			b.mu.Lock()
			b.console = append(b.console, m.String())
			b.mu.Unlock()
		}
	}()
	return b
}

func (b *tab) do(step chromedp.Action[chromedp.Void]) {
	b.t.Helper()
	if err := chromedp.Do(b.ctx, step); err != nil {
		b.t.Fatal(err)
	}
}

// open loads a file and fails if it asks for anything else.
func (b *tab) open(file string) {
	b.t.Helper()
	b.media("", "light")
	b.do(chromedp.Navigate((&url.URL{Scheme: "file", Path: file}).String()))
}

// media sets the medium ("" or print) and the colour scheme.
func (b *tab) media(medium, scheme string) {
	b.t.Helper()
	_, err := chromedp.Call(b.ctx, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{
		Media:    medium,
		Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: scheme}},
	})
	if err != nil {
		b.t.Fatal(err)
	}
}

// look returns what is wrong with the page at a width.
func (b *tab) look(width int) []string {
	b.t.Helper()
	b.do(chromedp.EmulateViewport(int64(width), 900))
	wrong, err := chromedp.Run(b.ctx, chromedp.Evaluate[[]string](lookAtPage))
	if err != nil {
		b.t.Fatal(err)
	}
	return wrong
}

// alone fails if the page asked for anything but itself or complained.
func (b *tab) alone(files ...string) {
	b.t.Helper()
	b.mu.Lock()
	defer b.mu.Unlock()
	for _, r := range b.requests {
		u, err := url.Parse(r)
		own := false
		for _, f := range files {
			own = own || err == nil && u.Scheme == "file" && u.Path == f
		}
		if !own {
			b.t.Errorf("the page asks for %s", r)
		}
	}
	if len(b.requests) == 0 {
		b.t.Error("not even the request of the page was seen")
	}
	for _, m := range b.console {
		b.t.Errorf("the console says: %s", m)
	}
}

// The widths of a page between its margins, in CSS pixels (96 to an inch).
const (
	a4     = 688 // 210 mm less 2 × 14 mm
	letter = 710 // 8.5 in less 2 × 14 mm
)

func TestBrowser(t *testing.T) {
	shared := startBrowser(t)
	folder := t.TempDir()
	// The subtests run side by side, in tabs of the one browser.
	t.Run("records", func(t *testing.T) {
		for i, p := range append(plans(), hostilePlan()) {
			t.Run(p.name, func(t *testing.T) {
				t.Parallel()
				r := p.record(t)
				file := filepath.Join(folder, fmt.Sprintf("record %d.html", i))
				writeWith(t, file, func(w *bytes.Buffer) error { return report.HTML(w, r) })
				b := openTab(t, shared)
				b.open(file)
				for _, width := range []int{360, 800, 1280} {
					b.report(fmt.Sprintf("%d pixels wide", width), b.look(width))
				}
				b.media("", "dark")
				b.report("dark", b.look(800))
				for name, width := range map[string]int{"A4": a4, "Letter": letter} {
					b.media("print", "dark") // prints light all the same
					b.report("on "+name, b.look(width))
				}
				b.alone(file)
			})
		}
	})
}

func (b *tab) report(where string, wrong []string) {
	b.t.Helper()
	for _, w := range wrong {
		b.t.Errorf("%s: %s", where, w)
	}
}

func writeWith(t *testing.T, file string, write func(*bytes.Buffer) error) {
	t.Helper()
	var out bytes.Buffer
	if err := write(&out); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(file, out.Bytes(), 0o666); err != nil {
		t.Fatal(err)
	}
}

// What looks at pages must see what is wrong: each fault, put into a page on
// purpose, is found.
func TestBrowserSeesFaults(t *testing.T) {
	shared := startBrowser(t)
	b := openTab(t, shared)
	file := filepath.Join(t.TempDir(), "faults.html")
	const figure = `<svg class="figure" role="img" aria-labelledby="t d" viewBox="0 0 100 50" width="100" height="50"><title id="t">T</title><desc id="d">1</desc>%s</svg>`
	for _, c := range []struct{ body, want string }{
		{`<p>all is well</p>`, ""},
		{`<p style="width:3000px">wide</p>`, "the page is 3000 wide"},
		{`<script></script>`, "has a script"},
		{`<p onclick="x()">press</p>`, "has a handler"},
		{`<a href="https://example.com">away</a>`, "leads to"},
		{`<div class="wide" style="overflow-x:auto;width:100px" aria-label="x"><table><tr><td>` + strings.Repeat("x", 300) + `</td></tr></table></div>`, "cannot be focused"},
		{`<div class="wide" style="width:100px;overflow:hidden" tabindex="0"><table><tr><td>` + strings.Repeat("x", 300) + `</td></tr></table></div>`, "does not scroll"},
		{`<div class="wide" style="overflow-x:auto"><table style="table-layout:fixed;width:40px"><tr><td>xxxxxxxxxxxxxxxxxx</td></tr></table></div>`, "is cut"},
		{`<p style="color:#999;background:#fff">faint</p>`, "contrast of 2.85"}, // #999 on white by the formula of WCAG 2.2
		{fmt.Sprintf(figure, `<text x="5" y="20">one</text><text x="50" y="40">two</text>`), ""},
		{fmt.Sprintf(figure, `<text x="5" y="20">one</text><text x="8" y="20">two</text>`), "lies over"},
		{fmt.Sprintf(figure, `<text x="90" y="20">a long one</text>`), "is cut"},
		{strings.Replace(fmt.Sprintf(figure, ""), "<desc id=\"d\">1</desc>", "", 1), "does not say its numbers"},
		{strings.Replace(fmt.Sprintf(figure, ""), `role="img"`, "", 1), "is no image"},
	} {
		if err := os.WriteFile(file, []byte(`<!doctype html><html lang="en"><title>x</title><style>body{margin:0}p{margin:0}td{padding:0}</style><body>`+c.body), 0o666); err != nil {
			t.Fatal(err)
		}
		b.open(file)
		got := strings.Join(b.look(800), "; ")
		if c.want == "" && got != "" || !strings.Contains(got, c.want) {
			t.Errorf("%.80s: %q is wrong; expected %q", c.body, got, c.want)
		}
	}
}

// A request or a complaint must not go unseen.
func TestBrowserSeesRequests(t *testing.T) {
	shared := startBrowser(t)
	file := filepath.Join(t.TempDir(), "asks.html")
	if err := os.WriteFile(file, []byte(`<!doctype html><link rel="stylesheet" href="beside.css"><script>console.error("loud")</script>`), 0o666); err != nil {
		t.Fatal(err)
	}
	b := openTab(t, shared)
	b.open(file)
	deadline := time.Now().Add(10 * time.Second)
	for time.Now().Before(deadline) {
		b.mu.Lock()
		asked, complained := strings.Contains(strings.Join(b.requests, " "), "beside.css"), strings.Contains(strings.Join(b.console, " "), "loud")
		b.mu.Unlock()
		if asked && complained {
			return
		}
		time.Sleep(20 * time.Millisecond)
	}
	t.Errorf("asked for %q; the console says %q", b.requests, b.console)
}

// Figures stand alone too, on a ground of their own.
func TestBrowserFigures(t *testing.T) {
	shared := startBrowser(t)
	folder := t.TempDir()
	b := openTab(t, shared)
	for _, p := range []plan{{name: "three appraisers"}, hostilePlan()} {
		for _, f := range report.Figures(p.record(t)) {
			file := filepath.Join(folder, f.Name+".svg")
			writeWith(t, file, func(w *bytes.Buffer) error { return f.SVG(w) })
			b.open(file)
			for _, scheme := range []string{"light", "dark"} {
				b.media("", scheme)
				root, err := chromedp.Run(b.ctx, chromedp.Evaluate[string](`document.documentElement.tagName + (document.querySelector("parsererror") ? " with errors" : "")`))
				if err != nil {
					t.Fatal(err)
				}
				if root != "svg" {
					t.Errorf("%s: %s is a document of %s", p.name, f.Name, root)
				}
				b.report(p.name+", "+f.Name+" alone, "+scheme, b.look(2000)) // a square of many appraisers is wide
			}
		}
	}
}

// axe is the accessibility checker of that name, which SAMECALL_AXE leads to
// (axe.min.js of the package axe-core).
func TestBrowserAccessibility(t *testing.T) {
	path := os.Getenv("SAMECALL_AXE")
	if path == "" {
		lacking(t, "SAMECALL_AXE names no axe.min.js: the record is not checked for accessibility")
	}
	axe, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	shared := startBrowser(t)
	folder := t.TempDir()
	chosen := map[string]bool{"three appraisers": true, "kinds": true, "right to left": true, "one appraiser, no reference, one trial": true}
	for _, p := range plans() {
		if !chosen[p.name] {
			continue
		}
		r := p.record(t)
		file := filepath.Join(folder, p.name+".html")
		writeWith(t, file, func(w *bytes.Buffer) error { return report.HTML(w, r) })
		b := openTab(t, shared)
		b.open(file)
		b.findings(t, string(axe), p.name)
	}
	t.Run("sees faults", func(t *testing.T) {
		file := filepath.Join(folder, "faults.html")
		if err := os.WriteFile(file, []byte(`<!doctype html><title>x</title><img src="data:image/gif;base64,R0lGODlhAQABAAAAACw=">`), 0o666); err != nil {
			t.Fatal(err)
		}
		b := openTab(t, shared)
		b.open(file)
		if got := b.axe(string(axe)); !strings.Contains(strings.Join(got, " "), "image-alt") {
			t.Errorf("an image without a text alternative is not found: %q", got)
		}
	})
}

func (b *tab) findings(t *testing.T, axe, name string) {
	for width, scheme := range map[int]string{360: "light", 1280: "dark"} {
		b.media("", scheme)
		b.do(chromedp.EmulateViewport(int64(width), 900))
		for _, f := range b.axe(axe) {
			t.Errorf("%s, %s, %d pixels wide: %s", name, scheme, width, f)
		}
	}
}

// axe returns the serious and critical findings of the checker.
func (b *tab) axe(source string) []string {
	b.t.Helper()
	script := source + `;
axe.run(document, {resultTypes: ["violations"]}).then((r) => r.violations
  .filter((v) => v.impact === "serious" || v.impact === "critical")
  .map((v) => v.id + ": " + v.help + ": " + v.nodes.slice(0, 3).map((n) => n.html.slice(0, 200)).join(" | ")))`
	found, err := chromedp.Run(b.ctx, chromedp.Evaluate[[]string](script, chromedp.EvalAwaitPromise))
	if err != nil {
		b.t.Fatal(err)
	}
	return found
}
