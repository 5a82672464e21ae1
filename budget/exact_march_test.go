package budget_test

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// A third way, for inductors that saturate, which no linear network holds: the equations
// of each topology written out by hand and integrated in small steps, and the state
// that returns found by Newton's method. The linear network is checked by it too.

// The state that is marched: flux linkage, voltages within the capacitors, and the
// integrals of what is asked for.
const (
	yLinkage = iota
	yInput
	yOutput
	yInputArea
	yOutputArea
	yCurrent
	ySquare
	yRectifier
	yInputSquare
	yOutputSquare
	marched
)

type march [marched]float64

func (y march) plus(slope march, h float64) march {
	for j := range y {
		y[j] += h * slope[j]
	}
	return y
}

// current returns the inductor's current at a linkage. With L(i) = L/(1 + (k·i)²), k the
// kink, λ is L/k·atan(k·i).
func (c *circuit) current(linkage float64) float64 {
	if c.kink == 0 {
		return linkage / c.inductance
	}
	return math.Tan(c.kink*linkage/c.inductance) / c.kink
}

func (c *circuit) linkage(current float64) float64 {
	if c.kink == 0 {
		return current * c.inductance
	}
	return math.Atan(c.kink*current) * c.inductance / c.kink
}

// slope returns dy/dt in the units in which the period is 1; phase 0 is the switch's
// interval, 1 the rectifier's, 2 the rest.
func (c *circuit) slope(topology string, phase int, source float64, y march) (d march) {
	i, drawn, fed := c.current(y[yLinkage]), 0.0, 0.0
	if phase == 2 {
		i = 0
	}
	if phase == 0 || phase == 1 && topology == "boost" {
		drawn = i
	}
	if phase == 1 || phase == 0 && topology == "buck" {
		fed = i
	}
	in, out := y[yInput]+c.inputESR*(source-drawn), y[yOutput]+c.outputESR*(fed-c.load)
	switch {
	case phase == 2:
	case phase == 0 && topology == "buck":
		d[yLinkage] = in - out - c.on.resistance*i
	case phase == 0:
		d[yLinkage] = in - c.on.resistance*i
	case topology == "boost":
		d[yLinkage] = in - out - c.off.drop - c.off.resistance*i
	default:
		d[yLinkage] = -out - c.off.drop - c.off.resistance*i
	}
	d[yInput], d[yOutput] = (source-drawn)/c.inputC, (fed-c.load)/c.outputC
	d[yInputArea], d[yOutputArea] = in, out
	d[yCurrent], d[ySquare] = i, i*i
	if phase == 1 {
		d[yRectifier] = i
	}
	d[yInputSquare], d[yOutputSquare] = (source-drawn)*(source-drawn), (fed-c.load)*(fed-c.load)
	return d
}

// steps of the march within an interval.
const steps = 80

// run marches a state through an interval by the Runge-Kutta method of fourth order.
func (c *circuit) run(topology string, phase int, source, span float64, y march) march {
	h := span / steps
	for range steps {
		k1 := c.slope(topology, phase, source, y)
		k2 := c.slope(topology, phase, source, y.plus(k1, h/2))
		k3 := c.slope(topology, phase, source, y.plus(k2, h/2))
		k4 := c.slope(topology, phase, source, y.plus(k3, h))
		y = y.plus(k1, h/6).plus(k2, h/3).plus(k3, h/3).plus(k4, h/6)
	}
	return y
}

// lap is a period that is tried: what it begins with, the source's current, and the
// intervals. In continuous conduction the rectifier's takes what the switch's leaves.
type lap struct {
	start      march
	source     float64
	d1, d2     float64
	continuous bool
}

func lapOf(c *circuit, o orbit, continuous bool) lap {
	l := lap{source: o.start.AtVec(xSource), d1: o.d1, d2: o.d2, continuous: continuous}
	l.start[yInput], l.start[yOutput] = o.start.AtVec(xInput), o.start.AtVec(xOutput)
	l.start[yLinkage] = c.linkage(o.start.AtVec(xCurrent))
	return l
}

// ends returns the state after each interval.
func (l *lap) ends(c *circuit, topology string) (y [3]march) {
	y[0] = c.run(topology, 0, l.source, l.d1, l.start)
	if l.continuous {
		y[1] = c.run(topology, 1, l.source, 1-l.d1, y[0])
		y[2] = y[1]
		return y
	}
	y[1] = c.run(topology, 1, l.source, l.d2, y[0])
	y[2] = c.run(topology, 2, l.source, 1-l.d1-l.d2, y[1])
	return y
}

