package assets

import (
	"bytes"
	"context"
	"encoding/xml"
	"fmt"
	"image/png"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	cdpbrowser "github.com/chromedp/cdproto/browser"
	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"
)

// download presses a chart's button by keyboard, and reads the file that comes.
func download(t *testing.T, ctx context.Context, chart, form string) (name string, content []byte) {
	t.Helper()
	folder := t.TempDir()
	params := cdpbrowser.SetDownloadBehaviorParams{Behavior: cdpbrowser.SetDownloadBehaviorBehaviorAllow,
		BrowserContextID: chromedp.FromContext(ctx).BrowserContextID, DownloadPath: folder}
	if _, err := chromedp.CallBrowser(ctx, cdpbrowser.SetDownloadBehavior, params); err != nil {
		t.Fatal(err)
	}
	button := fmt.Sprintf(`[...document.querySelectorAll('#%s .take button')].find(b => b.textContent === '%s')`, chart, form)
	want(t, ctx, button+`.focus() ?? document.activeElement === `+button, true)
	do(t, ctx, chromedp.KeyEvent(kb.Enter))
	for range 1500 {
		entries, err := os.ReadDir(folder)
		if err != nil {
			t.Fatal(err)
		}
		if len(entries) == 1 && !strings.HasSuffix(entries[0].Name(), ".crdownload") {
			content, err := os.ReadFile(filepath.Join(folder, entries[0].Name()))
			if err != nil {
				t.Fatal(err)
			}
			if len(content) > 0 {
				return entries[0].Name(), content
			}
		}
		time.Sleep(10 * time.Millisecond)
	}
	t.Fatalf("no %s of %s came: %s", form, chart, eval[string](t, ctx, `document.querySelector('#`+chart+` .reading').textContent`))
	return "", nil
}

// readXML returns the words of a well-formed document, and what in it names another
// file or a style that stands elsewhere.
func readXML(t *testing.T, content []byte) (words []string, loose []string) {
	t.Helper()
	decoder, text := xml.NewDecoder(bytes.NewReader(content)), false
	for {
		token, err := decoder.Token()
		if err == io.EOF {
			return words, loose
		}
		if err != nil {
			t.Fatalf("no XML: %v", err)
		}
		switch e := token.(type) {
		case xml.StartElement:
			text = e.Name.Local == "text" || e.Name.Local == "tspan"
			if slices.Contains([]string{"script", "image", "foreignObject", "a", "img", "use"}, e.Name.Local) {
				loose = append(loose, e.Name.Local)
			}
			for _, a := range e.Attr {
				if strings.Contains(a.Value, "var(") || strings.Contains(a.Value, "currentColor") || a.Name.Local == "class" || strings.HasPrefix(a.Name.Local, "on") ||
					strings.Contains(a.Value, "http") && a.Name.Local != "xmlns" && a.Name.Space != "xmlns" {
					loose = append(loose, e.Name.Local+" "+a.Name.Local+"="+a.Value)
				}
			}
		case xml.CharData:
			if text {
				words = append(words, string(e))
			}
		case xml.EndElement:
			text = false
		}
	}
}

// The charts of the gallery, each with words that must be on its picture.
var taken = map[string][]string{
	"efficiency": {"Efficiency against load", "efficiency, %", "14.4 V", "† underlaid: a curve held flat outside its range."},
	"stack":      {"Loss against load, by part", "Copper and shunts", "1.48†", "out of reach"},
	"difference": {"Efficiency against revision 1", "revision 4, “<i>” a long one", "+0.4"},
	"map":        {"Efficiency over load and input voltage", "over: <i>switch</i>, blocking voltage", "switch runs away", "90\u00a0%"},
}

const mark = "Night-frost mast, revision 3, 1 December 2026 · Lossbook"

func TestTakenAsSVG(t *testing.T) {
	windows := map[string]struct {
		width  int64
		scheme string
	}{"efficiency": {1440, "light"}, "stack": {320, "dark"}, "difference": {320, "light"}, "map": {900, "dark"}}
	for chart, window := range windows {
		t.Run(chart, func(t *testing.T) {
			ctx := openGallery(t, window.width, window.scheme)
			name, content := download(t, ctx, chart, "SVG")
			if name != "frost-mast-r3-"+map[string]string{"stack": "loss"}[chart]+strings.TrimPrefix(chart, "stack")+".svg" {
				t.Errorf("it is called %s", name)
			}
			got, loose := readXML(t, content)
			if len(loose) > 0 {
				t.Errorf("it does not stand alone: %q", loose[:min(5, len(loose))])
			}
			for _, want := range append(taken[chart], mark) {
				if !strings.Contains("|"+strings.Join(got, "|")+"|", "|"+want+"|") {
					t.Errorf("%q is not on it: %q", want, got)
				}
			}
			if fonts := bytes.Count(content, []byte("@font-face{")); fonts < 2 || fonts > 4 {
				t.Errorf("it holds %d fonts", fonts)
			}
			want(t, ctx, `document.querySelectorAll('.taking').length`, 0)
			keep(t, chart+".svg", content)
			standsAlone(t, chart, content)
		})
	}
}

