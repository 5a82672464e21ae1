package budget

import (
	"math"
	"testing"
)

// scaled returns the design with every way to ambient worse by a factor.
func scaled(d *Design, factor float64) *Design {
	c := *d
	c.EnclosureTheta = N(d.EnclosureTheta.V * factor)
	worse := func(n Num) Num { return N(n.V * factor) }
	sw, l := *d.Switch, *d.Inductor
	sw.ThetaJA, l.ThetaJA = worse(sw.ThetaJA), worse(l.ThetaJA)
	c.Switch, c.Inductor = &sw, &l
	if d.SyncSwitch != nil {
		sync := *d.SyncSwitch
		sync.ThetaJA = worse(sync.ThetaJA)
		c.SyncSwitch = &sync
	}
	if d.Diode != nil {
		diode := *d.Diode
		diode.ThetaJA = worse(diode.ThetaJA)
		c.Diode = &diode
	}
	return &c
}

// answered works out one point of a design.
func answered(t testing.TB, d *Design, p Point) *Budget {
	t.Helper()
	m, err := Prepare(d)
	if err != nil {
		t.Fatal(err)
	}
	b := new(Budget)
	m.At(p, b)
	return b
}

// fold looks for the factor on all thermal resistances at which the point just loses
// its solution, to a millionth. There is none of a design that is too hot before, or
// that no factor makes run away.
func fold(t testing.TB, d *Design, p Point) (factor float64, found bool) {
	t.Helper()
	runaway := func(factor float64) bool { return answered(t, scaled(d, factor), p).State != Settled }
	low, high := 1e-3, 1e-2
	for ; !runaway(high); low, high = high, 2*high {
		if high > 1e5 {
			return 0, false
		}
	}
	if runaway(low) {
		return 0, false
	}
	for high-low > 1e-6*low {
		if mid := (low + high) / 2; runaway(mid) {
			high = mid
		} else {
			low = mid
		}
	}
	b := answered(t, scaled(d, high), p)
	return low, b.State == Runaway && b.reason == reasonNoBalance
}

// TestFold finds where random designs begin to run away. A thousandth before, their
// answer must be that of plain substitution from the cold; a thousandth beyond, plain
// substitution must run away too, and the part that does must be named from there on.
func TestFold(t *testing.T) {
	met := map[string]int{}
	for seed := range uint64(80) {
		c := newChance(seed)
		d := c.design(1)
		if d.Diode != nil && seed%3 > 0 {
			d.Diode.ILeak.V *= 1000
		}
		p := Point{d.Input.Nominal.V, d.Output.Current.V, d.Ambient.V}
		factor, found := fold(t, d, p)
		if !found {
			continue
		}
		near := answered(t, scaled(d, 0.999*factor), p)
		beside, ok := substituted(near)
		if !ok {
			t.Errorf("seed %d: a solution at 0.999 of the fold %g that substitution does not find", seed, factor)
			continue
		}
		if off := math.Abs(near.Loss-beside.loss) / near.Loss; off > 1e-10 {
			t.Errorf("seed %d at 0.999 of the fold: loss %.12g, by substitution %.12g", seed, near.Loss, beside.loss)
		}
		for i, got := range [3]float64{near.Temperatures.Switch, near.Temperatures.Rectifier, near.Temperatures.Inductor} {
			if math.Abs(got-beside.temperature[i]) > 1e-7 {
				t.Errorf("seed %d at 0.999 of the fold: %s %.12g °C, by substitution %.12g", seed, partNames[i], got, beside.temperature[i])
			}
		}
		for _, beyond := range []float64{1 + 3e-6, 1.001, 1.1} {
			b := answered(t, scaled(d, beyond*factor), p)
			if b.State != Runaway || b.Part == "" {
				t.Errorf("seed %d at %g of the fold: %s of %q", seed, beyond, b.State, b.Part)
			}
			met[b.Part]++
			if b.Mode = near.Mode; beyond > 1.0001 {
				if s, ok := substituted(b); ok {
					t.Errorf("seed %d at %g of the fold: substitution settles at %g W, %v °C", seed, beyond, s.loss, s.temperature)
				}
			}
		}
	}
	t.Logf("%v", met)
	if met["rectifier"] < 20 || met["switch"]+met["inductor"] < 10 {
		t.Error("too few folds were met")
	}
}

// substituted follows plain damped substitution from the cold at a budget's point and
// in its mode.
func substituted(b *Budget) (s situation, ok bool) {
	s.begin(b.model, b.Point)
	s.mode = b.Mode
	var p problem
	p.pose(&s, false)
	x, ok := plainly(&p)
	return s, ok && p.polish(x)
}

