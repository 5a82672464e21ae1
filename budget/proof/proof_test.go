package proof_test

import (
	"math"
	"os"
	"slices"
	"strings"
	"testing"

	"lossbook/budget/proof"
)

// weights is the check of the weights of loads, which lie outside the physics: a test
// of package web answers it, with all others.
const weights = 26

func published(t *testing.T) proof.File {
	t.Helper()
	text, err := os.ReadFile("../../testdata/published/checks.json")
	if err != nil {
		t.Fatal(err)
	}
	f, err := proof.ReadFile(text)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// TestPhysics holds the physics against every figure of the data.
func TestPhysics(t *testing.T) {
	f := published(t)
	f.Checks = slices.DeleteFunc(f.Checks, func(c proof.Check) bool { return c.ID == weights })
	results, err := proof.Run(f, nil)
	if err != nil {
		t.Error(err)
	}
	figures := 0
	for _, r := range results {
		for _, o := range r.Outcomes {
			if figures++; !o.Holds {
				t.Errorf("check %d, %s: got %.7g, expected %s within %.2g", r.ID, o.Name, o.Got, o.Expected(), o.Allowed)
			}
		}
	}
	if figures < 130 {
		t.Errorf("only %d figures", figures)
	}
}

// example is a file with one check of two figures, the second with an input of its own.
const example = `{"checks": [{"id": 900, "group": "g", "title": "t", "document": "d", "place": "p", "known": "read", "how": "so", "inputs": [["load", "3 mA"]],
	"figures": [{"name": "one", "printed": "2 W"}, {"name": "two", "printed": "2.0 mV", "recomputed": "2.50 mV", "tolerance": "50 %", "why": "wide", "at": [["duty", "25 %"]]}],
	"unreached": [{"name": "three", "printed": "3 A", "reason": "no way"}]}],
	"unchecked": [{"what": "x", "reason": "y"}], "left_out": [{"what": "x", "size": "y"}]}`

func read(t *testing.T, text string) proof.File {
	t.Helper()
	f, err := proof.ReadFile([]byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// answered runs the example with two answers.
func answered(t *testing.T, one, two float64) []proof.Outcome {
	t.Helper()
	results, err := proof.Run(read(t, example), map[int]proof.Runner{900: func(p *proof.Trial) {
		if in := p.In("load"); in != 3e-3 {
			t.Errorf("the load is %g A", in)
		}
		p.Is("one", one)
		p.Each(func(figure string, in func(string) float64) float64 {
			if d := in("duty"); figure != "two" || d != 0.25 {
				t.Errorf("%s at duty %g", figure, d)
			}
			return two
		})
	}})
	if err != nil || len(results) != 1 || len(results[0].Outcomes) != 2 {
		t.Fatalf("%+v, %v", results, err)
	}
	return results[0].Outcomes
}

// TestTolerance puts answers beside where they still hold.
func TestTolerance(t *testing.T) {
	for _, c := range []struct {
		one, two float64
		holds    [2]bool
	}{
		{2, 2.5e-3, [2]bool{true, true}},
		{2.5, 3.7499e-3, [2]bool{true, true}}, {math.Nextafter(2.5, 3), 3.7501e-3, [2]bool{false, false}},
		{1.5, 1.2501e-3, [2]bool{true, true}}, {math.Nextafter(1.5, 1), 1.2499e-3, [2]bool{false, false}},
		{math.NaN(), math.Inf(1), [2]bool{false, false}},
	} {
		for i, o := range answered(t, c.one, c.two) {
			if o.Holds != c.holds[i] {
				t.Errorf("%g and %g: %s holds %v", c.one, c.two, o.Name, o.Holds)
			}
		}
	}
}

func TestDigits(t *testing.T) {
	for _, c := range []struct{ got, digits float64 }{{2, 15}, {2.002, 3}, {1.98, 2}, {2 + 2e-7, 7}} {
		if o := answered(t, c.got, 1)[0]; math.Abs(o.Digits-c.digits) > 1e-6 || o.Got != c.got || o.Allowed != 0.5 {
			t.Errorf("%g for 2 W: %+v, want %g digits", c.got, o, c.digits)
		}
	}
	if o := answered(t, 2, 1e-3)[1]; math.Abs(o.Got-1) > 1e-12 || math.Abs(o.Off-0.6) > 1e-12 || math.Abs(o.Allowed-1.25) > 1e-12 {
		t.Errorf("in its own unit: %+v", o)
	}
}

// TestRunRefuses leaves something out, or too much in.
func TestRunRefuses(t *testing.T) {
	all := func(p *proof.Trial) {
		p.In("load")
		p.Is("one", 2)
		p.Each(func(_ string, in func(string) float64) float64 { return in("duty") })
	}
	for want, more := range map[string]map[int]proof.Runner{
		"nothing answers it": nil,
		"one is not answered": {900: func(p *proof.Trial) {
			p.In("load")
			p.Each(func(_ string, in func(string) float64) float64 { return in("duty") })
		}},
		"four is answered": {900: func(p *proof.Trial) { all(p); p.Is("four", 4) }},
		`no input "duty"`:  {900: func(p *proof.Trial) { all(p); p.In("duty") }},
		`input "load" is not used`: {900: func(p *proof.Trial) {
			p.Is("one", 2)
			p.Each(func(_ string, in func(string) float64) float64 { return in("duty") })
		}},
		`input "duty" is not used`: {900: func(p *proof.Trial) {
			p.In("load")
			p.Is("one", 2)
			p.Each(func(string, func(string) float64) float64 { return 1 })
		}},
	} {
		if _, err := proof.Run(read(t, example), more); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v, want %q", err, want)
		}
	}
	if _, err := proof.Run(read(t, example), map[int]proof.Runner{900: all}); err != nil {
		t.Error(err)
	}
	wrong := strings.Replace(example, "3 mA", "3 mi", 1)
	if _, err := proof.Run(read(t, wrong), map[int]proof.Runner{900: all}); err == nil {
		t.Error("an input in miles was read")
	}
}

func TestFileRefused(t *testing.T) {
	change := func(old, new string) string {
		text := strings.Replace(example, old, new, 1)
		if text == example {
			t.Errorf("there is no %s to change", old)
		}
		return text
	}
	for name, text := range map[string]string{
		"no JSON":                    "{",
		"an unknown name":            change(`"title"`, `"titel"`),
		"twice":                      change(`"checks": [`, `"checks": [{"id": 900, "group": "g", "title": "t", "document": "d", "known": "read", "unreached": [{"name": "a", "reason": "b"}]}, `),
		"known how":                  change(`"read"`, `"heard"`),
		"without a document":         change(`"document": "d"`, `"document": ""`),
		"not saying how":             change(`"so"`, `""`),
		"a figure twice":             change(`"two"`, `"one"`),
		"a unit of elsewhere":        change(`"2 W"`, `"2 hp"`),
		"no number":                  change(`"2 W"`, `"two W"`),
		"nothing expected":           change(`"2 W"`, `"0 W"`),
		"a tolerance without reason": change(`"wide"`, `""`),
		"no tolerance":               change(`"50 %"`, `"0 %"`),
		"unreached without reason":   change(`"no way"`, `""`),
		"unchecked without reason":   change(`"reason": "y"`, `"reason": ""`),
		"left out without size":      change(`"size": "y"`, `"size": ""`),
	} {
		if f, err := proof.ReadFile([]byte(text)); err == nil {
			t.Errorf("%s: read as %+v", name, f)
		}
	}
}
