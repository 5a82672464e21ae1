package budget_test

import (
	"math"

	"gonum.org/v1/gonum/integrate/quad"
	"gonum.org/v1/gonum/mat"
)

// circuit is a power stage as a switched linear network with ideal commutation:
//
//   - a source of constant current Is (a feed of endless inductance) beside the input
//     capacitor; Is is what makes the mean voltage there Vin
//   - a sink of constant current Io beside the output capacitor, where the mean
//     voltage is Vout
//   - each capacitor in series with a resistance of its own
//   - an inductor, and in each path the resistances that lie there; a diode as a
//     constant voltage in series with a resistance that lets no current back
//
// All of the network is solved; no current is taken as straight and no voltage as
// constant. Units are V, A, Ω, F, H, s.
type circuit struct {
	on, off   path
	rectifies bool // the current can't reverse: a diode, or a MOSFET driven like one

	period, inductance  float64
	vin, vout, load     float64
	kink                float64 // 1/A: the inductance halves at a current of 1/kink; 0 of a linear network
	inputC, inputESR    float64
	outputC, outputESR  float64
	guessOn, guessTotal float64 // volts that drive the inductor without drops, to start from
}

// path is how the inductor is connected during an interval.
type path struct {
	in, out    bool    // to the input, to the output
	resistance float64 // Ω of the whole path
	drop       float64 // V against the current
}

// The state that is carried through a period: inductor current, voltages within the
// capacitors, a constant 1, the source's current, and integrals over time: of the
// voltages at input, output and inductor, and of the currents into the capacitors.
// Time is in periods. A period returns when its last three integrals do, which loses
// no digits as the difference of two large states would.
const (
	xCurrent = iota
	xInput
	xOutput
	xOne
	xSource
	xInputArea
	xOutputArea
	xLinkage
	xInputCharge
	xOutputCharge
	states
)

func unit(connected bool) float64 {
	if connected {
		return 1
	}
	return 0
}

// rates returns A of dx/dt = A·x on a path; none is one where no current flows.
func (c *circuit) rates(p *path) *mat.Dense {
	var in, out float64
	if p != nil {
		in, out = unit(p.in), unit(p.out)
	}
	// v_in = v_C + ESR·(Is − in·i), v_out = v_C + ESR·(out·i − Io)
	input, output := make([]float64, states), make([]float64, states)
	input[xInput], input[xSource], input[xCurrent] = 1, c.inputESR, -c.inputESR*in
	output[xOutput], output[xCurrent], output[xOne] = 1, c.outputESR*out, -c.outputESR*c.load
	a := mat.NewDense(states, states, nil)
	if p != nil {
		for x := range states {
			a.Set(xLinkage, x, in*input[x]-out*output[x])
		}
		a.Set(xLinkage, xCurrent, a.At(xLinkage, xCurrent)-p.resistance)
		a.Set(xLinkage, xOne, a.At(xLinkage, xOne)-p.drop)
	}
	a.Set(xInputCharge, xSource, 1)
	a.Set(xInputCharge, xCurrent, -in)
	a.Set(xOutputCharge, xCurrent, out)
	a.Set(xOutputCharge, xOne, -c.load)
	a.SetRow(xInputArea, input)
	a.SetRow(xOutputArea, output)
	for x := range states {
		a.Set(xCurrent, x, a.At(xLinkage, x)*c.period/c.inductance)
		a.Set(xInput, x, a.At(xInputCharge, x)*c.period/c.inputC)
		a.Set(xOutput, x, a.At(xOutputCharge, x)*c.period/c.outputC)
	}
	return a
}

// after returns e^(A·t), which carries a state through the time t on a path.
func (c *circuit) after(p *path, t float64) *mat.Dense {
	var scaled, e mat.Dense
	scaled.Scale(t, c.rates(p))
	e.Exp(&scaled)
	return &e
}

// orbit is a periodic state: what a period begins with, and its intervals as shares
// of the period: switch, rectifier, rest.
type orbit struct {
	start      *mat.VecDense
	d1, d2, d3 float64
}

// step is x carried through the time t.
func (c *circuit) step(p *path, t float64, x *mat.VecDense) *mat.VecDense {
	var y mat.VecDense
	y.MulVec(c.after(p, t), x)
	return &y
}

