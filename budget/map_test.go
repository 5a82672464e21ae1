package budget

import (
	"math"
	"reflect"
	"slices"
	"testing"
)

func TestMapLattice(t *testing.T) {
	d := newChance(1).design(1)
	for _, even := range []bool{false, true} {
		l := MapLattice(d, 60, 40, even)
		if len(l.Loads) != 60 || len(l.Vins) != 40 || l.Ambient != d.AmbientTemperature() {
			t.Fatalf("%d by %d at %g", len(l.Loads), len(l.Vins), l.Ambient)
		}
		if l.Loads[0] != LoadGrid()[0] || l.Loads[59] != 1 || l.Vins[0] != d.Input.Min.V || l.Vins[39] != d.Input.Max.V {
			t.Errorf("ends: %v %v %v %v", l.Loads[0], l.Loads[59], l.Vins[0], l.Vins[39])
		}
		for i := 2; i < 60; i++ {
			before, now := l.Loads[i-1]-l.Loads[i-2], l.Loads[i]-l.Loads[i-1]
			if !even {
				before, now = math.Log(l.Loads[i-1]/l.Loads[i-2]), math.Log(l.Loads[i]/l.Loads[i-1])
			}
			if !(now > 0) || math.Abs(now-before) > 1e-12 {
				t.Errorf("even %v, load %d: step %g after %g", even, i, now, before)
			}
		}
	}
	if l := MapLattice(d, 1, 1, false); !slices.Equal(l.Loads, []float64{1}) || !slices.Equal(l.Vins, []float64{d.Input.Max.V}) {
		t.Errorf("one point: %v", l)
	}
	d.Input.Max, d.Input.Nominal = d.Input.Min, d.Input.Min
	if l := MapLattice(d, 3, 40, true); len(l.Loads) != 3 || !slices.Equal(l.Vins, []float64{d.Input.Min.V}) {
		t.Errorf("one voltage: %v", l)
	}
}

// TestSpots holds every point of a map against At and Findings of a model of its own:
// the same bits, and a limit exceeded where a finding says so.
func TestSpots(t *testing.T) {
	seen := map[string]int{}
	for seed := range uint64(40) {
		d := newChance(seed).design([...]float64{1, 3, 8}[seed%3])
		d.Input.Min, d.Input.Max = N(d.Input.Nominal.V*0.4), N(d.Input.Nominal.V*1.6)
		m, err := Prepare(d)
		if err != nil {
			t.Fatalf("seed %d: %v", seed, err)
		}
		own, err := Prepare(d)
		if err != nil {
			t.Fatal(err)
		}
		l := MapLattice(d, 7, 5, seed%2 == 0)
		for row := range l.Vins {
			for i, got := range m.Spots(l, row) {
				var b Budget
				own.At(Point{Vin: l.Vins[row], Iout: l.Loads[i] * d.Output.Current.V, Ambient: l.Ambient}, &b)
				want := Spot{Point: b.Point, State: b.State, Part: b.Part, Efficiency: b.Efficiency, Loss: b.Loss, Findings: own.Findings(&b)}
				for _, it := range b.Items {
					want.Outside = want.Outside || it.Outside
				}
				if math.Float64bits(got.Efficiency) != math.Float64bits(want.Efficiency) || math.Float64bits(got.Loss) != math.Float64bits(want.Loss) || !reflect.DeepEqual(got, want) {
					t.Fatalf("seed %d, row %d, point %d:\n%+v, want\n%+v", seed, row, i, got, want)
				}
				seen[got.State.String()]++
				if got.State != Settled && (got.Efficiency != 0 || got.Loss != 0) {
					t.Errorf("seed %d: %s with a figure", seed, got.State)
				}
				for _, f := range got.Findings {
					seen[string(f.Level)]++
				}
			}
		}
	}
	for what, least := range map[string]int{"settled": 500, "out_of_reach": 50, "runaway": 30, "exceeded": 200, "caution": 200} {
		if seen[what] < least {
			t.Errorf("only %d of %s were seen: %v", seen[what], what, seen)
		}
	}
}

func TestFindingsTellTheirAspects(t *testing.T) {
	seen := map[string]bool{}
	for seed := range uint64(60) {
		d := newChance(seed).design(8)
		d.Inductor.IRMSRating, d.Inductor.TMax = N(1e-6), N(20)
		m, err := Prepare(d)
		if err != nil {
			t.Fatal(err)
		}
		for _, q := range m.Spots(MapLattice(d, 2, 2, true), 0) {
			for _, f := range q.Findings {
				seen[f.Rule+"."+f.Aspect] = true
			}
		}
	}
	for _, want := range []string{"inductor_heat.rms", "inductor_heat.temperature", "junction."} {
		if !seen[want] {
			t.Errorf("no %s among %v", want, seen)
		}
	}
}
