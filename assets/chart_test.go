package assets

import (
	"encoding/json"
	"testing"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"
)

func TestChartsDraw(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	// Two axes have titles with units, the ticks are the ones meant.
	want(t, ctx, `['efficiency', 'stack'].map(id => [...document.querySelectorAll('#' + id + ' svg text')]
		.map(e => e.textContent).filter(s => s.includes(',')).sort().join('; ')).join(' | ')`,
		"efficiency, %; load, % of 2 A | load, % of 2 A; loss, W")
	want(t, ctx, `[...document.querySelectorAll('#efficiency svg text')].map(e => e.textContent).filter(s => /^\d{1,3}$/.test(s) && (s < 60 || s > 99)).join(' ')`, "5 10 20 50 100")
	// The dashed line breaks where its value is missing: two strokes, one path.
	want(t, ctx, `[...document.querySelectorAll('#efficiency g[stroke-dasharray="7 3"] path, #efficiency path[stroke-dasharray="7 3"]')].map(p => p.getAttribute('d').split('M').length - 1).join()`, "2")
	// Seven columns of six parts; the eighth says why it has none, totals carry their mark.
	want(t, ctx, `document.querySelectorAll('#stack svg rect').length`, 42)
	want(t, ctx, `['out of reach', '0.23', '1.48†', 'Copper and shunts'].every(s => [...document.querySelectorAll('#stack svg text')].some(e => e.textContent === s))`, true)
	// Held points are underlaid on one line only.
	want(t, ctx, `[...document.querySelectorAll('#efficiency [stroke-opacity="0.3"] path, #efficiency path[stroke-opacity="0.3"]')].filter(p => p.getAttribute('d')).length`, 1)
}

func TestChartNamesStayApart(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	for _, width := range []int64{1440, 900, 320} {
		resize(t, ctx, width)
		want(t, ctx, `[...document.querySelectorAll('loss-chart:not([kind=map])')].every(chart => {
			const names = [...chart.querySelectorAll('.names text')].map(e => e.getBoundingClientRect());
			const box = chart.getBoundingClientRect();
			return (names.length || chart.querySelector('.key li')) && names.every((a, i) =>
				a.right <= box.right + 1 && a.bottom <= box.bottom && a.top >= box.top &&
				names.every((b, j) => i === j || a.bottom <= b.top + 1 || b.bottom <= a.top + 1)) })`, true)
	}
}

func TestChartIsNamedOnce(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	want(t, ctx, `[...document.querySelectorAll('loss-chart .pane svg')].map(s => s.getAttribute('role') + ': ' + s.getAttribute('aria-label')).join(' | ')`,
		"img: Efficiency against load: efficiency, % over load, % of 2 A | img: Loss against load, by part: loss, W over load, % of 2 A | "+
			"img: Efficiency against revision 1: difference, percentage points over load, % of 2 A | "+
			"img: Efficiency over load and input voltage: input, V over load, % of 2 A")
	want(t, ctx, `document.querySelectorAll('loss-chart svg [aria-label]').length`, 0)
}

func TestChartCursor(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	reading := `document.querySelector('#stack .reading').textContent`
	pane := chromedp.CSS("#stack .pane")
	do(t, ctx, chromedp.Focus(pane), chromedp.KeyEvent(kb.Home))
	want(t, ctx, reading+`.replaceAll('\u00a0', ' ')`,
		"at 5 % — 0.23 W: Switch 0.0409, Rectifier 0.039, Inductor 0.0615, Capacitors 0.003, Drive and controller 0.081, Copper and shunts 0.00075")
	do(t, ctx, chromedp.KeyEvent(kb.ArrowRight))
	want(t, ctx, reading+`.startsWith('at 10\u00a0% — 0.27')`, true)
	do(t, ctx, chromedp.KeyEvent(kb.End))
	want(t, ctx, reading+`.replaceAll('\u00a0', ' ')`, "at 100 % — out of reach")
	do(t, ctx, chromedp.KeyEvent(kb.ArrowRight))
	want(t, ctx, `document.querySelectorAll('#stack .cursor').length`, 1)
	do(t, ctx, chromedp.KeyEvent(kb.Escape))
	want(t, ctx, `document.querySelectorAll('#stack .cursor').length`, 0)

	do(t, ctx, chromedp.Focus(chromedp.CSS("#efficiency .pane")), chromedp.KeyEvent(kb.Home), chromedp.KeyEvent(kb.PageDown), chromedp.KeyEvent(kb.PageDown))
	want(t, ctx, `document.querySelector('#efficiency .reading').textContent.replaceAll('\u00a0', ' ')`, "at 55 % — 12 V: 94.16 %, 14.4 V: 94.54 %, 10.5 V: 94.05 %")
	do(t, ctx, chromedp.KeyEvent(kb.End))
	want(t, ctx, `document.querySelector('#efficiency .reading').textContent.endsWith('†')`, true)
	want(t, ctx, `document.querySelectorAll('#efficiency .cursor circle').length`, 3)
}

