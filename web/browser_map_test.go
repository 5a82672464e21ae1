package web

import (
	"bytes"
	"image/png"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	cdpbrowser "github.com/chromedp/cdproto/browser"
	"github.com/chromedp/chromedp"
)

const mapDrawn = `document.querySelectorAll('#map loss-chart .shades rect').length > 50 && !document.querySelector('loss-later').matches(':state(late)')`

// The map is opened by keyboard, stands in the address, is read with the arrow keys,
// and follows an edit after the edit's own answer.
func TestMapByKeyboard(t *testing.T) {
	h := serve(t)
	b := h.visit(frostSheet)
	want(b, `document.querySelector('loss-later') === null`, true)
	b.tabTo(saying("open") + ` && e.closest('#map')`)
	b.press("Enter")
	b.wait(mapDrawn)
	want(b, `location.search`, "?chart=map")
	b.tabTo(`e.matches('#map .pane')`)
	b.press("Left")
	b.says("#map .reading", "at 100 %, 12 V — 95.41 %, loss 2.309 W")
	b.press("Up", "Left")
	b.says("#map .reading", "at 95.05 %, 12.1 V — 95.")

	before := evaluate[string](b, `document.querySelector('#map loss-chart').getAttribute('data')`)
	b.edits()
	b.wait(`document.querySelector('#map loss-chart').getAttribute('data') !== ` + "`" + before + "`")
	b.wait(mapDrawn)
	want(b, `location.search`, "?chart=map")

	// The copied address opens the same, in a window that knows nothing.
	again := h.visit(frostSheet + "?chart=map")
	again.wait(mapDrawn)
	want(again, `document.querySelector('#map loss-chart').getAttribute('data')`, evaluate[string](b, `document.querySelector('#map loss-chart').getAttribute('data')`))
	b.click(saying("close") + ` && e.closest('#map')`)
	b.wait(`!document.querySelector('loss-later')`)
	want(b, `location.search`, "")
}

// edits changes an entry and waits for the answer.
func (b *tab) edits() {
	b.t.Helper()
	before := b.text(".head strong")
	b.replace("switch.rds_on", "22m")
	b.wait(`document.querySelector('.head strong').textContent !== '` + before + `'`)
}

// A map with everything on it, on its sheet and alone, stands before the same rules as
// every page, and fits narrow windows.
func TestMapIsAccessible(t *testing.T) {
	axe, err := os.ReadFile("../testdata/vendor/axe.min.js")
	if err != nil {
		t.Fatal(err)
	}
	h := serve(t)
	h.call(201, "POST", "/designs", designRequest{rough(t)})
	for name, path := range map[string]string{"map": "/designs/4?chart=map", "map alone": "/designs/4/map?scale=lin"} {
		b := h.visit(path)
		b.wait(`document.querySelectorAll('#chart-map .shades rect').length > 50`)
		b.do(chromedp.Evaluate[chromedp.Void](string(axe)))
		for _, scheme := range []string{"light", "dark"} {
			b.scheme(scheme)
			b.picture(name + "-" + scheme)
			evaluate[chromedp.Void](b, `document.querySelector('#chart-map-numbers').open = true`)
			b.judge(name+", "+scheme, 8, `'wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'`)
		}
		b.size(320, 900, 1)
		b.wait(`Math.abs(document.querySelector('#chart-map svg').getBoundingClientRect().width - document.querySelector('#chart-map loss-chart').clientWidth) < 1`)
		want(b, `document.documentElement.scrollWidth`, 320)
		b.picture(name + "-320")
	}
}

// An edit's answer is on the sheet while the map is still on its way.
func TestMapDoesNotHoldUpAnEdit(t *testing.T) {
	h := serve(t)
	b := h.visit(frostSheet + "?chart=map")
	b.wait(mapDrawn)
	evaluate[chromedp.Void](b, `{
		const real = window.fetch;
		window.fetch = (address, ...rest) => String(address).includes('/map') ? new Promise((go) => { window.letGo = () => go(real(address, ...rest)) }) : real(address, ...rest) }`)
	b.edits()
	b.wait(`window.letGo && document.querySelector('loss-later').matches(':state(late)')`)
	want(b, `document.querySelectorAll('#map loss-chart .shades rect').length > 50`, true)
	evaluate[chromedp.Void](b, `letGo()`)
	b.wait(mapDrawn)
}

