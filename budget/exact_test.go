package budget_test

import (
	"encoding/json"
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"slices"
	"strings"
	"sync"
	"testing"

	"lossbook/budget"
)

// The currents of a budget are straight lines between steady voltages. Here they are
// compared with those of the same stages solved exactly: see circuit.

func init() {
	if flag.Lookup("update") == nil {
		flag.Bool("update", false, "write the golden files anew")
	}
}

// domain is a kind of stage that is compared, with the draws that give it.
type domain struct {
	name  string
	spice spice
	per   int                                   // stages of each class
	holds func(resistance float64, n bool) bool // the larger path resistance over L·f; whether the budget carries the note
}

const noteRule = "straight_line"

var (
	everyday = spice{resistance: [2]float64{5e-4, 0.02}, ripple: [2]float64{0.1, 2}, charge: [2]float64{1e-3, 0.03}, esr: [2]float64{1e-4, 0.01}, load: [2]float64{0.04, 1}}
	steady   = spice{resistance: everyday.resistance, ripple: everyday.ripple, charge: [2]float64{1e-7, 1e-6}, esr: [2]float64{1e-9, 1e-8}, load: everyday.load}
	rough    = spice{resistance: everyday.resistance, ripple: [2]float64{0.3, 2}, charge: [2]float64{0.02, 0.06}, esr: [2]float64{0.005, 0.03}, load: [2]float64{0.1, 1}}
	soft     = spice{resistance: everyday.resistance, ripple: [2]float64{0.1, 1}, charge: [2]float64{1e-3, 0.01}, esr: everyday.esr, load: everyday.load, saturation: [2]float64{0.03, 0.4}}
	lossy    = spice{resistance: [2]float64{0.01, 0.1}, ripple: [2]float64{0.5, 5}, charge: everyday.charge, esr: everyday.esr, load: everyday.load}
)

var domains = []domain{
	{"resistance below 0.1 L·f, without the note", everyday, 34, func(r float64, noted bool) bool { return r < 0.1 && !noted }},
	{"resistance below 0.1 L·f, with the note", rough, 10, func(r float64, noted bool) bool { return r < 0.1 && noted }},
	{"resistance of 0.1 to 1 L·f", lossy, 10, func(r float64, _ bool) bool { return r >= 0.1 && r <= 1 }},
	{"resistance below 0.1 L·f, steady voltages", steady, 20, func(r float64, _ bool) bool { return r < 0.1 }},
	{"saturating inductor, without the note", soft, 6, func(r float64, noted bool) bool { return r < 0.1 && !noted }},
	{"saturating inductor, with the note", soft, 4, func(r float64, noted bool) bool { return r < 0.1 && noted }},
}

// pair is a stage solved in both ways.
type pair struct {
	domain, topology, mode string
	noted                  bool
	told                   float64            // the share that the note tells
	off                    map[string]float64 // by quantity, the share by which the budget's differs
}

// quantities in the order they are reported in. Means are measured against the rms of
// their current, since they can vanish.
var quantities = strings.Split("duty|mean inductor current|rms inductor current|peak inductor current|inductor current, valley to peak|rms switch current|rms rectifier current|mean rectifier current|rms input capacitor current|rms output capacitor current|loss|efficiency", "|")

// currents are those the note speaks of.
var currents = []string{"rms inductor current", "peak inductor current", "rms switch current", "rms rectifier current", "rms input capacitor current", "rms output capacitor current"}

func deviations(b *budget.Budget, e figures) map[string]float64 {
	off := map[string]float64{}
	for i, f := range [][3]float64{
		{b.Duty, e.duty, e.duty}, {b.Inductor.Mean, e.mean, e.rms}, {b.Inductor.RMS, e.rms, e.rms}, {b.Inductor.Max, e.max, e.max},
		{b.Inductor.Max - b.Inductor.Min, e.max - e.min, e.max - e.min}, {b.SwitchRMS, e.switchRMS, e.switchRMS}, {b.RectifierRMS, e.rectifierRMS, e.rectifierRMS},
		{b.RectifierMean, e.rectifierMean, e.rectifierRMS}, {b.InputCapRMS, e.inputRMS, e.inputRMS}, {b.OutputCapRMS, e.outputRMS, e.outputRMS},
		{b.Loss, e.loss, e.loss}, {b.Efficiency, e.efficiency, 1},
	} {
		off[quantities[i]] = math.Abs(f[0]-f[1]) / f[2]
	}
	return off
}

// modeOf names the class of a point beside its topology.
func modeOf(rectifier string, b *budget.Budget) string {
	name := rectifier + " " + b.Mode.String()
	if rectifier == "forced" {
		name = "forced, valley above zero"
		if b.Inductor.Min < 0 {
			name = "forced, valley below zero"
		}
	}
	return name
}

