package budget

import (
	"math"
	"testing"
)

// No figure is explained by what can't be written down.
func TestWorkingIsWritable(t *testing.T) {
	fine := Term{Name: "a", Value: 1}
	for what, w := range map[string]Working{
		"a term":  {Steps: []Step{{Term: fine}, {Term: fine, Terms: []Term{fine, {Name: "k", Value: math.Inf(1)}}}}},
		"a value": {Steps: []Step{{Term: Term{Name: "P", Value: math.NaN()}, Terms: []Term{fine}}}},
	} {
		if w.writable() {
			t.Errorf("%s beyond any number is written", what)
		}
	}
	if w := (Working{Steps: []Step{{Term: fine, Terms: []Term{fine}}}}); !w.writable() {
		t.Error("ordinary numbers are refused")
	}
}
