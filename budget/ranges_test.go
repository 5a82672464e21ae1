package budget

import (
	"fmt"
	"math"
	"testing"
)

// TestCorners works designs out at the ends of what is built: ratios of 1.001 and 50,
// a milliwatt and ten kilowatts, a kilohertz and ten megahertz, in every topology. What
// settles must lie where plain substitution from the cold comes to rest, and what that
// settles must not be refused.
func TestCorners(t *testing.T) {
	met := map[string]int{}
	for _, topology := range []string{"boost", "buck", "buck_boost"} {
		for _, ratio := range []float64{1.001, 50} {
			for _, power := range []float64{1e-3, 1, 1e4} {
				for _, frequency := range []float64{1e3, 1e5, 1e7} {
					corner := fmt.Sprintf("%s %g: %g W at %g Hz", topology, ratio, power, frequency)
					for seed := range uint64(4) {
						d := newChance(seed).corner(topology, ratio, power, frequency)
						for _, share := range []float64{0.1, 1} {
							met[fmt.Sprint(topology, ratio)] += beside(t, corner, d, Point{d.Input.Nominal.V, share * d.Output.Current.V, d.Ambient.V})
						}
					}
				}
			}
		}
	}
	t.Logf("%v", met)
	for name, n := range met {
		if n < 10 {
			t.Errorf("only %d points of %s settled", n, name)
		}
	}
	if len(met) != 6 {
		t.Errorf("%d corners", len(met))
	}
}

// corner draws a design that suits a conversion, a power and a frequency.
func (c chance) corner(topology string, ratio, power, frequency float64) *Design {
	d := &Design{Format: Format, Name: "corner", Topology: topology, Rectifier: "diode", Frequency: N(frequency), Ambient: N(25)}
	high, low := 400.0, 400/ratio
	vin, vout := low, high
	if topology == "buck" || topology == "buck_boost" && c.maybe(0.5) {
		vin, vout = high, low
	}
	d.Input, d.Output = Input{N(vin), N(vin), N(vin)}, Output{N(vout), N(power / vout)}
	c.parts(d, vin, vout, power, 0.3)
	if topology == "buck" && ratio < 1.01 { // drops must leave a thousandth of the input
		d.Switch.RdsOn.V, d.Inductor.DCR.V = 0.005*d.Switch.RdsOn.V, 0.005*d.Inductor.DCR.V
		for i := range d.Series {
			d.Series[i].Resistance.V *= 0.005
		}
	}
	return d
}

// beside holds a point against plain substitution; it returns 1 if it settles.
func beside(t *testing.T, what string, d *Design, p Point) int {
	t.Helper()
	b := answered(t, d, p)
	decent(t, b.model, b)
	if b.State != Settled {
		missed(t, 0, 0, b.model, b)
		return 0
	}
	s, ok := substituted(b)
	if off := math.Abs(s.loss - b.Loss); !ok || off > 1e-10*b.Loss {
		t.Errorf("%s, %v: loss %.12g W, by substitution %.12g (%t)", what, p, b.Loss, s.loss, ok)
	}
	for i, got := range [3]float64{b.Temperatures.Switch, b.Temperatures.Rectifier, b.Temperatures.Inductor} {
		if math.Abs(got-s.temperature[i]) > 1e-8 {
			t.Errorf("%s, %v: %s %.12g °C, by substitution %.12g", what, p, partNames[i], got, s.temperature[i])
		}
	}
	inOrder(t, b)
	inBalance(t, what, b)
	return 1
}

// inBalance checks the answer against the balances themselves, from its own figures: the
// volt-seconds of the inductor, the charge of the output, and each part's heat.
func inBalance(t *testing.T, what string, b *Budget) {
	t.Helper()
	m, vout := b.model, b.Vout
	on, off := map[string]float64{"boost": b.Vin, "buck": b.Vin - vout, "buck_boost": b.Vin}[m.design.Topology], vout
	if m.design.Topology == "boost" {
		off = vout - b.Vin
	}
	mid := (b.Inductor.Min + b.Inductor.Max) / 2
	copper := m.design.Inductor.DCR.V * (1 + 0.00393*(b.Temperatures.Inductor-20))
	on -= mid * (b.power("switch", "conduction")/(b.SwitchRMS*b.SwitchRMS) + copper + m.seriesOn)
	off += mid * (copper + m.seriesOff)
	if m.sync {
		off += mid * b.power("rectifier", "conduction") / (b.RectifierRMS * b.RectifierRMS)
	} else {
		off += b.power("rectifier", "conduction") / b.RectifierMean // its mean drop, weighed by the current
		off -= m.forwardExcess(b, mid)
	}
	fall := 1 - b.Duty
	if b.Mode == DCM {
		fall = b.RectifierMean / mid
	}
	if rise := on * b.Duty; math.Abs(rise-off*fall) > 1e-9*math.Abs(rise) {
		t.Errorf("%s: %g V·s rise and %g V·s fall in each second", what, rise, off*fall)
	}
	var heat [3]float64
	for i := range m.entries {
		if e := &m.entries[i]; e.heats != noHeat {
			heat[e.heats] += b.Items[i].Power
		}
	}
	for i, got := range [3]float64{b.Temperatures.Switch, b.Temperatures.Rectifier, b.Temperatures.Inductor} {
		want := b.Ambient + m.theta[i]*heat[i] + m.enclosure*b.Loss
		if math.Abs(got-want) > 1e-8*math.Max(1, math.Abs(want)) {
			t.Errorf("%s: %s at %.12g °C, but its heat makes %.12g", what, partNames[i], got, want)
		}
	}
}

