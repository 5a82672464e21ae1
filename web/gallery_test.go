package web

import (
	"fmt"
	"io"
	"log/slog"
	"os"
	"slices"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"
)

// withGallery is a site that was asked for it.
func withGallery(t *testing.T) *site {
	t.Helper()
	s := newSite(t)
	var err error
	if s.router, err = newRouter(Config{Store: s.store, Log: slog.New(slog.NewTextHandler(io.Discard, nil)), Host: testHost, Gallery: true}); err != nil {
		t.Fatal(err)
	}
	return s
}

func TestGalleryIsThereOnlyIfAskedFor(t *testing.T) {
	for _, at := range routesOf(t, newSite(t).router) {
		if strings.Contains(at.pattern, "gallery") {
			t.Errorf("%s is served unasked", at.pattern)
		}
	}
	newSite(t).open(404, "/gallery")
	newSite(t).open(404, "/gallery/list")
	s := withGallery(t)
	routes := routesOf(t, s.router)
	if !slices.ContainsFunc(routes, func(at route) bool { return at.pattern == "/gallery/{exhibit:[a-z-]+}" }) {
		t.Error("the gallery is not there")
	}
	p := s.open(200, "/gallery")
	for _, e := range exhibits {
		if !strings.Contains(p.words(), e.words) {
			t.Errorf("%s is not listed", e.name)
		}
	}
	s.open(404, "/gallery/none")
	for _, at := range []string{"/gallery", "/gallery/list"} {
		checkHeaders(t, at, s.ask("GET", at, "").Header())
	}
}

// The awkward data is as awkward as it says.
func TestGalleryIsAwkward(t *testing.T) {
	s := withGallery(t)
	for name, holds := range map[string][]string{
		"list":              {hostileText, longText, solidText, "exceeded"},
		"list-empty":        {"No designs yet"},
		"sheet-hostile":     {hostileText, solidText, "Since revision 7", "Undo"},
		"sheet-extreme":     {solidText, "nA"},
		"sheet-hot":         {"exceeded"},
		"sheet-unreachable": {"no budget at this point"},
		"sheet-working":     {"Reference loss"},
		"sheet-wrong":       {"Last good answer", "Entries to correct", "is not one of the loads"},
		"sheet-empty":       {"Last good answer"},
		"sheet-findings":    {hostileText, "30 notes"},
		"sheet-stale":       {"Changed elsewhere meanwhile", "Put this away"},
		"revision":          {hostileText, "Copy", "revoked"},
		"report":            {hostileText},
		"compare":           {"rev", longText},
		"compare-choose":    {"No revision is kept yet"},
		"find-none":         {"No entry is called that."},
		"find-all":          {"Steinmetz"},
		"rename":            {"This name can’t be used", longText},
		"failure":           {hostileText, longText},
	} {
		p := s.open(200, "/gallery/"+name)
		for _, text := range holds {
			if !strings.Contains(p.words(), strings.Join(strings.Fields(text), " ")) {
				t.Errorf("%s does not hold %.60q", name, text)
			}
		}
	}
	for _, e := range exhibits {
		if p := s.open(200, "/gallery/"+e.name); len(p.all(tag("h1"))) != 1 || len(p.all(tag("main"))) != 1 {
			t.Errorf("%s is no whole page", e.name)
		}
	}
}

// Every template, with awkward data, runs nothing, breaks no rule of accessibility,
// light or dark, and does not scroll sideways. That nothing is said on the console is
// what every tab is listened to for.
func TestGalleryHolds(t *testing.T) {
	axe, err := os.ReadFile("../testdata/vendor/axe.min.js")
	if err != nil {
		t.Fatal(err)
	}
	h := &host{t: t, gallery: true}
	h.serve()
	seen := 0
	for _, e := range exhibits {
		b := h.tab()
		b.do(chromedp.Navigate("http://" + h.address + "/gallery/" + e.name))
		b.wait(`document.readyState === 'complete' && [...document.querySelectorAll('loss-chart')].every(c => c.textContent.trim() || !c.clientWidth)`) // drawn, or why not
		seen++
		if evaluate[bool](b, `'__pwned' in window || [...document.querySelectorAll('img, [onerror], [onload], script:not([src])')].length > 0`) {
			t.Errorf("%s: a text became markup", e.name)
		}
		b.picture("gallery-" + e.name)
		b.do(chromedp.Evaluate[chromedp.Void](string(axe)))
		b.judge(e.name+", light", 8, `'wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'`)
		b.scheme("dark")
		b.judge(e.name+", dark", 1, `'color-contrast'`)
		b.scheme("light")
		for _, window := range [][3]int64{{320, 640, 1}, {1440, 900, 1}} { // 320 px is also what 400 % leaves of 1280
			b.size(window[0], window[1], float64(window[2]))
			b.wait(`[...document.querySelectorAll('loss-chart svg')].every(s => s.getBoundingClientRect().width <= s.closest('loss-chart').clientWidth + 1)`)
			if got := evaluate[int64](b, `document.documentElement.scrollWidth`); got > window[0] {
				t.Errorf("%s: %d px wide in a window of %d: %s", e.name, got, window[0], evaluate[string](b, fmt.Sprintf(`[...document.querySelectorAll('body *')].filter(e => e.getBoundingClientRect().right > %d && !e.closest('.scroll, .vh')).slice(0, 4).map(e => e.outerHTML.slice(0, 120)).join('\n')`, window[0])))
			}
			b.picture(fmt.Sprintf("gallery-%s-%d-%d", e.name, window[0], window[2]))
		}
	}
	if seen < 19 {
		t.Errorf("only %d pages were looked at", seen)
	}
}
