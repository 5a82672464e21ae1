package budget

import (
	"math"

	"lossbook/budget/device"
	"lossbook/budget/magnetic"
	"lossbook/budget/stage"
	"lossbook/budget/wave"
)

// situation is one evaluation of everything: the losses that follow from a guess
// of stage loss and temperatures.
type situation struct {
	m     *Model
	frame frame
	mode  Mode

	guess       float64    // W, the stage loss it is worked out for
	temperature [3]float64 // °C of switch, rectifier, inductor
	is, il      float64    // A, stage input and mean inductor current

	rds, rdsRectifier       float64 // Ω
	forwardVolt, forwardOhm float64
	rdcr                    float64
	coreFactor              float64
	growth                  float64 // of leakage
	rdsOutside              bool
	rdsRectifierOutside     bool

	flow     stage.Flow
	sw, re   wave.Share
	inductor wave.Share
	on, off  device.Edge
	slope    float64 // A/s, of the recovering current
	reverse  device.Reverse
	inputAC  float64 // A², what the input capacitor carries
	outputAC float64

	rate [properties]float64 // 1/K, of the properties that losses follow
	sums
}

// sums of the items.
type sums struct {
	heat    [3]float64 // W in switch, rectifier, inductor
	heating [3]float64 // W/K, by which these follow the part's own temperature, nearly
	stage   float64    // W that the stage's own balance carries
	loss    float64    // W, all items
}

// fault says why an evaluation has no answer.
type fault uint8

const (
	sound fault = iota
	noOnVoltage
	noOffVoltage
	swingTooLarge
	currentReverse
	plateauAtDrive
	tooCold  // a temperature that no model holds for: mostly an iterate gone astray
	overflow // leakage beyond any number: a junction has run away
)

const (
	absoluteZero = -273.15 // °C
	beyondAll    = 1e5     // °C, where every model has long lost its meaning
	mostLoss     = 1e30    // W, above which no iterate is worth following; its square is still a number
)

var stageFaults = [...]fault{sound, noOnVoltage, noOffVoltage, swingTooLarge, currentReverse}

// warm takes temperatures into every property that depends on them.
func (s *situation) warm(temperature [3]float64) fault {
	for _, t := range temperature {
		switch {
		case !(t > absoluteZero):
			return tooCold
		case t > beyondAll:
			return overflow
		}
	}
	m := s.m
	s.temperature = temperature
	s.rds, s.rdsOutside = m.onResistance.At(temperature[switchHeat])
	if m.sync {
		s.rdsRectifier, s.rdsRectifierOutside = m.syncResistance.At(temperature[rectifierHeat])
	} else {
		s.forwardVolt, s.forwardOhm = m.forward.At(temperature[rectifierHeat])
		s.growth = m.leakage.Growth(temperature[rectifierHeat])
		if m.leakage.Current > 0 && math.IsInf(s.growth, 1) {
			return overflow
		}
	}
	if s.rds > Largest || s.rdsRectifier > Largest { // a steep power law near absolute zero
		return overflow
	}
	if s.rdcr = m.dcr * magnetic.CopperFactor(temperature[inductorHeat]); s.rdcr <= 0 {
		return tooCold // the straight line of copper's resistance has met zero
	}
	s.coreFactor = m.core.Factor(temperature[inductorHeat])
	s.rates()
	return sound
}

// carry finds the currents for a stage loss in W.
func (s *situation) carry(stageLoss float64) fault {
	m, f := s.m, &s.frame
	s.guess = stageLoss
	s.is = (m.vout*f.io + stageLoss) / f.Vin
	s.il = m.topology.MeanCurrent(s.is, f.io)
	branches := s.branches()
	var wrong stage.Fault
	if s.mode == DCM {
		s.flow, wrong = stage.Discontinuous(f.flux, branches, m.law, s.il)
	} else {
		s.flow, wrong = stage.Continuous(f.flux, branches, m.law, s.il)
	}
	if wrong != stage.NoFault {
		return stageFaults[wrong]
	}
	s.sw, s.re, s.inductor = s.flow.Rise(), s.flow.Fall(), s.flow.Whole()
	if s.mode == CCM {
		s.inductor.D = 1
	}
	s.inputAC = s.of(m.topology.InputSees).RippleSquare()
	s.outputAC = s.of(m.topology.OutputSees).RippleSquare()
	return s.commutate()
}

// branches returns what lies in the two current paths at the temperatures of the moment.
func (s *situation) branches() stage.Branches {
	return stage.Branches{
		On:        s.rds + s.rdcr + s.m.seriesOn,
		Off:       s.rdcr + s.m.seriesOff + s.rdsRectifier + s.forwardOhm,
		Threshold: s.forwardVolt,
	}
}

func (s *situation) of(b stage.Branch) wave.Share {
	switch b {
	case stage.Switch:
		return s.sw
	case stage.Rectifier:
		return s.re
	}
	return s.inductor
}

// commutate finds the transitions and the recovery at the currents found.
func (s *situation) commutate() fault {
	m := s.m
	var possible bool
	if s.on, possible = m.gate.TurnOn(max(s.flow.Min, 0)); !possible {
		return plateauAtDrive
	}
	if s.off, possible = m.gate.TurnOff(max(s.flow.Max, 0)); !possible {
		return plateauAtDrive
	}
	s.slope, s.reverse = 0, device.Reverse{}
	if s.mode == CCM && s.flow.Min > 0 && m.recovery.Charge > 0 {
		s.slope = m.gate.Slope(s.flow.Min)
		s.reverse = m.recovery.At(s.flow.Min, s.slope)
	}
	return sound
}

// account adds up the items at the state found.
func (s *situation) account() fault {
	s.sums = sums{}
	if !s.m.sync {
		s.rate[ofRectifier] = s.dropRate()
	}
	for i := range s.m.entries {
		e := &s.m.entries[i]
		p := e.power(s, nil)
		s.loss += p
		if e.heats != noHeat {
			s.heat[e.heats] += p
			s.heating[e.heats] += p * s.rate[e.follows]
		}
		if e.stage {
			s.stage += p
		}
	}
	if math.Abs(s.loss) > mostLoss {
		return overflow
	}
	if math.IsNaN(s.loss) {
		panic("budget: a loss is not a number") // a defect of this package, never "no solution"
	}
	return sound
}

// evaluate does all of it for a guess.
func (s *situation) evaluate(stageLoss float64, temperature [3]float64) fault {
	if wrong := s.warm(temperature); wrong != sound {
		return wrong
	}
	if wrong := s.carry(stageLoss); wrong != sound {
		return wrong
	}
	return s.account()
}