// TestFoldOfLeakage holds a fold against its closed form. Where leakage P_0·2^(T/k) is
// all that heats a diode, u = ln 2/k·(T − T_a) solves u = c·e^u with c = ln 2/k·θ·P(T_a):
// twice below c = 1/e, not at all above.
func TestFoldOfLeakage(t *testing.T) {
	const vin, vout, doubling, ambient = 48.0, 12.0, 11.0, 40.0
	sw, drive := timed(1e-15, 1e-15, nothing)
	d := sheet("buck", vin, vout, 5, 1e5, sw, drive, nothing)
	d.Diode.ILeak, d.Diode.ILeakVoltage, d.Diode.ILeakTemperature, d.Diode.ILeakDoubling = N(1e-3), N(60), N(25), N(doubling)
	cold := 1e-3 / 60 * math.Exp2((ambient-25)/doubling) * vout / vin * vin * vin // W at ambient
	rate := math.Ln2 / doubling
	edge := 1 / (math.E * rate * cold) // K/W
	for _, share := range []float64{1e-6, 0.1, 0.5, 0.9, 0.999, 0.999999, 1 - 1e-9} {
		d.Diode.ThetaJA = N(edge * share)
		b := answered(t, d, Point{vin, 5, ambient})
		want := ambient + cooler(share/math.E)/rate
		if b.State != Settled || math.Abs(b.Temperatures.Rectifier-want) > 1e-10*want/math.Sqrt(1-share) {
			t.Errorf("at %.10g of the fold: %s, %.12g °C, want %.12g", share, b.State, b.Temperatures.Rectifier, want)
		}
	}
	for _, share := range []float64{1 + 1e-9, 1 + 1e-6, 1.001, 2, 1e6} {
		d.Diode.ThetaJA = N(edge * share)
		if b := answered(t, d, Point{vin, 5, ambient}); b.State != Runaway || b.Part != "rectifier" {
			t.Errorf("at %.10g of the fold: %s of %q, %g °C", share, b.State, b.Part, b.Temperatures.Rectifier)
		}
	}
}

// cooler returns the smaller solution u of u = c·e^u for 0 < c < 1/e, by halving.
func cooler(c float64) float64 {
	low, high := 0.0, 1.0
	for range 200 {
		if mid := (low + high) / 2; mid < c*math.Exp(mid) {
			low = mid
		} else {
			high = mid
		}
	}
	return low
}

// TestFoldOfResistance does the same for a MOSFET whose resistance rises as a power m
// of absolute temperature: X = X_a + A·X^m has its fold at X = X_a·m/(m − 1).
func TestFoldOfResistance(t *testing.T) {
	const vin, vout, load, rds, ratio = 48.0, 12.0, 10.0, 1e-6, 2.3
	sw, drive := timed(1e-15, 1e-15, rds)
	sw.RdsOnHotRatio = N(ratio)
	d := sheet("buck", vin, vout, load, 1e3, sw, drive, nothing)
	exponent := math.Log(ratio) / math.Log(423.15/298.15)
	const ambient = 298.15 // K
	hot := ambient * exponent / (exponent - 1)
	power := vout / vin * load * load * rds * math.Pow(hot/298.15, exponent)
	edge := (hot - ambient) / power
	for share, settled := range map[float64]bool{0.5: true, 0.999: true, 1 - 1e-4: true, 1 + 1e-4: false, 1.001: false, 2: false} {
		d.Switch.ThetaJA = N(edge * share)
		b := answered(t, d, Point{vin, load, 25})
		if (b.State == Settled) != settled || !settled && b.Part != "switch" {
			t.Errorf("at %.10g of the fold: %s of %q, %g °C", share, b.State, b.Part, b.Temperatures.Switch)
		}
		if settled {
			x := b.Temperatures.Switch + 273.15
			r := rds * math.Pow(x/298.15, exponent)
			want := ambient + edge*share*(b.SwitchRMS*b.SwitchRMS*r+item(t, b, "switch", "turn_on")+item(t, b, "switch", "turn_off"))
			if math.Abs(x-want) > 1e-9 || x > hot || math.Abs(b.SwitchRMS-load*math.Sqrt(vout/vin)) > 1e-5*load {
				t.Errorf("at %.10g of the fold: %.12g K, from which %.12g follows", share, x, want)
			}
		}
	}
}
