package web

import (
	"context"
	"fmt"
	"os"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"

	"lossbook/store"
)

// looks are the pages as a person meets them; each is left open in the tab.
var looks = []struct {
	name string
	open func(h *host, b *tab)
}{
	{"list", func(_ *host, b *tab) { b.open("/") }},
	{"sheet", func(_ *host, b *tab) { b.open(frostSheet) }},
	{"revision", func(h *host, b *tab) {
		h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "first"})
		b.open(frostSheet + "/revisions/1")
	}},
	{"report", func(h *host, b *tab) {
		h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "on paper"})
		b.open(frostSheet + "/revisions/1/report")
	}},
	{"sheet with a load profile", func(h *host, b *tab) {
		b.open(frostSheet)
		b.click(saying("add a row") + ` && e.id === 'add-profile'`)
		b.wait(`document.getElementById('f-profile[0].load')`)
		b.replace("profile[0].load", "50 %")
		b.replace("profile[0].hours", "8")
		b.says(".weights", "not a mean of percentages")
		b.open(frostSheet)
		b.wait(`document.querySelector('.weights h3')`)
	}},
	{"sheet with a change", func(h *host, b *tab) {
		b.open(frostSheet)
		b.replace("switch.rds_on", "14m")
		b.says("#since", "11 mΩ")
	}},
	{"sheet with a working", func(_ *host, b *tab) {
		b.open(frostSheet)
		b.click(`e.matches('.ledger tr.p-inductor a.figure')`)
		b.wait(`document.getElementById('working')`)
	}},
	{"sheet after an undo", func(_ *host, b *tab) {
		b.open(frostSheet)
		b.click(`e.id === 'undo'`)
		b.says("#said", "Undone")
		b.wait(`!document.querySelector('.f.flash')`)
	}},
	{"sheet with entries found", func(_ *host, b *tab) {
		b.open(frostSheet)
		evaluate[chromedp.Void](b, `document.getElementById('find-q').focus()`)
		b.types("gate")
		b.offered("Gate")
	}},
	{"sheet with nothing found", func(_ *host, b *tab) {
		b.open(frostSheet)
		evaluate[chromedp.Void](b, `document.getElementById('find-q').focus()`)
		b.types("xyzzy")
		b.says("#found", "No entry is called that.")
	}},
	{"entries found", func(_ *host, b *tab) { b.open(frostSheet + "/find?q=gate") }},
	{"shared page", func(h *host, b *tab) {
		_, token, err := h.store.CreateShare(context.Background(), 2, 1, "for the review")
		if err != nil {
			h.t.Fatal(err)
		}
		b.open(sharePrefix + token)
	}},
	{"comparison", func(h *host, b *tab) {
		h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "second"})
		pin := strings.TrimPrefix(frostSheet, "/designs/")
		b.open("/compare?r=" + pin + ".1&r=" + pin + ".2&r=" + pin + ".1&r=" + pin + ".2&r=" + pin + ".1")
	}},
	{"choice of revisions", func(_ *host, b *tab) {
		b.open("/compare/choose?r=" + strings.TrimPrefix(frostSheet, "/designs/") + ".2")
	}},
	{"accuracy", func(_ *host, b *tab) { b.open("/accuracy") }},
	{"sheet with an error", func(_ *host, b *tab) {
		b.expect("status of 422")
		b.open(frostSheet)
		b.replace("switch.rds_on", "4k7x")
		b.says(".stale", "Last good answer")
	}},
	{"sheet loaded with an error", func(_ *host, b *tab) { b.open(frostSheet) }},
	{"unfinished sheet", func(h *host, b *tab) { b.open(h.unfinished()) }},
	{"rename", func(_ *host, b *tab) { b.open(frostSheet + "/rename") }},
	{"no page", func(_ *host, b *tab) { b.expect("status of 404"); b.open("/designs/99") }},
	{"refused specification", func(_ *host, b *tab) {
		b.open("/")
		b.replace("input.max", "4k7x")
		b.press("Enter")
		b.wait(`document.title.startsWith('Error:')`)
		b.drawn()
	}},
	{"just removed", func(h *host, b *tab) { b.open("/"); b.click(saying("remove")); b.says(".notice", "Removed"); b.drawn() }},
	{"empty list", func(h *host, b *tab) {
		h.empty()
		b.open("/")
		b.says(".empty", "No designs yet")
	}},
}

// unfinished makes a design of a specification alone.
func (h *host) unfinished() string {
	h.t.Helper()
	t := Draft{"name": "Weather balloon", "topology": "buck", "rectifier": "diode", "input.min": "36", "input.nominal": "48", "input.max": "60",
		"output.voltage": "12", "output.current": "3", "frequency": "200k"}
	draft, complete, err := t.stored()
	if err != nil {
		h.t.Fatal(err)
	}
	d, err := h.store.Create(context.Background(), store.NewDesign{Name: t["name"], Draft: draft, Complete: complete})
	if err != nil {
		h.t.Fatal(err)
	}
	return sheetAddress(d.ID)
}

func (h *host) empty() {
	h.t.Helper()
	designs, err := h.store.Designs(context.Background())
	if err != nil {
		h.t.Fatal(err)
	}
	for _, d := range designs {
		if err := h.store.Delete(context.Background(), d.ID); err != nil {
			h.t.Fatal(err)
		}
	}
}

