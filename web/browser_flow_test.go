package web

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	cdpbrowser "github.com/chromedp/cdproto/browser"
	"github.com/chromedp/chromedp"
)

const (
	efficiency = `.head strong`
	frost      = `e.matches('table.list th a') && e.textContent.includes('Night-frost')`
)

// conduction is the ledger's row of the switch's conduction.
const conduction = `[...document.querySelectorAll('.ledger tr.p-switch')].find(r => r.textContent.trim().startsWith('conduction')).textContent`

func TestMainFlowByKeyboard(t *testing.T) {
	b := serve(t).visit("/")
	b.tabTo(frost)
	b.press("Enter")
	b.says("h1", "Night-frost")
	b.drawn()
	b.changeSwitch()
	b.readCurve()
	b.keepFirst()
	b.downloadCSV()
}

// The same without scripts: the button computes, and every step is a page.
func TestMainFlowWithoutScripts(t *testing.T) {
	b := serve(t).tab()
	b.scriptless()
	b.open("/")
	b.tabTo(frost)
	b.press("Enter")
	b.says("h1", "Night-frost")
	b.drawn()
	b.recompute()
	b.correct()
	b.keepFirst()
	b.downloadCSV()
}

func (b *tab) changeSwitch() {
	b.t.Helper()
	before, row := b.text(efficiency), evaluate[string](b, conduction)
	b.enter("switch.rds_on", "20m")
	b.wait(`document.querySelector('` + efficiency + `').textContent.trim() !== '` + before + `'`)
	if got := evaluate[string](b, conduction); got == row {
		b.t.Errorf("the ledger still says %s", got)
	}
	b.wait(`document.activeElement.id === 'f-switch.rds_on'`)
}

// readCurve moves a chart's cursor by the arrows.
func (b *tab) readCurve() {
	b.t.Helper()
	b.tabTo(`e.matches('loss-chart .pane')`)
	b.press("Right", "Right")
	first := b.text(`loss-chart .reading`)
	b.press("Right")
	if next := b.text(`loss-chart .reading`); first == "" || next == first {
		b.t.Errorf("the cursor reads %q, then %q", first, next)
	}
}

// recompute changes a value where there is no script to send it.
func (b *tab) recompute() {
	b.t.Helper()
	before, row := b.text(efficiency), evaluate[string](b, conduction)
	b.enter("switch.rds_on", "20m")
	b.backTo(saying("Recompute"))
	b.press("Enter")
	b.wait(`document.querySelector('` + efficiency + `').textContent.trim() !== '` + before + `'`)
	b.drawn()
	if got := evaluate[string](b, conduction); got == row {
		b.t.Errorf("the ledger still says %s", got)
	}
}

// correct goes through an error: the summary takes the focus, its link leads to
// the entry, and the right value gets through.
func (b *tab) correct() {
	b.t.Helper()
	b.expect("status of 422")
	b.enter("switch.rds_on", "4k7x")
	b.press("Enter")
	b.wait(`document.title.startsWith('Error:')`)
	b.drawn()
	b.wait(`document.activeElement.matches('.errors')`)
	want(b, `document.querySelector('.stale').textContent.includes('Last good answer')`, true)
	b.tabTo(`e.matches('.errors a')`)
	b.press("Enter")
	b.wait(`document.activeElement.id === 'f-switch.rds_on'`)
	want(b, `document.activeElement.value`, "4k7x")
	want(b, `document.activeElement.getAttribute('aria-invalid')`, "true")
	want(b, `document.activeElement.getAttribute('aria-describedby').split(' ').some(id => document.getElementById(id)?.matches('.err'))`, true)
	b.press("Tab", "Shift+Tab") // arriving selects
	b.types("12m")
	b.press("Enter")
	b.wait(`!document.title.startsWith('Error:') && !document.querySelector('.errors') && document.querySelector('.head strong')`)
	want(b, `document.querySelector('.stale') === null`, true)
}

