package web

import (
	"fmt"
	"net/url"
	"reflect"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"

	"lossbook/budget"
)

// shown is all that a page says of what is looked at: its figures, and what its
// charts are drawn from. Whether the form for another point is open is no part of it.
const shown = `(() => { const e = document.querySelector('#answers, #comparison').cloneNode(true);
	e.querySelector('#view')?.remove();
	return JSON.stringify([location.pathname, document.title, e.textContent.replace(/\s+/g, ' '),
		[...e.querySelectorAll('loss-chart')].map(c => [...c.attributes].map(a => a.name + a.value)),
		[...e.querySelectorAll('[aria-current]')].map(a => a.textContent)]) })()`

// viewing is a control that changes what is looked at.
type viewing struct {
	name string
	act  func(b *tab)
}

func clicking(name, condition string) viewing {
	return viewing{name, func(b *tab) { b.t.Helper(); b.click(condition) }}
}

// viewings are the controls of a budget, used one after another. Each field of sight
// must be changed by one of them: a new one gets a row here.
var viewings = []viewing{
	clicking("input voltage", `e.matches('.ask nav a') && e.textContent.trim() === '14.4 V'`),
	clicking("load", `e.matches('.ledger thead a') && e.textContent.trim() === '50'`),
	clicking("axis", saying("linear")),
	clicking("working", `e.matches('.ledger tr.p-inductor a.figure')`),
	clicking("map", saying("open")+` && e.closest('#map')`),
	{"another point", func(b *tab) {
		b.t.Helper()
		b.click(saying("another point"))
		for path, value := range map[string]string{"view.vin": "11.3", "view.ambient": "61"} {
			if evaluate[bool](b, fmt.Sprintf(`document.querySelector('%s') !== null`, field(path))) { // a revision has its own points alone
				b.replace(path, value)
			}
		}
		b.choose("view.load", "Down", "10") // of 5, where the working is
		b.click(saying("Show it"))
	}},
}

// opensTheSame opens the tab's address where nothing is known of it.
func (b *tab) opensTheSame(name string) {
	b.t.Helper()
	b.fetched()
	here := evaluate[string](b, `location.pathname + location.search + location.hash`)
	clean := b.host.visit(here)
	clean.fetched()
	if want, got := evaluate[string](b, shown), evaluate[string](clean, shown); got != want {
		b.t.Errorf("%s: %s shows in a clean profile\n%s\nand here\n%s", name, here, got, want)
	}
}

// fetched waits for what is fetched after the page, and for the charts.
func (b *tab) fetched() {
	b.t.Helper()
	b.wait(`[...document.querySelectorAll('loss-later')].every(e => e.querySelector('figure'))`)
	b.drawn()
}

// view changes what is looked at by each control, and opens the address that this
// gives in a profile that knows nothing. It returns the keys that addresses had.
func (b *tab) view(controls []viewing) map[string]bool {
	b.t.Helper()
	keys := map[string]bool{}
	for _, c := range controls {
		was, address := evaluate[string](b, shown), evaluate[string](b, `location.search`)
		c.act(b)
		b.wait(fmt.Sprintf(`location.search !== %q && document.querySelector('#answers, #comparison') && %s !== %q`, address, shown, was))
		q, err := url.ParseQuery(strings.TrimPrefix(evaluate[string](b, `location.search`), "?"))
		if err != nil {
			b.t.Fatal(err)
		}
		for key := range q {
			keys[key] = true
		}
		b.opensTheSame(c.name)
	}
	return keys
}

func TestAddressHoldsTheView(t *testing.T) {
	h := serve(t)
	h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "first"})
	for _, path := range []string{frostSheet, frostSheet + "/revisions/1"} {
		b := h.visit(path)
		keys := b.view(viewings)
		for i := range reflect.TypeFor[sight]().NumField() {
			key := reflect.TypeFor[sight]().Field(i).Name
			if typed := key == "ambient" && path != frostSheet; key != "whole" && !keys[key] && !typed {
				t.Errorf("%s: no control put %s into the address", path, key)
			}
		}
	}
	// Editing goes on from the view, and leaves it.
	b := h.visit(frostSheet + "?vin=11.3&load=50&scale=lin")
	b.replace("switch.rds_on", "14m")
	h.awaitKept("switch.rds_on", "14m")
	b.says("#since", "14 mΩ")
	b.opensTheSame("after an edit")
	b.ctrlZ()
	b.holds("switch.rds_on", "11 mΩ")
	b.opensTheSame("after an undo")
}

func TestAddressHoldsTheComparison(t *testing.T) {
	h := serve(t)
	d := sample(t, "frost")
	for version, rds := range []float64{14e-3, 9e-3, 12e-3} {
		d.Switch.RdsOn.V, d.Ambient = rds, budget.N(float64(40+version)) // conditions that differ, too
		h.call(200, "PUT", frostSheet, map[string]any{"design": d, "version": version + 1})
		h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "kept"})
	}
	b := h.visit("/compare/choose")
	evaluate[chromedp.Void](b, `document.querySelectorAll('input[name=r]').forEach(i => { i.checked = true })`)
	b.click(saying("Lay beside"))
	b.wait(`document.querySelector('#comparison')`)
	b.opensTheSame("chosen")
	keys := b.view([]viewing{
		clicking("baseline", `e.textContent.includes('baseline') && e.search.includes('base=2')`),
		clicking("input voltage", `e.search?.includes('vin=highest')`),
		clicking("load", `e.search?.includes('load=50')`),
		clicking("axis", saying("linear")),
		clicking("all entries", `e.search?.includes('all=1')`),
		clicking("conditions", `e.search?.includes('under=')`),
		clicking("one side less", `e.closest('.choices') && e.search.split('r=').length === 3`),
	})
	for _, key := range strings.Fields("r base vin load scale all under") {
		if !keys[key] {
			t.Errorf("no control put %s into the address", key)
		}
	}
}

// What was chosen by a link is what the form beside it starts from.
func TestAnotherPointKeepsTheRest(t *testing.T) {
	h := serve(t)
	b := h.visit(frostSheet)
	for _, c := range viewings[:3] {
		address := evaluate[string](b, `location.search`)
		c.act(b)
		b.wait(fmt.Sprintf(`location.search !== %q`, address))
	}
	b.click(saying("another point"))
	b.replace("view.ambient", "61")
	b.click(saying("Show it"))
	b.wait(`location.search.includes('ambient=61')`)
	q, err := url.ParseQuery(strings.TrimPrefix(evaluate[string](b, `location.search`), "?"))
	if err != nil || q.Get("vin") != "14.4 V" || q.Get("load") != "50" || q.Get("scale") != "lin" {
		t.Errorf("another ambient leads to %v (%v)", q, err)
	}
	b.says(".ask", "14.4 V in, 1 A (50 %), 61 °C")

	d := sample(t, "frost")
	d.Switch.RdsOn.V = 14e-3
	h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "kept"})
	h.call(200, "PUT", frostSheet, map[string]any{"design": d, "version": 1})
	h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "kept"})
	b.open("/compare?r=2.1&r=2.2")
	b.click(`e.search?.includes('load=50')`)
	b.wait(`location.search.includes('load=50')`)
	b.click(saying("another input voltage"))
	b.replace("view.vin", "13")
	b.click(saying("Show it"))
	b.wait(`location.search.includes('vin=13') && document.querySelector('#comparison')`)
	want(b, `location.search.includes('load=50')`, true)
}
