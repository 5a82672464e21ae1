package budget

import (
	"math"

	"lossbook/budget/stage"
	"lossbook/budget/wave"
)

// Waves are the currents of a stage and the voltage of its switch over one period,
// which begins as the switch turns on.
//
// They are those that all losses are worked out from: straight segments, with
// commutation taking no time. What rings, overshoots or recovers is not in them, and
// neither is the bend that a saturating inductor gives its current between its lowest
// and its highest value. Source: Erickson & Maksimović, Fundamentals of Power
// Electronics, chapters 2 and 5.
type Waves struct {
	Period     float64 // s
	T1, T2, T3 float64 // s: switch conducts, rectifier conducts, no inductor current flows; their sum is the period
	List       []Waveform

	near  float64 // A, how far a figure may be from its waveform
	apart bool    // one is further
}

// Waveform is one of them. Part is whose it is; Quantity is "current" in A or
// "voltage" in V.
//
// Signs: inductor, switch and rectifier currents count in the direction in which
// power passes from input to output, so that the switch carries the inductor's current
// during T1 and the rectifier carries it during T2; a valley below 0 flows back. A
// capacitor's current counts into it and is what is left of the current it filters
// when the mean takes the other way: its own mean is 0.
type Waveform struct {
	Part, Quantity string
	Points         []Breakpoint
	Mean, RMS      float64
	Peak           float64 // the value farthest from 0, with its sign
}

// Breakpoint is where a waveform bends. Times (s) rise from 0 to the period; two
// points at one time are a jump, in the order in which they are passed.
type Breakpoint struct{ Time, Value float64 }

// Waveforms returns the waveforms of a settled budget. It reads its figures alone, so
// that those of a budget that was kept can be drawn: mode, duty, the inductor's
// current and the rectifier's mean, from which
//
//	t1 = duty·T      t2 = T − t1, or 2·I_rectifier,mean/Imax·T − t1 … T in discontinuous conduction
//
// The voltage is that of a switch without drop, blocking what its topology puts on it
// beside a rectifier without drop: 0 during T1, Vb during T2, Vrest during T3. False
// says that the budget has no figures, or that its rms values are not those of these
// waveforms to 1e-6 of the greatest current, as those of another model may be.
func Waveforms(d *Design, b *Budget) (Waves, bool) {
	topology, known := stage.ByName(d.Topology)
	if !known || b.State != Settled || !(d.Frequency.V > 0) {
		return Waves{}, false
	}
	w, t := Waves{Period: 1 / d.Frequency.V}, b.triangle()
	w.near = 1e-6 * math.Max(math.Abs(t.Max), math.Abs(t.Min))
	w.T1, w.T2 = t.D1*w.Period, t.D2*w.Period
	w.T3 = math.Max(0, w.Period-w.T1-w.T2)
	if b.Mode == CCM {
		w.T3 = 0
	}
	course, rising, falling := t.Course(), t.Rising(), t.Falling()
	branch := map[stage.Branch]wave.Line{stage.Inductor: course, stage.Switch: rising, stage.Rectifier: falling}
	drawn, fed := branch[topology.InputSees], branch[topology.OutputSees]
	voltage := t.Levels(0, topology.Blocking(b.Vin, b.Vout), topology.Rest(b.Vin, b.Vout))
	w.List = []Waveform{
		w.of("inductor", "current", course, b.Inductor.Mean, b.Inductor.RMS),
		w.of("switch", "current", rising, t.Rise().Mean(), b.SwitchRMS),
		w.of("rectifier", "current", falling, b.RectifierMean, b.RectifierRMS),
		w.of("input_capacitor", "current", drawn.Less(drawn.Mean(), -1), 0, b.InputCapRMS),
		w.of("output_capacitor", "current", fed.Less(fed.Mean(), 1), 0, b.OutputCapRMS),
		w.of("switch", "voltage", voltage, voltage.Mean(), math.Sqrt(voltage.MeanSquare())),
	}
	return w, !w.apart
}

// triangle is the inductor's current as the figures tell it.
func (b *Budget) triangle() wave.Triangle {
	t := wave.Triangle{Min: b.Inductor.Min, Max: b.Inductor.Max, D1: b.Duty, D2: 1 - b.Duty}
	if b.Mode == DCM {
		if t.D2 = 0; t.Max > 0 {
			t.D2 = 2 * b.RectifierMean / t.Max
		}
	}
	return t
}

// of makes a waveform of a line, with the figures that the budget states of it.
func (w *Waves) of(part, quantity string, l wave.Line, mean, rms float64) Waveform {
	f := Waveform{Part: part, Quantity: quantity, Points: make([]Breakpoint, len(l)), Mean: mean, RMS: rms, Peak: l.Peak()}
	for i, c := range l {
		f.Points[i] = Breakpoint{c.At * w.Period, c.Value}
	}
	if quantity == "current" {
		fits := math.Abs(l.Mean()-mean) <= w.near && math.Abs(math.Sqrt(l.MeanSquare())-rms) <= w.near
		w.apart = w.apart || !fits
	}
	return f
}