// keepFirst keeps the first revision with a note and opens it.
func (b *tab) keepFirst() {
	b.t.Helper()
	b.backTo(entry("note.revision"))
	b.types("cooler switch")
	b.tabTo(saying("Keep as revision 1"))
	b.press("Enter")
	b.says(".notice", "Kept as revision 1.")
	b.wait(`document.activeElement.matches('.notice')`)
	b.tabTo(`e.matches('#kept summary')`)
	b.press("Enter")
	b.tabTo(`e.matches('#kept a')`)
	b.press("Enter")
	b.wait(`location.pathname.endsWith('/revisions/1')`)
	b.says(".since", "cooler switch")
}

// downloadCSV takes the table along from a revision.
func (b *tab) downloadCSV() {
	b.t.Helper()
	folder := b.t.TempDir()
	params := cdpbrowser.SetDownloadBehaviorParams{Behavior: cdpbrowser.SetDownloadBehaviorBehaviorAllow,
		BrowserContextID: chromedp.FromContext(b.ctx).BrowserContextID, DownloadPath: folder}
	if _, err := chromedp.CallBrowser(b.ctx, cdpbrowser.SetDownloadBehavior, params); err != nil {
		b.t.Fatal(err)
	}
	b.tabTo(`e.matches('.take a[href$="efficiency.csv"]')`)
	b.press("Enter")
	b.t.Log(awaitFile(b.t, folder))
}

// awaitFile waits for a whole table in the folder and checks its first line.
func awaitFile(t *testing.T, folder string) string {
	t.Helper()
	for range 500 {
		files, err := filepath.Glob(filepath.Join(folder, "*.csv"))
		if err != nil {
			t.Fatal(err)
		}
		if len(files) == 1 {
			content, err := os.ReadFile(files[0])
			if lines := strings.Split(strings.TrimSpace(string(content)), "\n"); err == nil && len(lines) == 25 && strings.HasPrefix(lines[0], "vin_V,iout_A") {
				return filepath.Base(files[0])
			}
		}
		time.Sleep(10 * time.Millisecond)
	}
	t.Fatal("no table of 24 points was downloaded")
	return ""
}

func TestNewDesignByKeyboard(t *testing.T) {
	for name, scripts := range map[string]bool{"with scripts": true, "without scripts": false} {
		t.Run(name, func(t *testing.T) {
			b := serve(t).tab()
			if !scripts {
				b.scriptless()
			}
			b.open("/")
			b.specify()
		})
	}
}

// specify starts a design from a specification, a wrong one first.
func (b *tab) specify() {
	b.t.Helper()
	b.expect("status of 422")
	b.enter("name", "Weather balloon")
	b.tabTo(entry("topology"))
	b.press("Down", "Down")
	topology := b.value("topology")
	b.tabTo(entry("rectifier"))
	b.press("Down")
	for _, value := range [][2]string{{"input.min", "36"}, {"input.nominal", "48 V"}, {"input.max", "4k7x"}, {"output.voltage", "12"}, {"output.current", "3"}, {"frequency", "200k"}} {
		b.enter(value[0], value[1])
	}
	b.press("Enter")
	b.wait(`document.title.startsWith('Error:')`)
	b.drawn()
	b.wait(`document.activeElement.matches('.errors')`)
	b.tabTo(`e.matches('.errors a')`)
	b.press("Enter")
	b.wait(`document.activeElement.id === 'f-input.max'`)
	want(b, `document.activeElement.value`, "4k7x")
	if got := b.value("topology"); got != topology {
		b.t.Errorf("the topology fell back to %s", got)
	}
	b.press("Tab", "Shift+Tab")
	b.types("60")
	b.press("Enter")
	b.says("h1", "Weather balloon")
	b.says("#answers", "What the parts must stand")
	b.says("#answers", "Still missing for a budget")
	b.tabTo(`e.matches('.lacks a')`)
	b.press("Enter")
	b.wait(`document.activeElement.matches('#fields input, #fields select')`)
}
