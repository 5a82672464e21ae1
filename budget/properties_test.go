package budget

import (
	"bytes"
	"encoding/json"
	"math"
	"runtime"
	"sync"
	"testing"
)

// everyNumber calls f with every figure of a budget.
func everyNumber(b *Budget, f func(what string, v float64)) {
	for _, n := range []struct {
		what string
		v    float64
	}{
		{"duty", b.Duty}, {"on-time", b.OnTime}, {"pin", b.Pin}, {"pout", b.Pout}, {"loss", b.Loss}, {"efficiency", b.Efficiency}, {"iin", b.Iin},
		{"inductor mean", b.Inductor.Mean}, {"inductor min", b.Inductor.Min}, {"inductor max", b.Inductor.Max}, {"inductor rms", b.Inductor.RMS},
		{"switch rms", b.SwitchRMS}, {"rectifier rms", b.RectifierRMS}, {"rectifier mean", b.RectifierMean},
		{"input capacitor", b.InputCapRMS}, {"output capacitor", b.OutputCapRMS},
		{"switch temperature", b.Temperatures.Switch}, {"rectifier temperature", b.Temperatures.Rectifier}, {"inductor temperature", b.Temperatures.Inductor},
		{"residual", b.Residual},
	} {
		f(n.what, n.v)
	}
	for i := range b.Items {
		f(b.Items[i].Part+"."+b.Items[i].Kind, b.Items[i].Power)
		w, _ := b.model.Working(b, b.Items[i].Part, b.Items[i].Kind)
		for _, step := range w.Steps {
			for _, term := range append(step.Terms, step.Term) {
				f(b.Items[i].Part+"."+b.Items[i].Kind+" "+term.Name, term.Value)
			}
		}
	}
}

// TestProperties holds what must be so of any budget against random designs.
func TestProperties(t *testing.T) {
	states := map[State]int{}
	modes := map[Mode]int{}
	for seed := range uint64(600) {
		d := newChance(seed).design(1 + 3*float64(seed%2))
		m, err := Prepare(d)
		if err != nil {
			t.Fatalf("seed %d: %v", seed, err)
		}
		var b Budget
		for _, share := range []float64{0, 1e-3, 0.05, 0.5, 1, 1.3} {
			m.At(Point{d.Input.Nominal.V, share * d.Output.Current.V, d.Ambient.V}, &b)
			states[b.State]++
			if b.State != Settled {
				if b.Reason() == "" || len(b.Items) != 0 || b.Loss != 0 || b.Efficiency != 0 || (b.State == Runaway) != (b.Part != "") {
					t.Errorf("seed %d share %g: a point without an answer carries figures, or no reason: %+v", seed, share, b)
				}
				continue
			}
			modes[b.Mode]++
			checkSettled(t, seed, &b)
		}
	}
	t.Logf("states %v, modes %v", states, modes)
	if states[Settled] < 2000 || states[Runaway] == 0 || modes[DCM] < 200 || modes[CCM] < 200 {
		t.Error("the random designs no longer reach what is to be checked")
	}
}

func checkSettled(t *testing.T, seed uint64, b *Budget) {
	t.Helper()
	everyNumber(b, func(what string, v float64) {
		if !finite(v) {
			t.Errorf("seed %d %v: %s is %v", seed, b.Point, what, v)
		}
	})
	sum, drawn := 0.0, b.Vin*b.Iin
	for i := range b.Items {
		it := &b.Items[i]
		sum += it.Power
		if it.Power < 0 {
			t.Errorf("seed %d %v: %s.%s gives %g W", seed, b.Point, it.Part, it.Kind, it.Power)
		}
		if it.Part == "drive" && (b.model.design.Drive.FedFrom == "rail" || b.model.design.Drive.FedFrom == "") {
			drawn += it.Power // the rail's part of the input power
		}
	}
	if off := math.Abs(sum - b.Loss); off > 1e-12*b.Loss {
		t.Errorf("seed %d %v: items add up to %g, loss %g", seed, b.Point, sum, b.Loss)
	}
	if off := math.Abs(b.Pin - b.Pout - b.Loss); off > 1e-12*b.Pin {
		t.Errorf("seed %d %v: Pin − Pout − loss = %g", seed, b.Point, off)
	}
	if off := math.Abs(b.Pin - drawn); off > 1e-12*b.Pin {
		t.Errorf("seed %d %v: Pin %.15g, but Vin·Iin and the rail give %.15g", seed, b.Point, b.Pin, drawn)
	}
	if b.Efficiency < 0 || b.Efficiency >= 1 || (b.Efficiency == 0) != (b.Iout == 0) {
		t.Errorf("seed %d %v: efficiency %g", seed, b.Point, b.Efficiency)
	}
	if b.Residual > tolerance || b.Iterations < 1 {
		t.Errorf("seed %d %v: residual %g after %d", seed, b.Point, b.Residual, b.Iterations)
	}
}

