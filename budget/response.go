package budget

import (
	"math"

	"lossbook/budget/device"
	"lossbook/budget/magnetic"
)

// property is what a loss is proportional to and its part's temperature moves. It
// steers the solver's steps and nothing else: a loss whose property is named wrongly
// costs steps, not digits.
type property uint8

const (
	steady property = iota // of currents and voltages alone
	ofChannel
	ofRectifier
	ofLeakage
	ofCopper
	ofCore
	properties
)

// rates works out by how much of itself each property rises in a kelvin. The diode's
// drop is the sum of two that weigh differently at each current: that of a MOSFET's
// channel is here, the diode's is found with the currents.
func (s *situation) rates() {
	m := s.m
	s.rate[ofChannel] = m.onResistance.Rate(s.temperature[switchHeat])
	if m.sync {
		s.rate[ofRectifier] = m.syncResistance.Rate(s.temperature[rectifierHeat])
	} else {
		s.rate[ofLeakage] = m.leakage.Rate()
	}
	s.rate[ofCopper] = magnetic.CopperRate(s.temperature[inductorHeat])
	s.rate[ofCore] = m.core.Rate(s.temperature[inductorHeat])
}

// dropRate is that of a diode's forward loss at the currents found.
func (s *situation) dropRate() float64 {
	f := s.m.forward
	loss := device.ForwardLoss(s.forwardVolt, s.forwardOhm, s.re.Mean(), s.re.MeanSquare())
	if loss == 0 {
		return 0
	}
	return device.ForwardLoss(f.ThresholdSlope, f.Resistance*f.ResistanceSlope, s.re.Mean(), s.re.MeanSquare()) / loss
}

// response is how the losses answer to the unknowns, as far as steps need to know. How a
// part's heat follows its own temperature is known at every evaluation (warm); how all of it
// follows the stage's loss, which has to flow through it, is guessed at first and then
// learnt from what each step did. That temperatures also move the currents a little is
// learnt along with it.
type response struct {
	heat        [3]float64 // W in a part for each W of stage loss
	stage, loss float64    // W of both sums for each W of stage loss
}

const (
	elasticity = 1.5  // of a loss over the current, between straight and square
	leastRoom  = 0.05 // of one less a gain, below which a quick step would go too far
)

// guess starts from losses that rise with some power of the inductor's mean current.
func (p *problem) guess() response {
	s := p.s
	if s.il == 0 {
		return response{}
	}
	t := s.m.topology
	k := elasticity * (t.MeanCurrent(1, 0) - t.MeanCurrent(0, 0)) / (s.frame.Vin * s.il)
	l := response{stage: k * s.stage, loss: k * s.stage}
	for i, h := range s.heat {
		l.heat[i] = k * h
	}
	return l
}

// newton returns the step to where the residual would vanish if the losses went on as
// they lean. With dP_i the change of a part's heat and dP that of all losses,
//
//	dx_i = r_i + (θ_i·dP_i + θ_e·dP)/(θ_i + θ_e)      dx_0 = r_0 + dP_stage
//
// each of these changes a sum of what the unknowns move. regular is false near or
// beyond where heat feeds itself.
func (p *problem) newton(l *response, r unknowns) (step unknowns, regular bool) {
	var fixed, byLoss, byAll unknowns // dx_i = fixed + byLoss·dx_0 + byAll·dP
	var constant, slope, all float64  // the same of Σ dP_i by temperature
	if !p.held {
		for i, rise := range p.rise {
			if rise == 0 {
				continue
			}
			room := 1 - p.s.m.theta[i]*p.s.heating[i]
			if !(room > leastRoom) {
				return step, false
			}
			own := p.s.m.theta[i] / rise
			fixed[i+1], byLoss[i+1], byAll[i+1] = r[i+1]/room, own*l.heat[i]/room, (1-own)/room
			gain := p.s.heating[i] * rise
			constant += gain * fixed[i+1]
			slope += gain * byLoss[i+1]
			all += gain * byAll[i+1]
		}
	}
	room := 1 - all
	if !(room > leastRoom) {
		return step, false
	}
	last := 1 - l.stage - slope - all*(slope+l.loss)/room
	if !(last > leastRoom) {
		return step, false
	}
	step[0] = (r[0] + constant/room) / last
	sum := (constant + (slope+l.loss)*step[0]) / room
	for i := 1; i < len(step); i++ {
		step[i] = fixed[i] + byLoss[i]*step[0] + byAll[i]*sum
	}
	return step, true
}

// learn takes what a step changed beyond what the temperatures account for, between
// their response before and after it, as the doing of the stage's loss. A step that
// hardly changed that loss teaches nothing.
func (p *problem) learn(l *response, before *sums, step unknowns) {
	if math.Abs(step[0]) <= 1e-7*p.s.loss {
		return
	}
	now, known := &p.s.sums, 0.0
	for i := range l.heat {
		byHeat := 0.0
		if !p.held {
			byHeat = (before.heating[i] + now.heating[i]) / 2 * p.rise[i] * step[i+1]
		}
		known += byHeat
		l.heat[i] = (now.heat[i] - before.heat[i] - byHeat) / step[0]
	}
	l.stage = (now.stage - before.stage - known) / step[0]
	l.loss = (now.loss - before.loss - known) / step[0]
}

// holds proves, where it can, that plain substitution would hold on to the solution at x:
// that each of its parts, moved in proportion, comes back by less. A matrix that is
// nowhere negative then has no eigenvalue as large (Collatz and Wielandt's bound: R. S.
// Varga, Matrix Iterative Analysis, 1962, section 2.1, from memory).
func (p *problem) holds(l *response, x unknowns) bool {
	const most = 0.8 // room for what the response does not know
	if p.held {
		return true
	}
	var heat [3]float64
	sum := 0.0
	for i := range heat {
		byHeat := math.Abs(p.s.heating[i] * p.rise[i] * x[i+1])
		heat[i] = byHeat + math.Abs(l.heat[i]*x[0])
		sum += byHeat
	}
	if sum+math.Abs(l.stage*x[0]) > most*math.Abs(x[0]) {
		return false
	}
	all := sum + math.Abs(l.loss*x[0])
	for i, rise := range p.rise {
		if back := p.s.m.theta[i]*heat[i] + p.s.m.enclosure*all; back > most*rise*math.Abs(x[i+1]) {
			return false
		}
	}
	return true
}
