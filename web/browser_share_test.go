package web

import (
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
