package budget_test

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// near is how close to its target a search must come, as a share of it.
const near = 1e-11

// plain returns the same circuit in units in which Vin, the inductance and the period
// are 1, so that numbers of one size meet in its matrices, and the unit of current in A.
func (c *circuit) plain() (circuit, float64) {
	volt := c.vin
	ampere := volt * c.period / c.inductance
	farad, ohm := ampere*c.period/volt, volt/ampere
	p := *c
	p.period, p.inductance = 1, 1
	p.vin, p.vout, p.load = 1, c.vout/volt, c.load/ampere
	p.guessOn, p.guessTotal = c.guessOn/volt, c.guessTotal/volt
	p.kink = c.kink * ampere
	p.inputC, p.outputC = c.inputC/farad, c.outputC/farad
	p.inputESR, p.outputESR = c.inputESR/ohm, c.outputESR/ohm
	for _, way := range []*path{&p.on, &p.off} {
		way.resistance /= ohm
		way.drop /= volt
	}
	return p, ampere
}

// exact returns the figures of a circuit whose mean output voltage is Vout.
func (c *circuit) exact(topology string) (f figures, err error) {
	p, ampere := c.plain()
	if p.kink > 0 {
		f, err = p.lapped(topology)
	} else {
		f, err = p.settled()
	}
	for _, current := range []*float64{&f.mean, &f.rms, &f.max, &f.min, &f.switchRMS, &f.rectifierRMS, &f.rectifierMean, &f.inputRMS, &f.outputRMS, &f.source} {
		*current *= ampere
	}
	f.loss *= ampere * c.vin
	return f, err
}

func (c *circuit) settled() (figures, error) {
	o, err := c.continuous()
	if err == nil {
		if f := c.measure(o); !c.rectifies || f.min >= 0 {
			f.mode = "ccm"
			return f, nil
		}
	}
	if !c.rectifies {
		return figures{}, err
	}
	if o, err = c.discontinuous(); err != nil {
		return figures{}, err
	}
	f := c.measure(o)
	f.mode = "dcm"
	return f, nil
}

// continuous finds the duty by secants from that without drops.
func (c *circuit) continuous() (orbit, error) {
	miss := func(d float64) (orbit, float64) {
		o, ends := c.periodic(d, 1-d, true)
		return o, ends[1].AtVec(xOutputArea)/c.vout - 1
	}
	d := 1 - c.guessOn/c.guessTotal
	before := d * 0.999
	_, missBefore := miss(before)
	for range 60 {
		o, m := miss(d)
		if math.Abs(m) < near {
			return o, nil
		}
		next := d - m*(d-before)/(m-missBefore)
		before, missBefore = d, m
		switch {
		case !(next > d/2):
			next = d / 2
		case !(next < (1+d)/2):
			next = (1 + d) / 2
		}
		d = next
	}
	return orbit{}, fmt.Errorf("no duty for %g V", c.vout)
}

// discontinuous finds both intervals by Newton's method from those without drops:
// the current must have ended with the second, and the mean output voltage be Vout.
func (c *circuit) discontinuous() (orbit, error) {
	von, voff := c.guessOn, c.guessTotal-c.guessOn
	mean := c.meanGuess()
	peak := math.Sqrt(2 * mean * c.period / c.inductance / (1/von + 1/voff))
	d := [2]float64{peak * c.inductance / von / c.period, peak * c.inductance / voff / c.period}
	if sum := d[0] + d[1]; sum > 0.95 {
		d[0], d[1] = d[0]*0.95/sum, d[1]*0.95/sum
	}
	miss := func(d [2]float64) (orbit, [2]float64) {
		o, ends := c.periodic(d[0], d[1], false)
		return o, [2]float64{ends[1].AtVec(xCurrent) / ends[0].AtVec(xCurrent), ends[2].AtVec(xOutputArea)/c.vout - 1}
	}
	for range 60 {
		o, m := miss(d)
		if math.Abs(m[0]) < near && math.Abs(m[1]) < near {
			if o.d3 < 0 {
				return o, fmt.Errorf("the current does not end")
			}
			return o, nil
		}
		j := mat.NewDense(2, 2, nil)
		for k := range 2 {
			moved, h := d, 1e-6*d[k]
			moved[k] += h
			_, up := miss(moved)
			moved[k] -= 2 * h
			_, down := miss(moved)
			j.Set(0, k, (up[0]-down[0])/(2*h))
			j.Set(1, k, (up[1]-down[1])/(2*h))
		}
		var by mat.VecDense
		if err := by.SolveVec(j, mat.NewVecDense(2, m[:])); err != nil {
			return orbit{}, err
		}
		for k := range 2 {
			d[k] = math.Max(d[k]/2, math.Min(d[k]*1.5, d[k]-by.AtVec(k)))
		}
	}
	return orbit{}, fmt.Errorf("no intervals for %g V", c.vout)
}

// meanGuess is the mean inductor current without losses.
func (c *circuit) meanGuess() float64 {
	source := c.vout * c.load / c.vin
	switch {
	case c.on.out: // buck
		return c.load
	case c.off.in: // boost
		return source
	}
	return source + c.load
}
