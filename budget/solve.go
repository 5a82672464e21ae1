package budget

import "math"

// unknowns is what a point is solved for: the stage's loss in W, and for switch,
// rectifier and inductor the watts that, through their thermal resistances, make
// their temperature rise. All four are powers, so that they can be weighed against
// each other.
type unknowns [4]float64

// answer is how an attempt ended.
type answer struct {
	settled    bool
	wrong      fault    // of an attempt without solution: what its last iterate lacked
	hot        bool     // it left 1000 °C behind, or any number
	iterations int      // evaluations
	residual   float64  // how far the answer may be: relative to the loss, or to a temperature in kelvin
	step       unknowns // W, that was still to be made
}

// problem is the fixed-point problem of one mode at one point: find x = g(x).
type problem struct {
	s     *situation
	saved situation // while slopes are probed
	held  bool      // parts stay at ambient
	rise  [3]float64
	evals int
}

const (
	tolerance      = 1e-10 // asked of the loss and of each temperature in kelvin
	target         = 1e-11 // aimed at, since it costs one step more at most
	fastSteps      = 30
	slowSteps      = 600
	hottest        = 1000.0 // °C, above which no solution counts
	largestStep    = 20.0   // K, of a careful step
	smallestFactor = 1e-7   // of a careful step, before it is given up
)

// pose sets the problem for a situation whose frame and mode are set.
func (p *problem) pose(s *situation, held bool) {
	p.s, p.held, p.evals = s, held, 0
	for i := range p.rise {
		p.rise[i] = s.m.theta[i] + s.m.enclosure
	}
}

// temperatures returns what the unknowns stand for, in °C.
func (p *problem) temperatures(x unknowns) [3]float64 {
	var t [3]float64
	for i := range t {
		t[i] = p.s.frame.Ambient
		if !p.held {
			t[i] += p.rise[i] * x[i+1]
		}
	}
	return t
}

// at evaluates g(x) − x. The situation is left as evaluated.
func (p *problem) at(x unknowns) (unknowns, fault) {
	p.evals++
	if wrong := p.s.evaluate(x[0], p.temperatures(x)); wrong != sound {
		return unknowns{}, wrong
	}
	r := unknowns{p.s.stage - x[0]}
	for i := range p.rise {
		if p.rise[i] > 0 && !p.held {
			watts := (p.s.m.theta[i]*p.s.heat[i] + p.s.m.enclosure*p.s.loss) / p.rise[i]
			r[i+1] = watts - x[i+1]
		}
	}
	return r, sound
}

// error measures a step that is still to be made: the larger of its share of the
// loss and of each temperature in kelvin.
func (p *problem) error(step unknowns) float64 {
	worst := 0.0
	if step[0] != 0 {
		answer := p.s.guess + (p.s.loss - p.s.stage) // not what followed from the guess: far off, that is far larger
		worst = math.Abs(step[0]) / max(answer, math.SmallestNonzeroFloat64)
	}
	if p.held {
		return worst
	}
	for i := range p.rise {
		kelvin := p.s.temperature[i] - absoluteZero
		worst = max(worst, math.Abs(step[i+1])*p.rise[i]/kelvin)
	}
	return worst
}

// solve looks for the solution that is reached from the cold: first by quick steps
// that learn the slope on the way (Broyden), and where these are not to be trusted
// by careful ones.
func (p *problem) solve() answer {
	if a, trusted := p.quick(); trusted {
		return a
	}
	return p.careful()
}

// quick starts cold and makes Newton's steps with a slope that it partly knows and
// partly learns on the way (response). It gives up, untrusted, when a step has no answer or
// makes things worse, and it accepts only a fixed point that plain substitution would
// hold on to, not an unstable one beyond.
func (p *problem) quick() (answer, bool) {
	var x unknowns
	r, wrong := p.at(x)
	if wrong != sound {
		return answer{}, false
	}
	l := p.guess()
	for range fastSteps {
		step, regular := p.newton(&l, r)
		if !regular {
			return answer{}, false
		}
		if e := p.error(step); e <= target {
			return answer{settled: true, iterations: p.evals, residual: e, step: step}, p.holds(&l, x) || p.stable(x, r)
		}
		before := p.s.sums
		after, wrong := p.at(x.plus(step))
		if wrong != sound || after.norm() > 2*r.norm() {
			return answer{}, false
		}
		p.learn(&l, &before, step)
		x, r = x.plus(step), after
	}
	return answer{}, false
}

// stable tells whether the heated solution at x is one that substitution from the
// cold would reach: a step along the way that led here must shrink. The situation is
// left as evaluated at x.
func (p *problem) stable(x, r unknowns) bool {
	if p.held || x.norm() == 0 {
		return true
	}
	const h = 1e-6
	p.saved = *p.s
	after, wrong := p.at(x.scaled(1 + h))
	*p.s = p.saved
	if wrong != sound {
		return false
	}
	for i := range x {
		if x[i] == 0 {
			continue
		}
		growth := 1 + (after[i]-r[i])/(h*x[i])
		if growth > 0.9 {
			return false
		}
	}
	return true
}

