package assets

import (
	"context"
	_ "embed"
	"flag"
	"fmt"
	"html/template"
	"io"
	"net/http"
	"net/http/httptest"
	"os"
	"os/exec"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/chromedp"
)

var shots = flag.String("shots", "", "a folder to write pictures of the gallery to")

// policy is as strict as the pages' own: nothing but this host, no inline script,
// no inline style except the chart library's.
const policy = "default-src 'none'; script-src 'self'; style-src 'self' " + ChartStyle +
	"; font-src 'self'; img-src 'self' data:; connect-src 'self'; form-action 'self'; base-uri 'none'; frame-ancestors 'none'"

//go:embed testdata/gallery.html
var galleryText string

var galleryPage = template.Must(template.New("gallery").Funcs(template.FuncMap{"url": URL}).Parse(galleryText))

// serveGallery starts a server of the gallery page and its assets. What is posted
// to /answer comes back as a changed efficiency, as a sheet's answer would.
func serveGallery(t *testing.T) string {
	t.Helper()
	mux := http.NewServeMux()
	mux.Handle("/assets/", Handler())
	mux.HandleFunc("GET /{$}", func(w http.ResponseWriter, r *http.Request) {
		w.Header().Set("Content-Type", "text/html; charset=utf-8")
		if err := galleryPage.Execute(w, gallery()); err != nil {
			t.Error(err)
		}
	})
	mux.HandleFunc("POST /answer", func(w http.ResponseWriter, r *http.Request) {
		w.Header().Set("Content-Type", "text/html; charset=utf-8")
		fmt.Fprintf(w, `<div class="head"><div><small>efficiency</small><strong id="eta">90.00 %%</strong></div></div>`+
			`<p id="got">%s</p><loss-chart id="stack" kind="stack" %s hx-morph-skip-children></loss-chart>`,
			template.HTMLEscapeString(fmt.Sprint(r.PostFormValue("l.2.1"))), dataAttribute(stackData("7.77")))
	})
	server := httptest.NewServer(http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		w.Header().Set("Content-Security-Policy", policy)
		mux.ServeHTTP(w, r)
	}))
	t.Cleanup(server.Close)
	return server.URL
}

// browser starts one browser for the whole package.
var browser = sync.OnceValue(func() context.Context {
	options := append(chromedp.DefaultExecAllocatorOptions[:], chromedp.NoSandbox,
		chromedp.Flag("disable-component-update", true), chromedp.Flag("disable-quic", true))
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
	flag.Parse()
	code := m.Run()
	stopBrowser()
	os.Exit(code)
}

// openGallery opens the gallery in a fresh tab of the given width and colour
// scheme, and fails the test for anything the page says on the console.
func openGallery(t *testing.T, width int64, scheme string) context.Context {
	t.Helper()
	needBrowser(t)
	if err := chromedp.Do(browser()); err != nil {
		t.Fatal(err)
	}
	tab, cancel := chromedp.NewContext(browser(), chromedp.WithNewBrowserContext())
	ctx, stop := context.WithTimeout(tab, 2*time.Minute)
	do(t, tab) // binds the tab to the context without the limit
	heard := listen(tab)
	t.Cleanup(func() {
		stop()
		cancel()
		for _, message := range heard() {
			t.Error("console:", message)
		}
	})
	media := emulation.SetEmulatedMediaParams{Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: scheme}}}
	if _, err := chromedp.Call(ctx, emulation.SetEmulatedMedia, media); err != nil {
		t.Fatal(err)
	}
	do(t, ctx, chromedp.EmulateViewport(width, 900), chromedp.Navigate(serveGallery(t)))
	wait(t, ctx, `document.querySelectorAll('loss-chart .pane svg').length === 4`)
	return ctx
}

// resize gives the window another width and waits until the charts follow.
func resize(t *testing.T, ctx context.Context, width int64) {
	t.Helper()
	do(t, ctx, chromedp.EmulateViewport(width, 900))
	wait(t, ctx, `[...document.querySelectorAll('loss-chart')].every(c => Math.abs(c.querySelector('svg').getAttribute('width') - c.clientWidth) < 1)`)
}

// listen gathers the console until the context ends; the func it returns waits
// for that and gives what was said.
func listen(ctx context.Context) func() []string {
	var said []string
	done := make(chan struct{})
	messages := chromedp.Console(ctx)
	go func() {
		defer close(done)
		for m, err := range messages {
			if err != nil {
				return
			}
			said = append(said, fmt.Sprintf("%s %s:%d %s", m.Type, m.URL, m.Line+1, m.Text))
		}
	}()
	return func() []string { <-done; return said }
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

func do(t *testing.T, ctx context.Context, actions ...chromedp.Action[chromedp.Void]) {
	t.Helper()
	if err := chromedp.Do(ctx, actions...); err != nil {
		t.Fatal(err)
	}
}

// eval returns the value of a script's last expression, a promise awaited.
func eval[T any](t *testing.T, ctx context.Context, script string) T {
	t.Helper()
	value, err := chromedp.Run(ctx, chromedp.Evaluate[T](script, chromedp.EvalAwaitPromise))
	if err != nil {
		t.Fatalf("%s: %v", script, err)
	}
	return value
}

// wait returns once the condition is true; the tab's time limit ends it.
func wait(t *testing.T, ctx context.Context, condition string) {
	t.Helper()
	for !eval[bool](t, ctx, condition) {
		select {
		case <-ctx.Done():
			t.Fatalf("never became true: %s", condition)
		case <-time.After(10 * time.Millisecond):
		}
	}
}

// want fails unless the script's value is the expected one.
func want[T comparable](t *testing.T, ctx context.Context, script string, expected T) {
	t.Helper()
	if got := eval[T](t, ctx, script); got != expected {
		t.Errorf("%s = %v, want %v", script, got, expected)
	}
}

func readAll(t *testing.T, body io.Reader) string {
	t.Helper()
	content, err := io.ReadAll(body)
	if err != nil {
		t.Fatal(err)
	}
	return string(content)
}
