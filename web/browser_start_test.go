package web

import (
	"bytes"
	"testing"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/chromedp"
)

// samplesShown counts the badged lines of the list.
const samplesShown = `[...document.querySelectorAll('table.list tbody tr')].filter(r => r.querySelector('.badge')?.textContent === 'sample').length`

func TestSamplesAreRemovedInOneClickAndStayAway(t *testing.T) {
	h := serve(t)
	b := h.visit("/")
	want(b, samplesShown, 3)
	b.picture("first-start")
	remove := `e.getAttribute('aria-label')?.startsWith('Remove the sample Night-frost')`
	gone := `!document.querySelector('table.list').textContent.includes('Night-frost')`
	b.click(remove)
	b.says(".notice", "Removed “Night-frost")
	want(b, gone, true)
	b.click(saying("Undo"))
	b.wait(samplesShown + ` === 3`)
	b.click(remove)
	b.says(".notice", "Removed “Night-frost")
	h.stop()
	h.start()
	b.open("/")
	want(b, samplesShown, 2)
	want(b, gone, true)
}

// On paper nothing is left that is only for a screen, and each page says what it
// is of.
func TestPagesPrint(t *testing.T) {
	h := serve(t)
	h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "first"})
	b := h.tab()
	for path, mark := range map[string]string{frostSheet: "revision 1", frostSheet + "/revisions/1": "revision 1"} {
		b.open(path)
		pdf, err := chromedp.Run(b.ctx, chromedp.PrintToPDF(chromedp.PDFPreferCSSPageSize()))
		if err != nil {
			t.Fatal(err)
		}
		if n := bytes.Count(pdf, []byte("/Type /Page\n")); n < 1 {
			t.Errorf("%s prints %d pages", path, n)
		}
		if _, err := chromedp.Call(b.ctx, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{Media: "print"}); err != nil {
			t.Fatal(err)
		}
		want(b, `[...document.querySelectorAll('nav, button, .notice, .skip')].some(e => e.checkVisibility())`, false)
		want(b, `(e => e.checkVisibility() && e.textContent.includes('`+mark+`') && e.textContent.includes('Night-frost'))(document.querySelector('.printmark'))`, true)
		want(b, `getComputedStyle(document.querySelector('.ledger thead')).display`, "table-header-group")
	}
}
