package web

import (
	"testing"

	"github.com/chromedp/chromedp"
)

func (b *tab) ctrlSlash() { b.t.Helper(); b.chord("/", 2, "") }

// offered waits until the list offers an entry first.
func (b *tab) offered(first string) {
	b.t.Helper()
	b.wait(`(o => o?.checkVisibility() && o.textContent.includes('` + first + `') && o.getAttribute('aria-selected') === 'true' && document.getElementById('find-q').getAttribute('aria-activedescendant') === o.id)(document.querySelector('#found [role=option]'))`)
}

func TestFindAnEntryByKeys(t *testing.T) {
	h := serve(t)
	b := h.visit(frostSheet)
	b.ctrlSlash()
	b.wait(`document.activeElement.id === 'find-q'`)
	b.types("rds")
	b.offered("On-resistance")
	want(b, `document.getElementById('find-q').getAttribute('role') + document.getElementById('find-q').getAttribute('aria-expanded')`, "comboboxtrue")
	b.picture("sheet-find")
	b.press("Enter")
	b.wait(`document.activeElement.id === 'f-switch.rds_on'`)
	want(b, `document.getElementById('found').checkVisibility()`, false)
	want(b, inSight(field("switch.rds_on")), true)

	b.ctrlSlash() // an entry that is folded away
	want(b, `document.querySelector('`+field("drive.voltage_off")+`').checkVisibility()`, false)
	b.types("gate voltage when off")
	b.press("Enter") // before the answer
	b.wait(`document.activeElement.id === 'f-drive.voltage_off'`)
	want(b, inSight(field("drive.voltage_off")), true)

	b.ctrlSlash() // an empty curve leads to its button
	b.types("inductance over")
	b.offered("Inductance over current")
	b.press("Enter")
	b.wait(`document.activeElement.id === 'add-inductor.l_curve'`)

	b.ctrlSlash()
	b.types("theta")
	b.offered("Junction to ambient")
	b.press("Down", "Down", "Up")
	want(b, `document.querySelector('#found [aria-selected=true]').textContent.includes('Diode')`, true)
	b.press("Enter")
	b.wait(`document.activeElement.id === 'f-diode.theta_ja'`)

	b.ctrlSlash()
	b.types("xyzzy")
	b.says("#found", "No entry is called that.")
	b.press("Enter") // goes nowhere, and sends nothing
	b.press("Escape")
	want(b, `document.getElementById('find-q').value + document.activeElement.id`, "find-q")
	b.press("Escape")
	b.wait(`document.activeElement.id === 'f-diode.theta_ja'`)
	want(b, `location.pathname + location.search`, frostSheet)
	if d := h.version(); d != 1 {
		t.Errorf("looking for entries made it version %d", d)
	}
}

func (h *host) version() int64 {
	h.t.Helper()
	d, err := h.store.Design(h.t.Context(), 2)
	if err != nil {
		h.t.Fatal(err)
	}
	return d.Version
}

func TestFindAnEntryByPointer(t *testing.T) {
	b := serve(t).visit(frostSheet)
	evaluate[chromedp.Void](b, `document.getElementById('find-q').focus()`)
	b.types("dcr")
	b.offered("Winding resistance")
	spot := evaluate[[]float64](b, `(r => [r.x + 20, r.y + 8])(document.querySelector('#found [role=option]').getBoundingClientRect())`)
	b.do(chromedp.MouseClickXY(spot[0], spot[1]))
	b.wait(`document.activeElement.id === 'f-inductor.dcr'`)
	want(b, inSight(field("inductor.dcr")), true)
}

func TestFindWithoutScripts(t *testing.T) {
	b := serve(t).tab()
	b.scriptless()
	b.open(frostSheet)
	b.tabTo(`e.id === 'find-q'`)
	b.types("gate voltage")
	b.press("Enter")
	b.wait(`location.pathname.endsWith('/find')`)
	b.drawn()
	b.picture("find-scriptless")
	b.tabTo(`e.matches('.found a') && e.textContent.includes('Gate voltage when off')`)
	b.press("Enter")
	b.wait(`location.hash === '#f-drive.voltage_off' && document.querySelector(':target')?.checkVisibility()`)
	b.drawn()
	want(b, inSight(":target"), true)
}
