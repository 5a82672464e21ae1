package budget_test

import (
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"slices"
	"strings"
	"testing"
)

// stated are the bounds that the guide states: the largest share by which a quantity
// may be off, of efficiency the largest difference.
var stated = []struct {
	domains    []int
	quantities string
	most       float64
}{
	{unnoted, strings.Join(currents, "|"), 0.009},
	{unnoted, "mean inductor current", 0.003},
	{unnoted, "mean rectifier current|inductor current, valley to peak", 0.01},
	{unnoted, "duty|loss", 0.015},
	{unnoted, "efficiency", 0.0005},
	{steadily, "mean inductor current|rms inductor current", 0.0003},
	{steadily, "peak inductor current|rms switch current|rms rectifier current|mean rectifier current|rms input capacitor current|rms output capacitor current", 0.01},
	{steadily, "duty|inductor current, valley to peak|loss", 0.005},
	{steadily, "efficiency", 0.0005},
}

// The domains with bounds, by their place in the table.
var (
	unnoted  = []int{0, 4}
	steadily = []int{3}
)

// TestExactBounds holds every stage of the domains to the bounds stated.
func TestExactBounds(t *testing.T) {
	checked := map[string]int{}
	for _, p := range compared(t) {
		for _, b := range stated {
			if !slices.ContainsFunc(b.domains, func(i int) bool { return domains[i].name == p.domain }) {
				continue
			}
			for _, q := range strings.Split(b.quantities, "|") {
				checked[p.domain]++
				if off, known := p.off[q]; !known || !(off <= b.most) {
					t.Errorf("%s, %s %s: %s is off by %.3g, stated are %g", p.domain, p.topology, p.mode, q, off, b.most)
				}
			}
		}
	}
	for _, i := range append(steadily, unnoted...) {
		if d := domains[i]; checked[d.name] != d.per*18*len(quantities) {
			t.Errorf("%s: %d figures checked, want %d", d.name, checked[d.name], d.per*18*len(quantities))
		}
	}
}

// TestExactNote asks of the note that it misses no stage with a current that is off by
// more than a hundredth, that it seldom cries for nothing, and that the share it tells
// is about right where that is below a twentieth.
func TestExactNote(t *testing.T) {
	mixed := domain{name: "mixed", per: math.MaxInt, holds: func(float64, bool) bool { return true },
		spice: spice{resistance: [2]float64{5e-4, 0.05}, ripple: [2]float64{0.1, 4}, charge: [2]float64{1e-3, 0.05}, esr: [2]float64{1e-4, 0.02}, load: [2]float64{0.04, 1}}}
	all, r := compared(t), stages{rand.New(rand.NewPCG(3, 9))}
	const more = 450
	for i := range more {
		rectifier := []string{"diode", "forced", "diode_emulation"}[i/3%3]
		s := r.draw([]string{"boost", "buck", "buck_boost"}[i%3], rectifier, mixed.spice)
		if p, counts := mixed.solve(t, &s, rectifier, func(*pair) bool { return false }); counts {
			all = append(all, p)
		}
	}
	var off, within, mixedOff, mixedIdle int
	most, told := 0.0, []float64{}
	for _, p := range all {
		worst := 0.0
		for _, q := range currents {
			worst = math.Max(worst, p.off[q])
		}
		most = math.Max(most, worst)
		if p.noted && worst < 0.05 {
			told = append(told, math.Abs(p.told-worst)/worst)
		}
		switch {
		case worst > 0.01:
			off++
			if p.domain == mixed.name {
				mixedOff++
			}
			if !p.noted {
				t.Errorf("%s, %s %s: a current is off by %.3g and nothing is said", p.domain, p.topology, p.mode, worst)
			}
		case p.domain == mixed.name:
			within++
			if p.noted {
				mixedIdle++
			}
		}
	}
	t.Logf("%d of %d stages have a current off by more than 0.01 (at most %.2g); of %d mixed stages %d off, %d of the %d others noted too", off, len(all), most, more, mixedOff, mixedIdle, within)
	slices.Sort(told)
	if usual := told[len(told)*9/10]; len(told) < 300 || !(usual < 0.12) {
		t.Errorf("in nine of ten of %d notes the share told is within %.2g of itself", len(told), usual)
	}
	if off < 200 || within < 200 || mixedOff < 50 {
		t.Errorf("only %d stages off, %d within, %d mixed ones off", off, within, mixedOff)
	}
	if share := float64(mixedIdle) / float64(within); share > 0.08 {
		t.Errorf("%.2g of the stages within 0.01 are noted", share)
	}
}

// write keeps three digits: enough to be read, few enough to stay.
func write(t *testing.T, rows []bound) {
	t.Helper()
	digits := func(v float64) float64 {
		var short float64
		if _, err := fmt.Sscanf(fmt.Sprintf("%.3g", v), "%g", &short); err != nil {
			t.Fatal(err)
		}
		return short
	}
	var text strings.Builder
	for i, r := range rows {
		r.Median, r.Worst = digits(r.Median), digits(r.Worst)
		line, err := json.Marshal(r)
		if err != nil {
			t.Fatal(err)
		}
		fmt.Fprintf(&text, "%s%s", map[bool]string{true: "[\n", false: ",\n"}[i == 0], line)
	}
	if err := os.WriteFile(golden, []byte(text.String()+"\n]\n"), 0o644); err != nil {
		t.Fatal(err)
	}
}
