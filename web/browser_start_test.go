package web

import (
	"bytes"
	"testing"

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

func TestPagesPrint(t *testing.T) {
	h := serve(t)
	h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "first"})
	b := h.tab()
	for _, path := range []string{"/", frostSheet, frostSheet + "/revisions/1"} {
		b.open(path)
		pdf, err := chromedp.Run(b.ctx, chromedp.PrintToPDF(chromedp.PDFPreferCSSPageSize()))
		if err != nil {
			t.Fatal(err)
		}
		if n := bytes.Count(pdf, []byte("/Type /Page\n")); n < 1 {
			t.Errorf("%s prints %d pages", path, n)
		}
	}
}