// periodic finds the state that returns after a period with the intervals given, and
// the source's current that makes the mean input voltage Vin. With these the
// equations are linear. In discontinuous conduction the period begins without
// current. It returns the orbit and the state after the switch's and the rectifier's
// interval and after the whole.
func (c *circuit) periodic(d1, d2 float64, continuous bool) (orbit, [3]*mat.VecDense) {
	e1, e2, e3 := c.after(&c.on, d1), c.after(&c.off, d2), c.after(nil, 1-d1-d2)
	var m mat.Dense
	m.Mul(e2, e1)
	free, rows := []int{xInput, xOutput, xSource}, []int{xInputCharge, xOutputCharge, xInputArea}
	if continuous {
		free, rows = append(free, xCurrent), append(rows, xLinkage)
	} else {
		m.Mul(e3, mat.DenseCopyOf(&m))
	}
	a, b := mat.NewDense(len(rows), len(free), nil), mat.NewVecDense(len(rows), nil)
	for i, row := range rows {
		for j, x := range free {
			a.Set(i, j, m.At(row, x))
		}
		b.SetVec(i, -m.At(row, xOne))
		if row == xInputArea {
			b.SetVec(i, c.vin-m.At(row, xOne))
		}
	}
	var solved mat.VecDense
	if err := solved.SolveVec(a, b); err != nil {
		panic(err)
	}
	start := mat.NewVecDense(states, nil)
	start.SetVec(xOne, 1)
	for j, x := range free {
		start.SetVec(x, solved.AtVec(j))
	}
	var ends [3]*mat.VecDense
	x := start
	for i, e := range []*mat.Dense{e1, e2, e3} {
		if continuous && i == 2 {
			ends[i] = x
			break
		}
		var y mat.VecDense
		y.MulVec(e, x)
		x, ends[i] = &y, &y
	}
	return orbit{start, d1, d2, 1 - d1 - d2}, ends
}

// figures are what a stage is asked for.
type figures struct {
	mode                                   string
	duty                                   float64
	mean, rms, max, min                    float64
	switchRMS, rectifierRMS, rectifierMean float64
	inputRMS, outputRMS                    float64
	source, loss, efficiency               float64
	open                                   float64 // share by which the energies of the network fail to close
}

// nodes of the quadrature in each interval.
const nodes = 12

// measure integrates the currents over an orbit.
func (c *circuit) measure(o orbit) figures {
	f := figures{duty: o.d1, min: math.Inf(1), max: math.Inf(-1), source: o.start.AtVec(xSource)}
	at, weight := make([]float64, nodes), make([]float64, nodes)
	x, square := o.start, 0.0
	var input, output, spent float64
	for i, p := range []*path{&c.on, &c.off, nil} {
		span := [...]float64{o.d1, o.d2, o.d3}[i]
		if span <= 0 {
			continue
		}
		(quad.Legendre{}).FixedLocations(at, weight, 0, span)
		var mean, meanSquare float64
		for n := range at {
			current, drawn, fed := c.step(p, at[n], x).AtVec(xCurrent), 0.0, 0.0
			if p == nil {
				current = 0
			} else {
				drawn, fed = unit(p.in)*current, unit(p.out)*current
			}
			mean += weight[n] * current
			meanSquare += weight[n] * current * current
			input += weight[n] * (f.source - drawn) * (f.source - drawn)
			output += weight[n] * (fed - c.load) * (fed - c.load)
		}
		f.mean, square = f.mean+mean, square+meanSquare
		switch i {
		case 0:
			f.switchRMS = math.Sqrt(meanSquare)
		case 1:
			f.rectifierRMS, f.rectifierMean = math.Sqrt(meanSquare), mean
		}
		if p != nil {
			spent += p.resistance*meanSquare + p.drop*mean
			low, high := c.extremes(p, span, x)
			f.min, f.max = math.Min(f.min, low), math.Max(f.max, high)
		} else {
			f.min, f.max = math.Min(f.min, 0), math.Max(f.max, 0)
		}
		x = c.step(p, span, x)
	}
	f.rms, f.inputRMS, f.outputRMS = math.Sqrt(square), math.Sqrt(input), math.Sqrt(output)
	spent += c.inputESR*input + c.outputESR*output
	f.loss = f.source*c.vin - c.load*c.vout
	f.efficiency = c.load * c.vout / (f.source * c.vin)
	f.open = math.Abs(f.loss-spent) / (f.source * c.vin)
	return f
}

// extremes returns the lowest and highest current of an interval, at its ends or
// where its slope changes sign between them.
func (c *circuit) extremes(p *path, span float64, x *mat.VecDense) (low, high float64) {
	a := c.rates(p).RowView(xCurrent)
	slope := func(t float64) float64 { return mat.Dot(a, c.step(p, t, x)) }
	first, last := x.AtVec(xCurrent), c.step(p, span, x).AtVec(xCurrent)
	low, high = math.Min(first, last), math.Max(first, last)
	if begin := slope(0); begin*slope(span) < 0 {
		from, to := 0.0, span
		for range 60 {
			if mid := (from + to) / 2; slope(mid)*begin > 0 {
				from = mid
			} else {
				to = mid
			}
		}
		turn := c.step(p, from, x).AtVec(xCurrent)
		low, high = math.Min(low, turn), math.Max(high, turn)
	}
	return low, high
}
