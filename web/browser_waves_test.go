package web

import (
	"fmt"
	"testing"

	"github.com/chromedp/chromedp"
)

// meeting names the shown texts, below a selector, that lie over each other; boxes hold
// some room above and below the letters.
func meeting(selector string) string {
	return fmt.Sprintf(`[...document.querySelectorAll(%q)].filter(e => e.getClientRects().length).map(e => [e.textContent, e.getBoundingClientRect()]).flatMap(([name, a], i, all) =>
		all.slice(i + 1).filter(([, b]) => a.left < b.right - 1 && b.left < a.right - 1 && a.top < b.bottom - 4 && b.top < a.bottom - 4).map(([other]) => name + ' on ' + other)).join('; ')`, selector)
}

// The strip keeps its names apart and inside at every width, and lists them where
// there is no room for them.
func TestFlowAtEveryWidth(t *testing.T) {
	b := serve(t).tab()
	looked := 0
	for _, address := range []string{"/designs/1", "/designs/1?load=5", frostSheet + "?load=5"} {
		b.size(1440, 900, 1)
		b.open(address)
		for _, width := range []int64{1440, 1100, 640, 320} {
			b.size(width, 900, 1)
			b.wait(`[...document.querySelectorAll('loss-chart svg')].every(s => Math.abs(s.getAttribute('width') - s.closest('loss-chart').clientWidth) < 1)`)
			what := fmt.Sprintf("%s, %d px", address, width)
			for _, drawing := range []string{".flow > svg text", "#chart-waves svg text"} {
				if got := evaluate[string](b, meeting(drawing)); got != "" {
					t.Errorf("%s: in %s %s", what, drawing, got)
				}
			}
			b.inside(what)
			b.picture(fmt.Sprintf("flow-%d-%d", looked, width))
			looked++
		}
	}
	if looked != 12 {
		t.Errorf("%d looks", looked)
	}
}

// inside fails where a name of the strip lies outside it, or is named both in it and
// in the list, or in neither.
func (b *tab) inside(what string) {
	b.t.Helper()
	if got := evaluate[int](b, `(box => [...document.querySelectorAll('.flow > svg text, .flow li')].filter(e => e.getClientRects().length).filter(e =>
		(r => r.right > box.right + 1 || r.left < box.left - 1 || r.bottom > box.bottom)(e.getBoundingClientRect())).length)(document.querySelector('.flow').getBoundingClientRect())`); got > 0 {
		b.t.Errorf("%s: %d names lie outside the strip", what, got)
	}
	listed := evaluate[bool](b, `document.querySelector('.flow > ul').checkVisibility()`)
	named := evaluate[int](b, `[...document.querySelectorAll('.flow .names')].filter(e => e.getClientRects().length).length`)
	if narrow := evaluate[bool](b, `document.querySelector('.flow').clientWidth < 640`); listed != narrow || (named == 1) == narrow {
		b.t.Errorf("%s: listed %t, %d layouts of names", what, listed, named)
	}
}

// What is typed moves the strip and the waveforms; the point is kept.
func TestFlowAndWavesFollow(t *testing.T) {
	b := serve(t).visit(frostSheet + "?load=20")
	wide := `document.querySelector('.flow rect[height="32"]').getBoundingClientRect().width`
	before, path := evaluate[float64](b, wide), evaluate[string](b, `document.querySelector('#chart-waves .course').getAttribute('d')`)
	b.replace("switch.rds_on", "110m")
	b.wait(fmt.Sprintf(`%s > %g + 5`, wide, before))
	b.wait(fmt.Sprintf(`document.querySelector('#chart-waves .course').getAttribute('d') !== %q`, path))
	b.says("#chart-waves figcaption", "400 mA (20 %)")
	b.click(saying("100") + ` && e.closest('thead')`)
	b.says("#chart-waves figcaption", "2 A (100 %)")
	want(b, `location.search`, "?load=100")
	// A voltage that the stage can't work at: words in the place of both drawings.
	b.open(frostSheet + "?vin=30")
	b.says(".flow", "No watt flow at this point: a boost stage gives only more than its input")
	b.says(".waves", "No waveforms at this point: a boost stage gives only more than its input")
	want(b, `document.querySelectorAll('.flow svg, .waves svg').length`, 0)
}

// The cursor reads the waveforms by keys: both sides of a jump where one lies.
func TestWavesCursor(t *testing.T) {
	b := serve(t).visit(frostSheet)
	b.do(chromedp.Focus(chromedp.CSS("#chart-waves .pane")))
	b.press("Home")
	reading := `document.querySelector('#chart-waves .reading').textContent.replaceAll('\u00a0', ' ')`
	b.wait(reading + `.startsWith('at 0 µs, t1')`)
	want(b, reading, "at 0 µs, t1 — inductor 3.588 A, switch 0 → 3.588 A, rectifier 3.588 → 0 A, input capacitor 0.5975 A, output capacitor 1.561 → -2.027 A, across the switch 24 → 0 V")
	want(b, `document.querySelectorAll('#chart-waves .cursor circle').length`, 6)
	for range 12 {
		b.press("Right")
	}
	b.wait(reading + `.includes(', t2 — ')`)
	b.wait(reading + `.includes('switch 4.783 → 0 A, rectifier 0 → 4.783 A')`)
}

// Without scripts the strip stands as it is, and the waveforms are read as numbers.
func TestFlowAndWavesWithoutScripts(t *testing.T) {
	b := serve(t).tab()
	b.scriptless()
	b.open(frostSheet + "?load=50")
	want(b, `document.querySelector('.flow > svg').checkVisibility() && [...document.querySelectorAll('.flow .inside')].some(e => e.getBoundingClientRect().width > 20)`, true)
	want(b, `document.querySelector('#chart-waves table').checkVisibility({contentVisibilityAuto: true})`, true)
	b.click(saying("5") + ` && e.closest('.ledger thead')`)
	b.says("#chart-waves figcaption", "discontinuous conduction at 12 V in, 100 mA (5 %)")
}
