package web

import (
	"net/url"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"
)

// A newcomer reads three sentences at most; put away, they stay away.
func TestHintsArePutAway(t *testing.T) {
	s := seeded(t)
	pages := map[string]string{"list": "/", "sheet": "/designs/1?vin=11"}
	for name, path := range pages {
		p := s.open(200, path)
		hint := p.one("hint")
		if text := words(find(hint, tag("p"))[0]); strings.Count(text, ". ")+1 > 3 || !strings.HasSuffix(text, ".") || len(text) < 80 {
			t.Errorf("%s: %q is not one to three sentences", name, text)
		}
		form := find(hint, tag("form"))[0]
		if where := s.moved(s.send(attr(form, "action"), url.Values{"to": {attr(find(form, tag("input"))[0], "value")}})); where != path {
			t.Errorf("%s: sent on to %s", name, where)
		}
		if s.open(200, path).has("hint") {
			t.Errorf("%s: it is still there", name)
		}
		s.moved(s.send(attr(form, "action"), nil)) // again
	}
	for _, path := range []string{"/designs/1/revisions/1", "/designs/1/rename"} {
		if s.open(200, path).has("hint") {
			t.Errorf("%s: there is a hint", path)
		}
	}
	s.page(404, s.send("/hints/none/away", nil), "no such hint")
	for to, want := range map[string]string{"//evil.test/": "/", "http://evil.test/designs/": "/", "/designs/1": "/designs/1", "": "/"} {
		if got := s.moved(s.send("/hints/list/away", url.Values{"to": {to}})); got != want {
			t.Errorf("a form leads from %q to %q", to, got)
		}
	}
}

func TestHintIsPutAwayInPlace(t *testing.T) {
	h := serve(t)
	b := h.visit(frostSheet)
	b.picture("sheet-first")
	evaluate[chromedp.Void](b, `window.stays = 1`)
	b.click(saying("Put this away"))
	b.wait(`!document.getElementById('hint')`)
	want(b, `window.stays`, 1)
	b.do(chromedp.Reload())
	b.drawn()
	want(b, `document.getElementById('hint')`+` === null`, true)
	b.scriptless()
	b.open("/")
	b.picture("list-first")
	b.tabTo(saying("Put this away"))
	b.press("Enter")
	b.wait(`document.readyState === 'complete' && !document.getElementById('hint')`)
	h.stop()
	h.start()
	b.open("/")
	want(b, `document.getElementById('hint')`+` === null`, true)
}