// solve works a stage out in both ways, unless the class is full.
func (d *domain) solve(t *testing.T, s *stage, rectifier string, full func(p *pair) bool) (p pair, counts bool) {
	m, err := budget.Prepare(&s.design)
	if err != nil {
		t.Fatal(err)
	}
	var b budget.Budget
	m.At(s.point, &b)
	if b.State != budget.Settled {
		return p, false
	}
	p = pair{domain: d.name, topology: s.design.Topology, mode: modeOf(rectifier, &b)}
	resistance := math.Max(s.circuit.on.resistance, s.circuit.off.resistance) * s.circuit.period / s.circuit.inductance
	if full(&p) {
		return p, false
	}
	for _, f := range m.Findings(&b) {
		if f.Rule == noteRule {
			p.noted, p.told = true, f.Value
		}
	}
	if !d.holds(resistance, p.noted) {
		return p, false
	}
	e, err := s.circuit.exact(p.topology)
	if err != nil {
		t.Fatalf("%s %s: %v", p.topology, p.mode, err)
	}
	if e.open > 1e-7 {
		t.Fatalf("%s %s: the exact solution's energy fails to close by %.1e of the input", p.topology, p.mode, e.open)
	}
	p.off = deviations(&b, e)
	return p, true
}

// drawn keeps the stages of all domains once they are solved.
var drawn struct {
	sync.Once
	list []pair
}

func compared(t *testing.T) []pair {
	drawn.Do(func() {
		for i := range domains {
			drawn.list = append(drawn.list, domains[i].fill(t, stages{rand.New(rand.NewPCG(uint64(i), 7))})...)
		}
	})
	return drawn.list
}

func (d *domain) fill(t *testing.T, r stages) (list []pair) {
	count := map[string]int{}
	class := func(p *pair) string { return p.topology + p.mode }
	full := func(p *pair) bool { return count[class(p)] >= d.per }
	const classes = 18
	for i := 0; len(list) < classes*d.per; i++ {
		if i > 40000 {
			t.Fatalf("%s: only %d stages: %v", d.name, len(list), count)
		}
		rectifier := []string{"diode", "forced", "diode_emulation"}[i/3%3]
		s := r.draw([]string{"boost", "buck", "buck_boost"}[i%3], rectifier, d.spice)
		if p, counts := d.solve(t, &s, rectifier, full); counts {
			count[class(&p)]++
			list = append(list, p)
		}
	}
	return list
}

// bound is one row of the golden file.
type bound struct {
	Quantity string  `json:"quantity"`
	Topology string  `json:"topology"`
	Mode     string  `json:"mode"`
	N        int     `json:"n"`
	Median   float64 `json:"median"`
	Worst    float64 `json:"worst"`
	Domain   string  `json:"domain"`
}

func bounds(list []pair) (rows []bound) {
	groups := map[bound][]float64{}
	for _, p := range list {
		for q, off := range p.off {
			key := bound{Quantity: q, Topology: p.topology, Mode: p.mode, Domain: p.domain}
			groups[key] = append(groups[key], off)
		}
	}
	for key, offs := range groups {
		slices.Sort(offs)
		key.N, key.Worst, key.Median = len(offs), offs[len(offs)-1], (offs[len(offs)/2]+offs[(len(offs)-1)/2])/2
		rows = append(rows, key)
	}
	place := func(b bound) string {
		return fmt.Sprintf("%d %s %s %02d", slices.IndexFunc(domains, func(d domain) bool { return d.name == b.Domain }), b.Topology, b.Mode, slices.Index(quantities, b.Quantity))
	}
	slices.SortFunc(rows, func(a, b bound) int { return strings.Compare(place(a), place(b)) })
	return rows
}

const golden = "../testdata/exact/bounds.json"

// TestExact compares random stages with their exact solution and keeps how far they
// are apart in a file that is read elsewhere.
func TestExact(t *testing.T) {
	rows := bounds(compared(t))
	for _, r := range rows {
		if !testing.Verbose() {
			break // not between what failed
		}
		t.Logf("%-42s %-10s %-26s %-32s %3d: median %.1e, worst %.1e", r.Domain, r.Topology, r.Mode, r.Quantity, r.N, r.Median, r.Worst)
	}
	if flag.Lookup("update").Value.String() == "true" {
		write(t, rows)
	}
	raw, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	var kept []bound
	if err := json.Unmarshal(raw, &kept); err != nil {
		t.Fatal(err)
	}
	if len(kept) != len(rows) || len(rows) != len(domains)*18*len(quantities) {
		t.Fatalf("%d rows kept, %d found", len(kept), len(rows))
	}
	for i, r := range rows {
		k := kept[i]
		same := func(a, b float64) bool { return math.Abs(a-b) <= 0.01*b+1e-8 }
		if !same(k.Median, r.Median) || !same(k.Worst, r.Worst) {
			t.Errorf("%s %s %s, %s: median %.3g, worst %.3g; kept were %.3g and %.3g (-update writes them anew)", r.Domain, r.Topology, r.Mode, r.Quantity, r.Median, r.Worst, k.Median, k.Worst)
		}
		if k.Median, k.Worst = r.Median, r.Worst; k != r {
			t.Errorf("kept is %+v, found %+v", kept[i], r)
		}
	}
}
