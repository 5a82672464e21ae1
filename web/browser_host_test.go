package web

import (
	"bytes"
	"context"
	"io"
	"iter"
	"log/slog"
	"net"
	"net/http"
	"net/url"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/network"
	cdppage "github.com/chromedp/cdproto/page"
	"github.com/chromedp/chromedp"

	"lossbook/store"
)

// host is the real server on a port of its own, over a data file that outlives
// it: it can be stopped and started again.
type host struct {
	t             *testing.T
	file, address string
	store         *store.Store
	server        *http.Server
	done          chan struct{}
	pause         time.Duration // before each answer to an edit
	gallery       bool          // is served too
}

// serve starts a server as a first start does, with the samples.
func serve(t *testing.T) *host {
	t.Helper()
	h := &host{t: t}
	h.serve()
	return h
}

func (h *host) serve() {
	h.t.Helper()
	needBrowser(h.t)
	h.file, h.address = filepath.Join(h.t.TempDir(), "data.db"), "127.0.0.1:0"
	h.start()
	h.t.Cleanup(h.stop)
}

func (h *host) start() {
	h.t.Helper()
	ctx := context.Background()
	samples, err := Samples()
	if err != nil {
		h.t.Fatal(err)
	}
	if h.store, err = store.Open(ctx, h.file); err != nil {
		h.t.Fatal(err)
	}
	if err := h.store.Seed(ctx, samples); err != nil {
		h.t.Fatal(err)
	}
	listener, err := net.Listen("tcp", h.address)
	if err != nil {
		h.t.Fatal(err)
	}
	h.address = listener.Addr().String()
	handler, err := New(Config{Store: h.store, Log: slog.New(slog.NewTextHandler(io.Discard, nil)), Host: h.address, Evidence: os.DirFS("../testdata"), Gallery: h.gallery})
	if err != nil {
		h.t.Fatal(err)
	}
	h.server, h.done = &http.Server{Handler: h.paused(handler)}, make(chan struct{})
	go func() {
		defer close(h.done)
		h.server.Serve(listener) // ends by stop alone
	}()
}

// paused lets edits be answered later, as on a busy machine.
func (h *host) paused(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		if r.Method == http.MethodPost {
			time.Sleep(h.pause)
		}
		next.ServeHTTP(w, r)
	})
}

func (h *host) stop() {
	if h.server == nil {
		return
	}
	h.server.Close()
	<-h.done
	h.server = nil
	if err := h.store.Close(); err != nil {
		h.t.Error(err)
	}
}

// call uses the API as a script does, and returns what it answers.
func (h *host) call(status int, method, path string, body any) []byte {
	h.t.Helper()
	r, err := http.NewRequest(method, "http://"+h.address+"/api/v1"+path, bytes.NewBufferString(text(h.t, body)))
	if err != nil {
		h.t.Fatal(err)
	}
	r.Header.Set("Content-Type", "application/json")
	w, err := http.DefaultClient.Do(r)
	if err != nil {
		h.t.Fatal(err)
	}
	defer w.Body.Close()
	answer, err := io.ReadAll(w.Body)
	if err != nil || w.StatusCode != status {
		h.t.Fatalf("%s %s: %s %s (%v)", method, path, w.Status, answer, err)
	}
	return answer
}

// ears gather what a tab says and asks for.
type ears struct {
	said, asked, dialogs []string
	expected             []string
	hosts                []string // that are going to be asked besides the server's own
	listening            sync.WaitGroup
}

func listen(ctx context.Context) *ears {
	e := &ears{}
	hear(e, chromedp.Console(ctx), func(m chromedp.ConsoleMessage) {
		if m.Type != chromedp.ConsoleInfo && m.Type != chromedp.ConsoleDebug {
			e.said = append(e.said, m.String()+" "+m.URL)
		}
	})
	hear(e, chromedp.Events(ctx, network.RequestWillBeSent), func(r network.EventRequestWillBeSent) { e.asked = append(e.asked, r.Request.URL) })
	hear(e, chromedp.Events(ctx, cdppage.JavascriptDialogOpening), func(d cdppage.EventJavascriptDialogOpening) {
		e.dialogs = append(e.dialogs, d.Message)
		// A tab that is closing needs no answer.
		chromedp.Call(ctx, cdppage.HandleJavaScriptDialog, cdppage.HandleJavaScriptDialogParams{Accept: true})
	})
	return e
}

// hear keeps what comes until the tab is closed.
func hear[T any](e *ears, events iter.Seq2[T, error], keep func(T)) {
	e.listening.Go(func() {
		for event, err := range events {
			if err != nil {
				return
			}
			keep(event)
		}
	})
}

// expect names what the console is going to say; a message that holds one of the
// texts is no fault, but a text that no message holds is one.
func (b *tab) expect(texts ...string) { b.ears.expected = append(b.ears.expected, texts...) }

// report fails the test for what should not have been heard. Call it when the
// tab is closed.
func (e *ears) report(t *testing.T, address string) {
	t.Helper()
	e.listening.Wait()
	heard := map[string]bool{}
	for _, message := range e.said {
		i := slices.IndexFunc(e.expected, func(text string) bool { return strings.Contains(message, text) })
		if i < 0 {
			t.Error("console:", message)
			continue
		}
		heard[e.expected[i]] = true
	}
	for _, dialog := range e.dialogs {
		t.Error("a dialog opened:", dialog)
	}
	for _, asked := range e.asked {
		u, err := url.Parse(asked)
		if err != nil || u.Scheme != "data" && u.Host != address && !slices.Contains(e.hosts, u.Host) {
			t.Error("asked for", asked)
			continue
		}
		heard[u.Host] = true
	}
	for _, text := range slices.Concat(e.expected, e.hosts) {
		if !heard[text] && !t.Failed() {
			t.Errorf("%q was never heard of", text)
		}
	}
	if len(e.asked) == 0 && !t.Failed() {
		t.Error("no request was seen: is the ear deaf?")
	}
}