// keep writes a file where -shots says; without the flag it does nothing.
func keep(t *testing.T, name string, content []byte) {
	t.Helper()
	if *shots != "" {
		if err := os.WriteFile(filepath.Join(*shots, name), content, 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

// standsAlone opens a file by itself: it is drawn on a light ground, in dark windows
// too, with the fonts it brings.
func standsAlone(t *testing.T, name string, content []byte) {
	t.Helper()
	tab, cancel := chromedp.NewContext(browser(), chromedp.WithNewBrowserContext())
	defer cancel()
	ctx, stop := context.WithTimeout(tab, 2*time.Minute)
	defer stop()
	do(t, tab)
	file := filepath.Join(t.TempDir(), "chart.svg")
	if err := os.WriteFile(file, content, 0o644); err != nil {
		t.Fatal(err)
	}
	do(t, ctx, chromedp.Navigate("file://"+file))
	got := eval[string](t, ctx, `document.fonts.ready.then(() => [document.documentElement.localName, getComputedStyle(document.querySelector('rect')).fill,
		[...document.querySelectorAll('text')].every(e => e.getBoundingClientRect().width > 0 && e.getBoundingClientRect().right <= document.documentElement.getBoundingClientRect().right),
		document.fonts.size >= 2 && [...document.fonts].every(f => f.status === 'loaded')].join(' '))`)
	if got != "svg rgb(247, 245, 239) true true" {
		t.Errorf("%s alone: %s", name, got)
	}
}

func TestTakenAsPNG(t *testing.T) {
	ctx := openGallery(t, 900, "dark")
	for chart := range taken {
		name, content := download(t, ctx, chart, "PNG")
		picture, err := png.Decode(bytes.NewReader(content))
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		size := picture.Bounds().Size()
		if size.X != 2*800 || size.Y < 2*300 {
			t.Errorf("%s: %v", name, size)
		}
		// Light ground at the corner, ink where the title is, many colours in the drawing.
		if r, g, b, a := picture.At(3, 3).RGBA(); r>>8 != 247 || g>>8 != 245 || b>>8 != 239 || a>>8 != 255 {
			t.Errorf("%s: the ground is %d %d %d %d", name, r>>8, g>>8, b>>8, a>>8)
		}
		dark, colours := 0, map[[3]uint32]bool{}
		for x := range size.X {
			for y := range size.Y {
				r, g, b, _ := picture.At(x, y).RGBA()
				colours[[3]uint32{r, g, b}] = true
				if y < 70 && r+g+b < 3*0x5000 {
					dark++
				}
			}
		}
		if dark < 500 || len(colours) < 20 {
			t.Errorf("%s: %d dark points in the title, %d colours", name, dark, len(colours))
		}
		keep(t, chart+".png", content)
	}
}

// Names that would break the file, or run in it, are text in it.
func TestTakenWithHostileNames(t *testing.T) {
	ctx := openGallery(t, 900, "light")
	do(t, ctx, chromedp.Evaluate[chromedp.Void](`document.querySelector('#stack').setAttribute('data', JSON.stringify({
		title: '<img src=x onerror=alert(1)> ]]> &amp;', x: {label: '"x"'}, y: {label: "'y'"},
		parts: [{name: '<script>alert(1)</script>\u0001\ud800', cls: 'p-x); fill: url(//evil.test'}],
		columns: [{x: '</text><b>', values: [1], total: '<i>'}]}))`))
	wait(t, ctx, `document.querySelector('#stack svg').getAttribute('aria-label').startsWith('<img')`)
	_, content := download(t, ctx, "stack", "SVG")
	words, loose := readXML(t, content)
	all := "|" + strings.Join(words, "|") + "|"
	for _, want := range []string{"<img src=x onerror=alert(1)> ]]> &amp;", "<script>alert(1)</script>\ufffd\ufffd", "</text><b>", "<i>"} {
		if !strings.Contains(all, "|"+want+"|") {
			t.Errorf("%q is not among %q", want, words)
		}
	}
	if len(loose) > 0 || bytes.Contains(content, []byte("evil.test")) {
		t.Errorf("%q", loose)
	}
	download(t, ctx, "stack", "PNG")
}

func TestTakingIsQuiet(t *testing.T) {
	ctx := openGallery(t, 900, "light")
	want(t, ctx, `[...document.querySelectorAll('#map .take button')].map(b => b.getAttribute('aria-label')).join('; ')`,
		"Save “Efficiency over load and input voltage” as SVG; Save “Efficiency over load and input voltage” as PNG")
	// Nothing to save where nothing is drawn.
	do(t, ctx, chromedp.Evaluate[chromedp.Void](`document.querySelector('#efficiency').setAttribute('data',
		'{"title":"t","x":{"label":"x"},"y":{"label":"y"},"series":[{"name":"a","dash":0,"points":[[1,null]]}]}')`))
	wait(t, ctx, `document.querySelector('#efficiency .take').hidden && !document.querySelector('#map .take').hidden`)
	// A font that does not come: it is said, and nothing is left on the page.
	do(t, ctx, chromedp.Evaluate[chromedp.Void](`{ window.fetch = () => Promise.resolve({ok: false, statusText: 'gone'}); document.querySelector('#map .take button').click() }`))
	wait(t, ctx, `document.querySelector('#map .reading').textContent.startsWith('The SVG could not be made')`)
	want(t, ctx, `document.querySelectorAll('.taking').length`, 0)
}
