package assets

import (
	"strings"
	"testing"

	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"
)

const readsMap = `document.querySelector('#map .reading').textContent.replaceAll('\u00a0', ' ')`

func TestMapDraws(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	// Every point that has a figure is shaded, once; no other is.
	want(t, ctx, `(() => {
		const data = JSON.parse(document.querySelector('#map').getAttribute('data'));
		const shades = [...document.querySelectorAll('#map .shades rect')];
		const [width, height] = [Math.min(...shades.map(r => r.getAttribute('width'))), shades[0].getAttribute('height')];
		const area = shades.reduce((sum, r) => sum + r.getAttribute('width') * r.getAttribute('height'), 0);
		const plot = document.querySelector('#map svg').getBoundingClientRect();
		const cell = (plot.width - 42 - 14) / data.loads.length * height;
		return Math.round(area / cell) + ' of ' + data.values.filter(v => v !== null).length })()`, "1024 of 1024")
	// Axes with units, areas named where they are, the word before each.
	words := eval[string](t, ctx, `[...document.querySelectorAll('#map svg text')].map(e => e.textContent).join('|')`)
	for _, want := range []string{"load, % of 2 A", "input, V", "out of reach", "switch runs away", "over: rectifier, junction temperature", "over: <i>switch</i>, blocking voltage", "near: inductor, saturation", "90\u00a0%"} {
		if !strings.Contains("|"+words+"|", "|"+want+"|") {
			t.Errorf("%q is not on the map: %s", want, words)
		}
	}
	want(t, ctx, `document.querySelectorAll('#map i, #map svg img').length`, 0)
}

// Each label of a contour stands where the data has its value: between the values of
// the points around it.
func TestMapContoursTellTheTruth(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	wrong := eval[[]string](t, ctx, `(() => {
		const data = JSON.parse(document.querySelector('#map').getAttribute('data'));
		const svg = document.querySelector('#map svg'), width = +svg.getAttribute('width'), height = +svg.getAttribute('height');
		const nx = data.loads.length, ny = data.vins.length, wrong = [];
		for (const label of svg.querySelectorAll('text.value')) {
			const x = (label.getAttribute('x') - 42) / (width - 42 - 14) * nx - 0.5, y = (height - 42 - label.getAttribute('y')) / (height - 26 - 42) * ny - 0.5;
			const near = [];
			for (const i of [Math.floor(x), Math.ceil(x)]) for (const j of [Math.floor(y), Math.ceil(y)]) {
				const v = data.values[Math.max(0, Math.min(ny - 1, j)) * nx + Math.max(0, Math.min(nx - 1, i))];
				if (v !== null) near.push(v);
			}
			const value = parseFloat(label.textContent);
			if (!(Math.min(...near) - 0.02 <= value && value <= Math.max(...near) + 0.02)) wrong.push(value + ' among ' + near);
		}
		return svg.querySelectorAll('text.value').length < 5 ? ['too few labels'] : wrong })()`)
	if len(wrong) > 0 {
		t.Error(wrong)
	}
}

// Shades are darker, or in the dark lighter, the more is lost: one after the other.
func TestMapShadesRise(t *testing.T) {
	for scheme, sign := range map[string]int{"light": -1, "dark": 1} {
		ctx := openGallery(t, 900, scheme)
		want(t, ctx, `(() => {
			const seen = new Map([...document.querySelectorAll('#map .shades rect')].map(r => [r.getAttribute('fill'), getComputedStyle(r).fill]));
			const light = (rgb) => rgb.match(/\d+/g).reduce((sum, c, i) => sum + c * [0.2126, 0.7152, 0.0722][i], 0);
			const ladder = [...seen].sort((a, b) => a[0] < b[0] ? -1 : 1).map(([, rgb]) => light(rgb));
			return ladder.length > 5 && ladder.every((v, i) => !i || Math.sign(v - ladder[i - 1]) === `+map[int]string{-1: "-1", 1: "1"}[sign]+`) })()`, true)
	}
}

