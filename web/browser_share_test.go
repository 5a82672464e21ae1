package web

import (
	"encoding/json"
	"strconv"
	"strings"
	"testing"
)

// madeLink is the address of the link that is shown on the page.
const madeLink = `document.querySelector('#link').value`

// A link is made, taken and revoked by keys alone.
func TestLinkByKeyboard(t *testing.T) {
	h := serve(t)
	h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "first"})
	b := h.visit(frostSheet + "/revisions/1")
	b.tabTo(`e.id === 'f-share.note'`)
	b.types("for Ada")
	b.press("Enter")
	b.wait(`!!document.querySelector('#link')`)
	b.wait(`document.activeElement.id === 'link' && getSelection().toString() === ` + madeLink)
	b.tabTo(`e.matches('[data-copy]')`)
	b.tabTo(`e.getAttribute('aria-label')?.startsWith('Revoke the link for Ada')`)
	b.press("Enter")
	b.says("#links", "revoked")
}

// The same without a script: the link is there to be copied by hand, and opens
// the revision.
func TestLinkWithoutScript(t *testing.T) {
	h := serve(t)
	h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "first"})
	b := h.tab()
	b.scriptless()
	b.open(frostSheet + "/revisions/1")
	b.tabTo(`e.id === 'f-share.note'`)
	b.types("for Ada")
	b.press("Enter")
	b.wait(`!!document.querySelector('#link')`)
	want(b, `document.activeElement.id + ' ' + document.querySelector('[data-copy]').checkVisibility()`, "link false")
	b.open("/share/" + evaluate[string](b, madeLink+`.split('/share/')[1]`))
	b.says("main", "first")
	want(b, `document.querySelectorAll('a[href^="/designs"], form[method="post"]').length`, 0)
}

// sharedFrost is the path of a link to the first sample.
func sharedFrost(h *host) string {
	h.t.Helper()
	h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "first"})
	var made shareMade
	if err := json.Unmarshal(h.call(201, "POST", frostSheet+"/revisions/1/share", map[string]string{}), &made); err != nil {
		h.t.Fatal(err)
	}
	return strings.TrimPrefix(made.URL, "http://"+h.address)
}

// Behind a link too a figure opens by keys alone, its working closes by keys alone,
// and the address holds it: another browser opens the same.
func TestWorkingBehindALinkByKeyboard(t *testing.T) {
	h := serve(t)
	b := h.visit(sharedFrost(h))
	b.tabTo(`e.matches('.ledger a.figure')`)
	b.press("Down", "Right")
	opened := evaluate[string](b, `document.activeElement.getAttribute('hx-get')`)
	b.press("Enter")
	b.wait(`document.activeElement.id === 'working-title'`)
	b.wait(`location.pathname + location.search === ` + strconv.Quote(opened))
	panel := b.text("#working")
	other := h.visit(evaluate[string](b, `location.pathname + location.search + '#working'`))
	if got := other.text("#working"); got != panel || !strings.Contains(got, "=") {
		t.Errorf("the address opens %q, was %q", got, panel)
	}
	b.press("Escape")
	b.wait(`!document.querySelector('#working') && document.activeElement.getAttribute('hx-get') === ` + strconv.Quote(opened))
}

// The same without a script, on the page of a link and on a revision's own.
func TestWorkingOfASavedStateWithoutScript(t *testing.T) {
	h := serve(t)
	link := sharedFrost(h)
	for _, path := range []string{link, frostSheet + "/revisions/1"} {
		b := h.tab()
		b.scriptless()
		b.open(path)
		b.tabTo(`e.matches('.ledger a.figure')`)
		b.press("Enter")
		b.wait(`location.hash === '#working' && !!document.querySelector('#working math')`)
		want(b, `document.querySelector('#working').getBoundingClientRect().top < innerHeight`, true)
		b.tabTo(`e.matches('#working a.close')`)
		b.press("Enter")
		b.wait(`location.hash === '#ledger-title' && !document.querySelector('#working')`)
	}
}