func TestMapFetchFails(t *testing.T) {
	h := serve(t)
	b := h.visit(frostSheet + "?chart=map")
	b.wait(mapDrawn)
	evaluate[chromedp.Void](b, `{
		const real = window.fetch;
		window.fetch = (address, ...rest) => String(address).includes('/map') ? Promise.reject(new TypeError('gone')) : real(address, ...rest) }`)
	b.edits()
	b.says("#map .failed", "could not be fetched")
	want(b, `document.querySelectorAll('#map loss-chart .shades rect').length > 50`, true)
}

func TestMapWithoutScripts(t *testing.T) {
	h := serve(t)
	b := h.tab()
	b.scriptless()
	b.do(chromedp.Navigate("http://" + h.address + frostSheet))
	b.click(saying("open") + ` && e.closest('#map')`)
	b.wait(`document.querySelector('#chart-map-numbers table')`)
	want(b, `document.querySelector('#map loss-chart').clientHeight`, 0)
	want(b, `document.querySelector('#chart-map-numbers table').getBoundingClientRect().height > 100`, true)
	want(b, `document.querySelectorAll('.take button').length`, 0)
	b.picture("map-without-scripts")
}

// Every chart of a page is saved under the design's name, and says whose it is.
func TestChartsAreSaved(t *testing.T) {
	h := serve(t)
	h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "first"})
	b := h.visit(frostSheet + "/revisions/1?chart=map")
	b.wait(mapDrawn)
	for _, c := range []struct{ chart, form, name string }{
		{"chart-efficiency", "SVG", "night-frost-mast-siren-and-strobe-rail-r1-efficiency.svg"},
		{"chart-loss", "PNG", "night-frost-mast-siren-and-strobe-rail-r1-loss.png"},
		{"chart-map", "SVG", "night-frost-mast-siren-and-strobe-rail-r1-map.svg"},
		{"chart-waves", "SVG", "night-frost-mast-siren-and-strobe-rail-r1-waves.svg"},
	} {
		name, content := b.saved(`document.querySelector('#` + c.chart + ` .take button:nth-child(` + map[string]string{"SVG": "1", "PNG": "2"}[c.form] + `)')`)
		if *shots != "" {
			os.WriteFile(filepath.Join(*shots, name), content, 0o644)
		}
		if name != c.name {
			t.Errorf("it is called %s, want %s", name, c.name)
		}
		if c.form == "SVG" {
			if text := string(content); !strings.Contains(text, "strobe rail · revision 1 · ") || !strings.Contains(text, "<text") {
				t.Errorf("%s does not say whose it is", name)
			} else if strings.Contains(text, "var(") || strings.Contains(text, "currentColor") || strings.Contains(text, "class=") {
				t.Errorf("%s does not stand alone", name)
			}
		} else if picture, err := png.Decode(bytes.NewReader(content)); err != nil || picture.Bounds().Dx() != 1600 {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// saved presses a button and reads the file that it saves.
func (b *tab) saved(button string) (name string, content []byte) {
	b.t.Helper()
	folder := b.t.TempDir()
	params := cdpbrowser.SetDownloadBehaviorParams{Behavior: cdpbrowser.SetDownloadBehaviorBehaviorAllow,
		BrowserContextID: chromedp.FromContext(b.ctx).BrowserContextID, DownloadPath: folder}
	if _, err := chromedp.CallBrowser(b.ctx, cdpbrowser.SetDownloadBehavior, params); err != nil {
		b.t.Fatal(err)
	}
	evaluate[chromedp.Void](b, button+`.click()`)
	for range 2000 {
		entries, err := os.ReadDir(folder)
		if err != nil {
			b.t.Fatal(err)
		}
		if len(entries) == 1 && !strings.HasSuffix(entries[0].Name(), ".crdownload") {
			if content, err = os.ReadFile(filepath.Join(folder, entries[0].Name())); err != nil {
				b.t.Fatal(err)
			}
			if len(content) > 0 {
				return entries[0].Name(), content
			}
		}
		time.Sleep(10 * time.Millisecond)
	}
	b.t.Fatal("nothing was saved")
	return "", nil
}