func TestMapCursor(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	pane := chromedp.CSS("#map .pane")
	// The first key stops at the point that is looked at, the others go from there.
	do(t, ctx, chromedp.Focus(pane), chromedp.KeyEvent(kb.ArrowRight))
	want(t, ctx, readsMap, "at 50.09 %, 24 V — 93.46 %, loss 0.8415 W. Over: rectifier, junction temperature. Near: inductor, saturation")
	do(t, ctx, chromedp.KeyEvent(kb.ArrowUp))
	want(t, ctx, readsMap+`.startsWith('at 50.09 %, 25 V — ')`, true)
	do(t, ctx, chromedp.KeyEvent(kb.ArrowDown), chromedp.KeyEvent(kb.ArrowDown))
	want(t, ctx, readsMap+`.startsWith('at 50.09 %, 23 V — ')`, true)
	do(t, ctx, chromedp.KeyEvent(kb.ArrowLeft))
	want(t, ctx, readsMap+`.startsWith('at 46.39 %, 23 V — ')`, true)
	do(t, ctx, chromedp.KeyEvent(kb.End), chromedp.KeyEvent(kb.ArrowRight))
	want(t, ctx, readsMap, "at 100 %, 23 V — 92.2 %, loss 2.03 W. Over: rectifier, junction temperature. Near: inductor, saturation")
	do(t, ctx, chromedp.KeyEvent(kb.PageDown), chromedp.KeyEvent(kb.ArrowDown))
	want(t, ctx, readsMap, "at 100 %, 12 V — no figure: out of reach")
	do(t, ctx, chromedp.KeyEvent(kb.ArrowUp), chromedp.KeyEvent(kb.ArrowUp))
	want(t, ctx, readsMap, "at 100 %, 14 V — no figure: switch runs away")
	do(t, ctx, chromedp.KeyEvent(kb.Home), chromedp.KeyEvent(kb.PageUp), chromedp.KeyEvent(kb.PageUp), chromedp.KeyEvent(kb.PageUp))
	want(t, ctx, readsMap+`.startsWith('at 5 %, 38 V — 67.27 %†, loss')`, true)
	want(t, ctx, `document.querySelectorAll('#map .cursor circle').length`, 1)
	do(t, ctx, chromedp.KeyEvent(kb.Escape))
	want(t, ctx, readsMap, "Arrow keys or pointer read the values. Ring: 50 %, 24 V. Hatched: over a limit. Dashed: near one. † a curve held flat outside its range.")
	// The pointer finds the nearest point in both directions.
	want(t, ctx, `(() => {
		const pane = document.querySelector('#map .pane'), box = pane.getBoundingClientRect();
		pane.dispatchEvent(new PointerEvent('pointermove', {clientX: box.left + 44, clientY: box.top + 28}));
		return `+readsMap+`.startsWith('at 5 %, 38 V') })()`, true)
}

// Names that have room keep off each other at every width.
func TestMapNamesStayApart(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	for _, width := range []int64{1440, 900, 320} {
		resize(t, ctx, width)
		want(t, ctx, `(() => {
			const box = document.querySelector('#map svg').getBoundingClientRect();
			const names = [...document.querySelectorAll('#map .map text')].map(e => e.getBoundingClientRect());
			return names.length > 3 && names.every((a, i) => a.left >= box.left && a.right <= box.right + 1 &&
				names.every((b, j) => i === j || a.right <= b.left || b.right <= a.left || a.bottom <= b.top + 3 || b.bottom <= a.top + 3)) })()`, true)
	}
}

func TestMapWithoutFigures(t *testing.T) {
	ctx := openGallery(t, 900, "light")
	do(t, ctx, chromedp.Evaluate[chromedp.Void](`{
		const map = document.querySelector('#map'), data = JSON.parse(map.getAttribute('data'));
		data.values = data.values.map(() => null);
		map.setAttribute('data', JSON.stringify(data)) }`))
	wait(t, ctx, `document.querySelector('#map .empty')?.textContent === 'No point of this map has a figure.'`)
	// One value everywhere has no contour, and is shaded as the best.
	do(t, ctx, chromedp.Evaluate[chromedp.Void](`{
		const map = document.querySelector('#map'), data = JSON.parse(map.getAttribute('data'));
		data.values = data.values.map(() => 90);
		data.unsettled = [];
		map.setAttribute('data', JSON.stringify(data)) }`))
	wait(t, ctx, `document.querySelectorAll('#map .shades rect').length === 30 && !document.querySelector('#map text.value')`)
	want(t, ctx, `[...document.querySelectorAll('#map .shades rect')].every(r => r.getAttribute('fill') === 'var(--m0)')`, true)
}