// forwardExcess is how much a diode's drop, weighed by the current that ripples through
// it, exceeds the drop at the current's middle: r_d·(mean square/mean − middle).
func (m *Model) forwardExcess(b *Budget, mid float64) float64 {
	d := m.design.Diode
	r := d.RD.V * (1 + d.RDSlope.V*(b.Temperatures.Rectifier-25))
	return r * (b.RectifierRMS*b.RectifierRMS/b.RectifierMean - mid)
}

func (b *Budget) power(part, kind string) float64 {
	for _, it := range b.Items {
		if it.Part == part && it.Kind == kind {
			return it.Power
		}
	}
	return math.NaN()
}

// TestSmallRipple asks for the digits of what ripples where the ripple is a millionth of
// the current: closed forms of a buck whose currents are known beforehand.
func TestSmallRipple(t *testing.T) {
	const vin, vout, load, f, esr, dcr = 48.0, 12.0, 10.0, 1e5, 0.02, 1e-9
	for _, ripple := range []float64{1e-3, 1e-6, 1e-8} {
		sw, drive := timed(1e-15, 1e-15, 1e-9)
		d := sheet("buck", vin, vout, load, f, sw, drive, dcr)
		d.OutputCapacitor = &Capacitor{Capacitance: N(1e-3), ESR: N(esr)}
		d.Inductor.Inductance = N((vin - vout) * vout / vin / f / (ripple * load))
		d.Inductor.ACCurve = Curve{{1, 3}, {1e9, 3}}
		d.Inductor.Core = &Core{ReferencePower: N(1), ReferenceFrequency: N(f), ReferenceRipple: N(ripple * load), Alpha: N(1.5), Beta: N(2.5)}
		_, b := solved(t, d, Point{vin, load, 25})
		swing, digits := ripple*load, 1e-7+1e-15/ripple
		near(t, ripple, "swing", b.Inductor.Max-b.Inductor.Min, swing, digits)
		near(t, ripple, "output capacitor", b.OutputCapRMS, swing/math.Sqrt(12), digits)
		near(t, ripple, "its loss", item(t, b, "output_capacitor", "esr"), swing*swing/12*esr, 2*digits)
		near(t, ripple, "winding, ac", item(t, b, "inductor", "winding_ac"), 3*swing*swing/12*dcr*(1+0.00393*5), 1e-4)
	}
}

func near(t *testing.T, ripple float64, what string, got, want, digits float64) {
	t.Helper()
	if math.Abs(got-want) > digits*want {
		t.Errorf("ripple %g: %s %.12g, want %.12g", ripple, what, got, want)
	}
}

// TestDeepSaturation works out inductors far in saturation. Their current must swing, about
// its middle, by what the flux of the on-time moves: the inductance of the law, or of a
// curve that is a straight line, added up over the swing by Simpson's rule.
func TestDeepSaturation(t *testing.T) {
	met := map[Mode]int{}
	for seed := range uint64(300) {
		c := newChance(seed)
		load, f := c.between(0.3, 30), c.between(5e4, 5e5)
		sw, drive := timed(1e-12, 1e-12, nothing)
		d := sheet("buck", 48, 12, load, f, sw, drive, nothing)
		l0 := 9 / f / load * c.between(0.5, 20)
		var inductance func(i float64) float64
		if d.Inductor.Inductance = N(l0); seed%2 == 0 {
			sat, drop := load*c.between(0.1, 1.5), c.between(0.1, 0.6)
			d.Inductor.ISat, d.Inductor.SatDrop = N(sat), N(drop)
			inductance = func(i float64) float64 { return l0 / (1 + drop/(1-drop)*(i/sat)*(i/sat)) }
		} else {
			most := load * c.between(1, 3)
			inductance = func(i float64) float64 { return l0 * (1 - 0.98*math.Min(math.Abs(i), most)/most) }
			for k := range 9 {
				i := most * float64(k) / 8
				d.Inductor.LCurve = append(d.Inductor.LCurve, [2]float64{i, inductance(i)})
			}
		}
		b := answered(t, d, Point{48, load, 25})
		if b.State != Settled {
			missed(t, seed, 1, b.model, b)
			continue
		}
		met[b.Mode]++
		mean, low, high := b.Inductor.Mean, b.Inductor.Min, b.Inductor.Max
		flux, want := simpson(inductance, low, high), (48-12)*b.Duty/f
		if math.Abs(flux-want) > 1e-6*want {
			t.Errorf("seed %d: from %g to %g A the flux moves by %.9g V·s, the on-time moves %.9g", seed, low, high, flux, want)
		}
		if middle := (low + high) / 2; b.Mode == CCM && math.Abs(middle-mean) > 1e-12*high || math.Abs(mean-load) > 1e-9*load {
			t.Errorf("seed %d: the middle of %g and %g A is not the mean of %g, or that not the load of %g", seed, low, high, mean, load)
		}
	}
	if t.Logf("%v", met); met[CCM] < 50 || met[DCM] < 20 {
		t.Error("too few to prove anything")
	}
}

// simpson adds a function up between two values.
func simpson(f func(float64) float64, low, high float64) float64 {
	const n = 20000
	sum, h := f(low)+f(high), (high-low)/n
	for i := 1; i < n; i++ {
		sum += f(low+float64(i)*h) * float64(2+2*(i%2))
	}
	return sum * h / 3
}