func TestChartRedraws(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	// The middle of the ticks tells the scale: half way is 52.5 on a linear axis.
	do(t, ctx, chromedp.Evaluate[chromedp.Void](`document.querySelector('#efficiency').setAttribute('scale', 'lin')`))
	wait(t, ctx, `[...document.querySelectorAll('#efficiency svg text')].map(e => e.textContent).filter(s => /^\d0?0?$/.test(s)).join(' ').includes('0 20 40 60 80 100')`)
	// A narrower window: the drawing follows and its names go below.
	do(t, ctx, chromedp.EmulateViewport(320, 900))
	wait(t, ctx, `document.querySelectorAll('#stack .key li').length === 6 && document.querySelector('#stack svg').getBoundingClientRect().width < 320`)
	// No load with a figure: words instead of an empty frame.
	do(t, ctx, chromedp.Evaluate[chromedp.Void](`document.querySelector('#efficiency').setAttribute('data',
		'{"title":"t","x":{"label":"x"},"y":{"label":"y"},"series":[{"name":"a","dash":0,"points":[[1,null]]}]}')`))
	wait(t, ctx, `document.querySelector('#efficiency .empty')?.textContent === 'No load here has a figure.'`)
}

// Hostile names are text, and a class that is none of ours colours nothing.
func TestChartTakesNamesAsText(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	do(t, ctx, chromedp.Evaluate[chromedp.Void](`document.querySelector('#stack').setAttribute('data', JSON.stringify({
		title: '<img src=x onerror=alert(1)>', x: {label: 'x'}, y: {label: 'y'},
		parts: [{name: '<script>alert(1)</script>', cls: 'p-x); fill: url(//evil.test'}],
		columns: [{x: '</text><b>', values: [1], total: '<i>'}]}))`))
	wait(t, ctx, `[...document.querySelectorAll('#stack svg text')].some(e => e.textContent === '<script>alert(1)</script>')`)
	want(t, ctx, `document.querySelectorAll('#stack img, #stack script, #stack b, #stack svg [fill*=evil]').length`, 0)
}

func TestChartFollowsTheScheme(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	colour := `getComputedStyle(document.querySelector('#stack svg rect')).fill`
	want(t, ctx, colour, "rgb(165, 64, 46)")
	do(t, ctx, chromedp.Evaluate[chromedp.Void](`document.querySelector('#stack svg').id = 'first'`))
	media := emulation.SetEmulatedMediaParams{Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: "dark"}}}
	if _, err := chromedp.Call(ctx, emulation.SetEmulatedMedia, media); err != nil {
		t.Fatal(err)
	}
	want(t, ctx, colour, "rgb(217, 128, 108)")
	want(t, ctx, `document.querySelector('#stack svg').id`, "first") // not redrawn
}

func TestPointsAsText(t *testing.T) {
	got, err := json.Marshal([]Point{{X: 5, Y: 91.35}, {X: 10, Y: 1, None: true}, {X: 20, Y: 95, Outside: true}, {X: 30, None: true, Outside: true}})
	if want := "[[5,91.35],[10,null],[20,95,1],[30,null]]"; err != nil || string(got) != want {
		t.Errorf("%s, %v; want %s", got, err, want)
	}
}
