package web

import (
	"fmt"
	"testing"

	"github.com/chromedp/chromedp"
)

func TestTwoTabsCannotOverwriteEachOther(t *testing.T) {
	for name, way := range map[string]struct{ button, kept string }{
		"keep mine":   {"Keep mine instead", "12m"},
		"take theirs": {"Load the other and drop mine", "15m"},
	} {
		t.Run(name, func(t *testing.T) {
			h := serve(t)
			mine, theirs := h.visit(frostSheet), h.visit(frostSheet)
			theirs.replace("switch.rds_on", "15m")
			h.awaitKept("switch.rds_on", "15m")
			mine.expect("status of 409")
			mine.replace("switch.rds_on", "12m")
			mine.says("#trouble", "This design was changed in another window")
			want(mine, `document.activeElement.id + ' ' + document.activeElement.value`, "f-switch.rds_on 12m")
			mine.picture("sheet-stale")
			mine.click(saying(way.button))
			mine.wait(`document.readyState === 'complete' && !document.querySelector('#trouble .errors')`)
			h.awaitKept("switch.rds_on", way.kept)
			if got := mine.value("switch.rds_on"); got != way.kept {
				t.Errorf("the sheet shows %q", got)
			}
			mine.replace("frequency", "210k") // and it goes on
			h.awaitKept("frequency", "210k")
		})
	}
}

func TestStoppedServerIsSaidAndNothingIsLost(t *testing.T) {
	h := serve(t)
	b := h.visit(frostSheet)
	b.expect("Failed to fetch", "ERR_CONNECTION_REFUSED")
	evaluate[chromedp.Void](b, `window.unanswered = 0; document.addEventListener('htmx:error', () => unanswered++)`)
	h.stop()
	b.replace("switch.rds_on", "12m")
	b.says("#trouble", "Lossbook does not answer")
	want(b, `document.querySelector('#trouble [data-silence]').checkVisibility()`, true)
	want(b, `document.activeElement.id + ' ' + document.activeElement.value`, "f-switch.rds_on 12m")
	want(b, `dispatchEvent(new Event('beforeunload', {cancelable: true}))`, false) // it would ask before it leaves
	heard := evaluate[int](b, `unanswered`)
	b.replace("frequency", "210k")
	b.wait(fmt.Sprintf(`unanswered > %d`, heard)) // so that only sending again helps
	b.picture("sheet-silent")
	h.start()
	b.wait(`!document.querySelector('#trouble').textContent.trim()`)
	h.awaitKept("switch.rds_on", "12m")
	h.awaitKept("frequency", "210k")
	want(b, `dispatchEvent(new Event('beforeunload', {cancelable: true}))`, true)
}

// Choosing another point needs the server too, on a revision as on a sheet.
func TestStoppedServerIsSaidOnARevision(t *testing.T) {
	h := serve(t)
	h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "first"})
	b := h.visit(frostSheet + "/revisions/1")
	b.expect("Failed to fetch", "ERR_CONNECTION_REFUSED")
	h.stop()
	choose := `e.matches('.ledger thead a') && e.textContent.trim() === '50'`
	b.click(choose)
	b.says("#trouble", "Lossbook does not answer")
	h.start()
	b.click(choose)
	b.wait(`!document.querySelector('#trouble').textContent.trim() && location.search.includes('load=')`)
}

// The address holds the view, so a reload shows the same and back leads back.
func TestBackLeadsToThePointBefore(t *testing.T) {
	b := serve(t).visit(frostSheet)
	before := b.text(efficiency)
	b.click(`e.matches('.ledger thead a') && e.textContent.trim() === '50'`)
	b.wait(`document.querySelector('` + efficiency + `').textContent.trim() !== '` + before + `'`)
	there := b.text(efficiency)
	b.do(chromedp.Reload())
	b.drawn()
	if got := b.text(efficiency); got != there {
		t.Errorf("the same address shows %s, then %s", there, got)
	}
	b.do(chromedp.NavigateBack())
	b.wait(`document.querySelector('` + efficiency + `')?.textContent.trim() === '` + before + `'`)
}
