package assets

import (
	"context"
	"encoding/json"
	"fmt"
	"testing"

	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"
)

// awkwardWaves has a rest, a reversing current, a first interval too short for its
// name, a row of nothing, and a level of a row far from its others.
func awkwardWaves() Waves {
	level := func(name, text string, v float64, dash int) Level { return Level{name, text, v, dash} }
	return Waves{
		Title: "Waveforms", X: Axis{"time, ns", "ns"}, Y: Axis{"currents and switch voltage", ""}, Period: 800,
		Intervals: []Interval{{"t1", 0, 4}, {"t2", 4, 9}, {"t3", 9, 800}},
		Rows: []Wave{
			{"Inductor current, mA", "inductor", "p-inductor", "mA", [][2]float64{{0, -2}, {4, 730}, {9, -2}, {800, -2}},
				[]Level{level("peak", "730", 730, 2), level("rms", "44", 44, 1), level("mean", "2", 2, 0), level("valley", "-2", -2, 2)}},
			{"Nothing, mA", "nothing", "p-switch", "mA", [][2]float64{{0, 0}, {800, 0}}, []Level{level("peak", "0", 0, 2), level("rms", "0", 0, 1), level("mean", "0", 0, 0)}},
			{"Switch voltage, V", "across", "p-x); fill: url(//evil.test", "V", [][2]float64{{0, 0}, {4, 0}, {4, 812}, {9, 812}, {9, 400}, {800, 400}},
				[]Level{level("peak", "812", 812, 2), level("rms", "404", 404, 1), level("<b>mean</b>", "398", 398, 0)}},
		},
	}
}

// showWaves turns the second chart of the gallery into waveforms.
func showWaves(t *testing.T, ctx context.Context) {
	t.Helper()
	text, err := json.Marshal(awkwardWaves())
	if err != nil {
		t.Fatal(err)
	}
	quoted, _ := json.Marshal(string(text))
	do(t, ctx, chromedp.Evaluate[chromedp.Void](fmt.Sprintf(`(c => { c.setAttribute('kind', 'waves'); c.setAttribute('data', %s); })(document.querySelector('#stack'))`, quoted)))
	wait(t, ctx, `document.querySelectorAll('#stack .wave').length === 3`)
}

func TestWavesDraw(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	showWaves(t, ctx)
	for _, width := range []int64{1440, 320} {
		resize(t, ctx, width)
		want(t, ctx, `(box => [...document.querySelectorAll('#stack svg text')].map(e => [e.textContent, e.getBoundingClientRect()]).flatMap(([name, a], i, all) =>
			(a.left < box.left - 1 || a.right > box.right + 1 || a.bottom > box.bottom + 1 ? [name + ' outside'] : []).concat(all.slice(i + 1).filter(([, b]) =>
				a.right > b.left + 1 && b.right > a.left + 1 && a.bottom > b.top + 4 && b.bottom > a.top + 4).map(([other]) => name + ' on ' + other))).join('; '))(
			document.querySelector('#stack').getBoundingClientRect())`, "")
		takePictures(t, ctx, fmt.Sprintf("waves-%d", width))
	}
	// Two periods: each jump is a stroke straight up or down, the period's end included.
	want(t, ctx, `document.querySelectorAll('#stack .wave')[2].querySelector('.course').getAttribute('d').split('L').length`, 12)
	want(t, ctx, `(d => d.split('L').map(p => p.replace('M', '').split(' ')[1]).every((y, _, all) => y === all[0]))(document.querySelectorAll('#stack .wave')[1].querySelector('.course').getAttribute('d'))`, true)
	want(t, ctx, `['t1', 't2', 't3', 'time, ns', '<b>mean</b>\u00a0398'].every(s => [...document.querySelectorAll('#stack svg text')].some(e => e.textContent.includes(s)))`, true)
	want(t, ctx, `document.querySelectorAll('#stack svg b, #stack svg [stroke*=evil]').length`, 0)
	want(t, ctx, `getComputedStyle(document.querySelector('#stack .course')).stroke`, "rgb(52, 81, 155)")
	want(t, ctx, `document.querySelector('#stack svg').getAttribute('aria-label')`, "Waveforms: currents and switch voltage over time, ns")
}

func TestWavesRead(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	showWaves(t, ctx)
	reading := `document.querySelector('#stack .reading').textContent.replaceAll('\u00a0', ' ')`
	do(t, ctx, chromedp.Focus(chromedp.CSS("#stack .pane")), chromedp.KeyEvent(kb.Home))
	want(t, ctx, reading, "at 0 ns, t1 — inductor -2 mA, nothing 0 mA, across 400 → 0 V")
	for range 12 {
		do(t, ctx, chromedp.KeyEvent(kb.ArrowRight))
	}
	want(t, ctx, reading, "at 4 ns, t2 — inductor 730 mA, nothing 0 mA, across 0 → 812 V")
	do(t, ctx, chromedp.KeyEvent(kb.ArrowRight), chromedp.KeyEvent(kb.ArrowRight), chromedp.KeyEvent(kb.ArrowRight))
	want(t, ctx, reading, "at 5.25 ns, t2 — inductor 547 mA, nothing 0 mA, across 812 V")
	do(t, ctx, chromedp.KeyEvent(kb.End))
	want(t, ctx, reading, "at 1\u202f600 ns, t1 — inductor -2 mA, nothing 0 mA, across 400 → 0 V")
	want(t, ctx, `document.querySelectorAll('#stack .cursor circle').length`, 3)
}
