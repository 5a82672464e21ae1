package web

import (
	"context"
	"flag"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/chromedp"
)

var shots = flag.String("shots", "", "a folder to write pictures of the pages to")

// chromium starts one browser for the whole package. It takes evil.test for this
// machine, as it would after an attack on its names.
var chromium = sync.OnceValue(func() context.Context {
	options := append(chromedp.DefaultExecAllocatorOptions[:], chromedp.NoSandbox,
		chromedp.Flag("disable-component-update", true), chromedp.Flag("disable-quic", true),
		chromedp.Flag("host-resolver-rules", "MAP evil.test 127.0.0.1"))
	allocator, _ := chromedp.NewExecAllocator(context.Background(), options...)
	ctx, cancel := chromedp.NewContext(allocator)
	stopBrowser = func() {
		if err := chromedp.Cancel(ctx); err != nil {
			fmt.Fprintln(os.Stderr, "stopping the browser:", err)
		}
		cancel()
	}
	return ctx
})

var stopBrowser = func() {}

func TestMain(m *testing.M) {
	if file := os.Getenv(asServer); file != "" {
		fmt.Fprintln(os.Stderr, serveUntilKilled(file))
		os.Exit(1)
	}
	flag.Parse()
	code := m.Run()
	stopBrowser()
	os.Exit(code)
}

// needBrowser skips on a machine without Chromium, but fails where CI is true:
// there the browser tests are part of the gate.
func needBrowser(t *testing.T) {
	t.Helper()
	for _, name := range []string{"chromium", "chromium-browser", "google-chrome", "google-chrome-stable"} {
		if _, err := exec.LookPath(name); err == nil {
			return
		}
	}
	if os.Getenv("CI") == "true" {
		t.Fatal("no Chromium on the path, and CI needs one")
	}
	t.Skip("no Chromium on the path: install one to run this test")
}

// tab is a browser's tab with nothing kept from any other.
type tab struct {
	t    *testing.T
	ctx  context.Context
	host *host
	ears *ears
}

// tab opens an empty tab of a window of 1440 by 900. The test fails for anything
// that the browser says on its console and that was not expected, for a dialog,
// and for a request to another host.
func (h *host) tab() *tab {
	h.t.Helper()
	needBrowser(h.t)
	if err := chromedp.Do(chromium()); err != nil {
		h.t.Fatal(err)
	}
	bound, cancel := chromedp.NewContext(chromium(), chromedp.WithNewBrowserContext())
	ctx, stop := context.WithTimeout(bound, 3*time.Minute)
	b := &tab{t: h.t, ctx: ctx, host: h}
	if err := chromedp.Do(bound); err != nil { // binds the tab to the context without the limit
		h.t.Fatal(err)
	}
	b.ears = listen(bound)
	h.t.Cleanup(func() {
		h.t.Helper()
		stop()
		cancel()
		b.ears.report(h.t, h.address)
	})
	b.size(1440, 900, 1)
	return b
}

// visit opens a page of the server in a new tab.
func (h *host) visit(path string) *tab {
	h.t.Helper()
	b := h.tab()
	b.open(path)
	return b
}

// open opens a page and returns when it is loaded and its charts are drawn.
func (b *tab) open(path string) {
	b.t.Helper()
	b.do(chromedp.Navigate("http://" + b.host.address + path))
	b.drawn()
}

func (b *tab) drawn() {
	b.t.Helper()
	b.wait(`document.readyState === 'complete' && [...document.querySelectorAll('loss-chart')].every(c => c.querySelector('svg') || !c.clientWidth)`)
}

func (b *tab) size(width, height int64, scale float64) {
	b.t.Helper()
	b.do(chromedp.EmulateViewport(width, height, chromedp.EmulateScale(scale)))
}

// scheme sets whether the person prefers light or dark.
func (b *tab) scheme(name string) {
	b.t.Helper()
	media := emulation.SetEmulatedMediaParams{Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: name}}}
	if _, err := chromedp.Call(b.ctx, emulation.SetEmulatedMedia, media); err != nil {
		b.t.Fatal(err)
	}
}

// scriptless turns the scripts of pages off, as some people do.
func (b *tab) scriptless() {
	b.t.Helper()
	if _, err := chromedp.Call(b.ctx, emulation.SetScriptExecutionDisabled, emulation.SetScriptExecutionDisabledParams{Value: true}); err != nil {
		b.t.Fatal(err)
	}
}

func (b *tab) do(actions ...chromedp.Action[chromedp.Void]) {
	b.t.Helper()
	if err := chromedp.Do(b.ctx, actions...); err != nil {
		b.t.Fatal(err)
	}
}

// evaluate returns the value of a script's last expression, a promise awaited.
func evaluate[T any](b *tab, script string) T {
	b.t.Helper()
	value, err := chromedp.Run(b.ctx, chromedp.Evaluate[T](script, chromedp.EvalAwaitPromise))
	if err != nil {
		b.t.Fatalf("%.300s: %v", script, err)
	}
	return value
}

// text returns what an element says, blanks folded; "" where there is none.
func (b *tab) text(selector string) string {
	b.t.Helper()
	return evaluate[string](b, fmt.Sprintf(`(document.querySelector(%q)?.textContent ?? '').replace(/\s+/g, ' ').trim()`, selector))
}

// wait returns once the condition is true. A page that is just leaving gives no
// answer, so that is waited for too.
func (b *tab) wait(condition string) {
	b.t.Helper()
	end := time.Now().Add(20 * time.Second)
	for {
		is, err := chromedp.Run(b.ctx, chromedp.Evaluate[bool]("Boolean("+condition+")"))
		if err == nil && is {
			return
		}
		if time.Now().After(end) {
			where, _ := chromedp.Run(b.ctx, chromedp.Evaluate[string](`location.href + ' ' + document.activeElement?.outerHTML.slice(0, 200)`))
			b.t.Fatalf("never became true: %s (%v) at %s", condition, err, where)
		}
		time.Sleep(10 * time.Millisecond)
	}
}

// says waits until an element's words hold the text.
func (b *tab) says(selector, text string) {
	b.t.Helper()
	b.wait(fmt.Sprintf(`document.querySelector(%q)?.textContent.replace(/\s+/g, ' ').includes(%q)`, selector, text))
}

// want fails unless the script's value is the expected one.
func want[T comparable](b *tab, script string, expected T) {
	b.t.Helper()
	if got := evaluate[T](b, script); got != expected {
		b.t.Errorf("%s = %v, want %v", script, got, expected)
	}
}

// picture writes the window and the whole page where -shots says, for eyes
// to judge; without the flag it does nothing.
func (b *tab) picture(name string) {
	b.t.Helper()
	if *shots == "" {
		return
	}
	for suffix, take := range map[string]chromedp.Action[[]byte]{"": chromedp.CaptureScreenshot(), "-whole": chromedp.FullScreenshot(100)} {
		picture, err := chromedp.Run(b.ctx, take)
		if err != nil {
			b.t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(*shots, name+suffix+".png"), picture, 0o644); err != nil {
			b.t.Fatal(err)
		}
	}
}