// Every page stands before the same rules: in light as it is found, in dark with
// everything open that opens. Between the two only colours are left to judge.
func TestPagesAreAccessible(t *testing.T) {
	axe, err := os.ReadFile("../testdata/vendor/axe.min.js")
	if err != nil {
		t.Fatal(err)
	}
	h := serve(t)
	b := h.tab()
	for _, look := range looks {
		look.open(h, b)
		b.do(chromedp.Evaluate[chromedp.Void](string(axe)))
		b.scheme("light")
		b.picture(look.name + "-light")
		b.judge(look.name+", light", 8, `'wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'`)
		b.scheme("dark")
		b.picture(look.name + "-dark")
		b.judge(look.name+", dark", 1, `'color-contrast'`)
		evaluate[chromedp.Void](b, `document.querySelectorAll('details').forEach(d => d.open = true)`)
		b.judge(look.name+", dark, all open", 8, `'wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'`)
		b.scheme("light")
		b.judge(look.name+", light, all open", 1, `'color-contrast'`)
	}
}

// judge runs the rules, or those of the tags, over the page. So many at least
// find something that they pass.
func (b *tab) judge(name string, least int, rules string) {
	b.t.Helper()
	b.wait(`document.getAnimations().every(a => a.playState === 'finished')`)
	result := evaluate[struct {
		Passes     int
		Violations []string
	}](b, `axe.run({preload: false, runOnly: [`+rules+`]}).then(r => ({passes: r.passes.length,
		violations: r.violations.flatMap(v => v.nodes.map(n => v.id + ': ' + n.html.slice(0, 200) + ' ' + n.failureSummary))}))`)
	if result.Passes < least {
		b.t.Errorf("%s: axe passed only %d rules: did it see the page?", name, result.Passes)
	}
	for _, violation := range result.Violations {
		b.t.Errorf("%s: %s", name, violation)
	}
}

// A narrow window and one at 400 % are the same width to a page; what is wider
// scrolls on its own.
func TestPagesFitNarrowWindows(t *testing.T) {
	h := serve(t)
	b := h.tab()
	for _, look := range looks {
		b.size(1440, 900, 1)
		look.open(h, b)
		for _, window := range []struct {
			width, height int64
			scale         float64
		}{{320, 640, 1}, {320, 225, 4}, {1100, 800, 1}} {
			b.size(window.width, window.height, window.scale)
			b.wait(`[...document.querySelectorAll('loss-chart svg')].every(s => s.getBoundingClientRect().width <= s.closest('loss-chart').clientWidth + 1)`)
			if got := evaluate[int64](b, `document.documentElement.scrollWidth`); got > window.width {
				t.Errorf("%s: %d px wide in a window of %d: %s", look.name, got, window.width, evaluate[string](b, fmt.Sprintf(`[...document.querySelectorAll('body *')].filter(e => e.getBoundingClientRect().right > %d && !e.closest('.scroll, .vh')).slice(0, 5).map(e => e.outerHTML.slice(0, 100)).join('\n')`, window.width)))
			}
			b.picture(fmt.Sprintf("%s-%d-%.0f", look.name, window.width, window.scale))
		}
	}
}

// The list's actions stand on one line, and the caption of a table that scrolls
// does not scroll with it.
func TestLayoutHolds(t *testing.T) {
	b := serve(t).visit("/")
	want(b, `[...document.querySelectorAll('table.list .row')].every(r => r.clientHeight < 40)`, true)
	b.open(frostSheet)
	for _, width := range []int64{320, 400} {
		b.size(width, 800, 1)
		b.wait(`(s => s.scrollWidth > s.clientWidth + 50)(document.querySelector('.scroll:has(.ledger)'))`)
		evaluate[chromedp.Void](b, `document.querySelector('.scroll:has(.ledger)').scrollLeft = 300`)
		evaluate[chromedp.Void](b, `document.querySelector('.ledger').scrollIntoView()`)
		b.picture(fmt.Sprintf("ledger-%d", width))
		want(b, `(r => r.left >= 0 && r.right <= innerWidth)(document.querySelector('.ledger caption').getBoundingClientRect())`, true)
	}
}

// The losses laid side by side keep their width beside the curves and above them.
func TestComparisonKeepsItsTable(t *testing.T) {
	h := serve(t)
	for range 2 {
		h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "kept"})
	}
	pin := strings.TrimPrefix(frostSheet, "/designs/")
	b := h.visit("/compare?r=" + pin + ".1&r=" + pin + ".2")
	for _, width := range []int64{320, 700, 1100, 1440} {
		b.size(width, 900, 1)
		b.picture(fmt.Sprintf("comparison-%d", width))
		want(b, `document.querySelector('.sum .scroll').clientWidth > 250`, true)
	}
}

// Without scripts there is no drawing, and its numbers are read in its place.
func TestNumbersStandWhereNoChartIsDrawn(t *testing.T) {
	b := serve(t).tab()
	b.scriptless()
	b.open(frostSheet)
	want(b, `document.querySelectorAll('loss-chart').length`, 3)
	want(b, `[...document.querySelectorAll('loss-chart')].some(c => c.checkVisibility())`, false)
	want(b, `[...document.querySelectorAll('figure table')].every(c => c.checkVisibility({contentVisibilityAuto: true}) && c.clientHeight > 100)`, true)
	b.picture("sheet-scriptless")
}