// unknowns are what Newton's method moves.
func (l *lap) unknowns() []*float64 {
	free := []*float64{&l.start[yInput], &l.start[yOutput], &l.source, &l.d1}
	if l.continuous {
		return append(free, &l.start[yLinkage])
	}
	return append(free, &l.d2)
}

// miss is by how much a lap fails to return, and its mean voltages to be those asked.
func (l *lap) miss(c *circuit, topology string) []float64 {
	y := l.ends(c, topology)
	begin := 0.0
	if l.continuous {
		begin = l.start[yLinkage]
	}
	return []float64{y[1][yLinkage] - begin, (y[2][yInput] - l.start[yInput]) * c.inputC, (y[2][yOutput] - l.start[yOutput]) * c.outputC,
		y[2][yInputArea] - c.vin, y[2][yOutputArea] - c.vout}
}

// close changes a lap until it returns.
func (l *lap) close(c *circuit, topology string) error {
	for range 40 {
		missed := l.miss(c, topology)
		off := 0.0
		for _, m := range missed {
			off = math.Max(off, math.Abs(m))
		}
		if off < 1e-10 {
			return nil
		}
		j := mat.NewDense(len(missed), len(missed), nil)
		for k, x := range l.unknowns() {
			was, h := *x, 1e-6*math.Max(math.Abs(*x), 1e-3)
			*x = was + h
			up := l.miss(c, topology)
			*x = was - h
			down := l.miss(c, topology)
			*x = was
			for i := range up {
				j.Set(i, k, (up[i]-down[i])/(2*h))
			}
		}
		var by mat.VecDense
		if err := by.SolveVec(j, mat.NewVecDense(len(missed), missed)); err != nil {
			return err
		}
		shorter := 1.0
		for _, k := range []int{3, 4} {
			if x := *l.unknowns()[k]; k == 3 || !l.continuous {
				shorter = math.Min(shorter, 0.5*math.Min(x, 1-x)/math.Abs(by.AtVec(k)))
			}
		}
		for k, x := range l.unknowns() {
			*x -= shorter * by.AtVec(k)
		}
	}
	return fmt.Errorf("%s: no lap returns", topology)
}

// figures of a lap that returns.
func (l *lap) figures(c *circuit, topology string) figures {
	y := l.ends(c, topology)
	root := math.Sqrt
	f := figures{duty: l.d1, source: l.source, mean: y[2][yCurrent], rms: root(y[2][ySquare]), min: c.current(l.start[yLinkage]), max: c.current(y[0][yLinkage]),
		switchRMS: root(y[0][ySquare]), rectifierRMS: root(y[1][ySquare] - y[0][ySquare]), rectifierMean: y[1][yRectifier],
		inputRMS: root(y[2][yInputSquare]), outputRMS: root(y[2][yOutputSquare])}
	f.loss, f.efficiency = f.source*c.vin-c.load*c.vout, c.load*c.vout/(f.source*c.vin)
	spent := c.on.resistance*y[0][ySquare] + c.off.resistance*(y[1][ySquare]-y[0][ySquare]) + c.off.drop*y[1][yRectifier] + c.inputESR*y[2][yInputSquare] + c.outputESR*y[2][yOutputSquare]
	f.open = math.Abs(f.loss-spent) / (f.source * c.vin)
	return f
}

// lapped solves a circuit in plain units by laps, from the linear solution with the
// inductance that the coil has at its mean current.
func (c *circuit) lapped(topology string) (figures, error) {
	near := *c
	k := c.kink * c.meanGuess()
	near.kink, near.inductance = 0, c.inductance/(1+k*k)
	o, err := near.continuous()
	if err == nil {
		l := lapOf(c, o, true)
		if err = l.close(c, topology); err == nil {
			if f := l.figures(c, topology); !c.rectifies || f.min >= 0 {
				f.mode = "ccm"
				return f, nil
			}
		}
	}
	if !c.rectifies {
		return figures{}, err
	}
	near.inductance = c.inductance
	if o, err = near.discontinuous(); err != nil {
		return figures{}, err
	}
	l := lapOf(c, o, false)
	l.start[yLinkage] = 0
	if err = l.close(c, topology); err != nil {
		return figures{}, err
	}
	f := l.figures(c, topology)
	f.mode = "dcm"
	return f, nil
}