// snapshot writes a budget bit for bit.
func snapshot(t *testing.T, m *Model, points []Point, workers int) []byte {
	t.Helper()
	results := make([]Budget, len(points))
	var group sync.WaitGroup
	for w := range workers {
		group.Add(1)
		go func() {
			defer group.Done()
			for i := w; i < len(points); i += workers {
				m.At(points[i], &results[i])
			}
		}()
	}
	group.Wait()
	var text bytes.Buffer
	for i := range results {
		everyNumber(&results[i], func(_ string, v float64) {
			raw, _ := json.Marshal(math.Float64bits(v))
			text.Write(raw)
			text.WriteByte(' ')
		})
	}
	return text.Bytes()
}

// TestReproducible asks for the same bits whatever runs beside, and in any order.
func TestReproducible(t *testing.T) {
	d := newChance(7).design(1)
	m, err := Prepare(d)
	if err != nil {
		t.Fatal(err)
	}
	points := Grid(d)
	before := runtime.GOMAXPROCS(1)
	defer runtime.GOMAXPROCS(before)
	want := snapshot(t, m, points, 1)
	for _, procs := range []int{1, 2, 8} {
		runtime.GOMAXPROCS(procs)
		if got := snapshot(t, m, points, 2*procs); !bytes.Equal(got, want) {
			t.Errorf("GOMAXPROCS %d gives other bits", procs)
		}
	}
	if len(want) < 1000 {
		t.Fatal("nothing was compared")
	}
}

// TestNoAllocation asks that a Budget used again costs no allocation.
func TestNoAllocation(t *testing.T) {
	d := newChance(7).design(1)
	m, err := Prepare(d)
	if err != nil {
		t.Fatal(err)
	}
	points := Grid(d)
	var b Budget
	m.At(points[0], &b)
	if n := testing.AllocsPerRun(50, func() {
		for _, p := range points {
			m.At(p, &b)
		}
	}); n >= 1 { // below 1: the pool may lose its desk to a garbage collection
		t.Errorf("%g allocations for %d points", n, len(points))
	}
}

// TestModesMeet asks that the budget is continuous where conduction turns from
// discontinuous to continuous. Recovery is left out: it begins at the boundary as the
// root of the valley current, with an infinite slope. So are loads of next to nothing,
// whose loss feeds the current that causes it: there the balance may leap.
func TestModesMeet(t *testing.T) {
	met := 0
	for seed := range uint64(150) {
		c := newChance(seed)
		d := c.design(1)
		if d.Rectifier == "synchronous" {
			d.LightLoad = "diode_emulation"
			d.SyncSwitch.Recovery = Recovery{}
		}
		m, err := Prepare(d)
		if err != nil {
			t.Fatal(err)
		}
		low, high := boundary(m, d)
		if low == 0 {
			continue
		}
		var below, above Budget
		m.At(Point{d.Input.Nominal.V, low, d.Ambient.V}, &below)
		m.At(Point{d.Input.Nominal.V, high, d.Ambient.V}, &above)
		if above.Efficiency < 0.3 {
			continue
		}
		met++
		if off := math.Abs(below.Loss-above.Loss) / above.Loss; off > 1e-3 {
			t.Errorf("seed %d: %g W below and %g W above the boundary at %g A", seed, below.Loss, above.Loss, low)
		}
		if off := math.Abs(below.Inductor.RMS-above.Inductor.RMS) / above.Inductor.RMS; off > 1e-3 {
			t.Errorf("seed %d: inductor rms %g and %g A at the boundary", seed, below.Inductor.RMS, above.Inductor.RMS)
		}
	}
	t.Logf("%d boundaries", met)
	if met < 50 {
		t.Error("too few boundaries met")
	}
}

// boundary returns two loads close to each other, the lower discontinuous and the
// higher continuous, or 0 where there is none.
func boundary(m *Model, d *Design) (low, high float64) {
	mode := func(load float64) (Mode, bool) {
		var b Budget
		m.At(Point{d.Input.Nominal.V, load, d.Ambient.V}, &b)
		return b.Mode, b.State == Settled
	}
	low, high = 1e-4*d.Output.Current.V, d.Output.Current.V
	if at, ok := mode(low); !ok || at != DCM {
		return 0, 0
	}
	if at, ok := mode(high); !ok || at != CCM {
		return 0, 0
	}
	for high-low > 1e-6*high {
		mid := (low + high) / 2
		switch at, ok := mode(mid); {
		case !ok:
			return 0, 0
		case at == DCM:
			low = mid
		default:
			high = mid
		}
	}
	return low, high
}