// careful follows the flow dx/dt = g(x) − x from the cold, by implicit Euler steps
// whose length grows as the residual falls, so that they end as Newton's (pseudo-
// transient continuation: C. T. Kelley and D. E. Keyes, SIAM J. Numer. Anal. 35,
// 1998). Steps are short in temperature, so that no root is leapt over.
func (p *problem) careful() answer {
	var x unknowns
	r, wrong := p.at(x)
	if wrong != sound {
		return answer{wrong: wrong, iterations: p.evals}
	}
	best := answer{}
	pace := 1.0
	for range slowSteps {
		slope := p.slope(x, r)
		newton, regular := slope.solve(r, math.Inf(1))
		if e := p.error(newton); regular && e <= target {
			return p.accept(x, newton, e, slope)
		} else if regular && e <= tolerance && (best.settled && e >= best.residual/2) {
			return p.accept(x, newton, e, slope)
		} else if regular && e <= tolerance {
			best = answer{settled: true, residual: e}
		}
		var after unknowns
		x, after, pace, wrong = p.advance(x, r, slope, pace)
		if wrong != sound {
			return answer{wrong: wrong, hot: wrong == overflow, iterations: p.evals}
		}
		if p.leftBehind(after) {
			return answer{hot: true, iterations: p.evals}
		}
		r = after
	}
	return answer{iterations: p.evals}
}

// accept takes the fixed point at x, unless the flow that led here would leave it
// again: beyond the solution that was lost, long steps can end at one that is none.
func (p *problem) accept(x, step unknowns, e float64, slope matrix) answer {
	if !slope.settles() {
		return answer{hot: true, iterations: p.evals}
	}
	p.at(x)
	return answer{settled: true, iterations: p.evals, residual: e, step: step}
}

// leftBehind tells whether a part is far above any solution that counts and still
// heating.
func (p *problem) leftBehind(r unknowns) bool {
	for i, t := range p.s.temperature {
		if t > 2*hottest && r[i+1] > 0 {
			return true
		}
	}
	return false
}

// advance makes one careful step, shorter and shorter until it has an answer and
// does not throw the residual up. It returns the fault when even the smallest does
// not: the domain of the balance ends here.
func (p *problem) advance(x, r unknowns, slope matrix, pace float64) (unknowns, unknowns, float64, fault) {
	for {
		step := forward(r, slope, &pace)
		step = step.scaled(p.limit(x, step))
		after, wrong := p.at(x.plus(step))
		if wrong == sound && (after.norm() <= 2*r.norm() || pace < 1e-3) {
			return x.plus(step), after, nextPace(pace, r, after), sound
		}
		if pace /= 4; !(pace >= smallestFactor) {
			if wrong == sound {
				return x.plus(step), after, 1, sound
			}
			return x, r, pace, wrong
		}
	}
}

// forward returns the implicit step, at a pace short enough that it goes with the
// residual: past a fold a long one would turn back to where the solution was lost.
func forward(r unknowns, slope matrix, pace *float64) unknowns {
	for *pace > 1e-3 {
		if step, regular := slope.solve(r, *pace); regular && step.dot(r) > 0 {
			return step
		}
		*pace /= 2
	}
	return r.scaled(*pace)
}

// nextPace lengthens the steps as the residual falls, and shortens them when it has
// turned round: then the last step leapt over something, and without shorter ones
// they could go to and fro for ever.
func nextPace(pace float64, before, after unknowns) float64 {
	if before.dot(after) < 0 {
		return pace * math.Min(0.3, before.norm()/after.norm())
	}
	return math.Min(1e12, pace*math.Min(10, math.Max(0.5, 2*before.norm()/after.norm())))
}

// limit returns the factor that keeps a step within a few kelvin and a fraction of
// the power that flows.
func (p *problem) limit(x, step unknowns) float64 {
	factor := 1.0
	power := p.s.m.vout*p.s.frame.io + math.Abs(x[0]) + p.s.loss
	if room := power / 4; math.Abs(step[0]) > room {
		factor = room / math.Abs(step[0])
	}
	for i := range p.rise {
		if k := math.Abs(step[i+1]) * p.rise[i]; k*factor > largestStep {
			factor = largestStep / k
		}
	}
	return factor
}

// probe returns the step of a difference: a ten-thousandth of a kelvin, or as small a
// share of the power that flows.
func (p *problem) probe(x unknowns, j int) float64 {
	if j > 0 {
		return 1e-4 / p.rise[j-1]
	}
	if power := p.s.m.vout*p.s.frame.io + math.Abs(x[0]); power > 0 {
		return 1e-7 * power
	}
	return 1e-7 * math.Max(p.s.loss, math.SmallestNonzeroFloat64/1e-7)
}

// slope returns I − G' at x by one-sided differences.
func (p *problem) slope(x, r unknowns) matrix {
	a := identity()
	p.saved = *p.s
	for j := range x {
		if j > 0 && (p.held || p.rise[j-1] == 0) {
			continue
		}
		h := p.probe(x, j)
		probe := x
		probe[j] += h
		h = probe[j] - x[j]
		after, wrong := p.at(probe)
		if wrong != sound { // at the end of the domain: look the other way
			h = -h
			probe[j] = x[j] + h
			if after, wrong = p.at(probe); wrong != sound {
				continue
			}
		}
		for i := range x {
			a[i][j] = -(after[i] - r[i]) / h
		}
	}
	*p.s = p.saved
	return a
}
