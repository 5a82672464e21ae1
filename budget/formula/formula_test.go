package formula

import (
	"math"
	"slices"
	"strings"
	"testing"
)

func TestValue(t *testing.T) {
	values := map[string]float64{"a": 2, "b": 3, "V_b": 24, "t_d,on": 5, "Δλ": 7, "x": -4, "a0": 11, "z9": 12, "Q_0": 13, "Q_9": 14, "R_g,0": 15, "R_g,9": 16}
	for text, want := range map[string]float64{
		"a + b·a":         8,
		"a − b − a":       -3,
		"a/b·b":           2,
		"V_b/a/b":         4,
		"½·V_b^2":         288,
		"a^(b + 1)":       16,
		"2·a^b":           16,
		"−a^2":            -4,
		"a·−b":            -6,
		"√(V_b + 1)·a":    10,
		"√V_b^2":          24,
		"|x|·t_d,on":      20,
		"max(a, b) + Δλ":  10,
		"max(b, a)":       3,
		"min(a, b)":       2,
		"min(t_d,on, x)":  -4,
		"exp(ln(b))":      3,
		"Γ(5)":            24,
		"2·π":             2 * math.Pi,
		"⅔·b":             2,
		"0.00393·(a − 1)": 0.00393,
		"a0 + z9":         23,
		"Q_0 + Q_9":       27,
		"R_g,0 + R_g,9":   31,
		"9 + 0.5":         9.5,
	} {
		e, err := Parse(text)
		if err != nil {
			t.Errorf("%s: %v", text, err)
			continue
		}
		if got, err := e.Value(values); err != nil || math.Abs(got-want) > 1e-12 {
			t.Errorf("%s = %v (%v), want %v", text, got, err, want)
		}
	}
}

func TestUnreadable(t *testing.T) {
	for _, text := range []string{"", "a +", "(a", "|a", "a b", "max(a)", "exp(a, b)", "1.2.3", "a_", "a_·2", "a_+b", "a ^", ")", "a·/b"} {
		if e, err := Parse(text); err == nil {
			t.Errorf("%q is read as %+v", text, e.Root)
		}
	}
	for _, text := range []string{"c", "a·c", "a + √(c·a)"} {
		if v, err := Must(text).Value(map[string]float64{"a": 1}); err == nil || v != 0 || !strings.Contains(err.Error(), "c has no value") {
			t.Errorf("%s, a name without a value: %v, %v", text, v, err)
		}
	}
}

func TestNames(t *testing.T) {
	if got := Must("½·V_b·(t_ri + max(t_fv, V_b))·Γ(2)").Names(); !slices.Equal(got, []string{"V_b", "t_ri", "t_fv"}) {
		t.Error(got)
	}
}
