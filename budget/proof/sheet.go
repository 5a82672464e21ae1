package proof

import (
	"fmt"
	"math"

	"lossbook/budget"
)

// The documents take transition times, a given duty and currents without ripple. The
// designs here reach the same times through gate charge, the duty through the output
// voltage, and no ripple through a large inductor.

const (
	charge  = 1e-9  // C, of either part of a transition
	stiff   = 1e-1  // H, that leaves no ripple
	nothing = 1e-12 // Ω, where a document names no resistance
	swing   = 8.0   // V, of the gate drive
)

var n = budget.N

// sheet is a design with nothing in it but what a document names, at 20 °C, where a
// winding has the resistance stated.
type sheet struct {
	*budget.Design
	t *Trial
}

func newSheet(t *Trial, topology string, vin, vout, load, f float64) sheet {
	return sheet{&budget.Design{Format: budget.Format, Name: "a check", Topology: topology, Rectifier: "diode", Frequency: n(f), Ambient: n(20),
		Input:  budget.Input{Min: n(vin), Nominal: n(vin), Max: n(vin)},
		Output: budget.Output{Voltage: n(vout), Current: n(load)},
		Switch: &budget.MOSFET{VdsRating: n(1000), RdsOn: n(nothing), VThreshold: n(2), VPlateau: n(3), QGS2: n(0), QGD: n(0), QG: n(0)},
		Diode:  &budget.Diode{VRRM: n(1000), VF0: n(0)},
		Drive:  &budget.Drive{Voltage: n(swing), RSource: n(1e-6), RSink: n(1e-6)}, Controller: &budget.Controller{},
		Inductor: &budget.Inductor{Inductance: n(stiff), DCR: n(nothing)}}, t}
}

// timed gives the transitions the times on and off (s), through resistors at the
// gate: threshold and plateau lie 6 and 5 V below the drive, 2 and 3 V above its low.
func (s sheet) timed(on, off float64) sheet {
	s.Switch.QGS2, s.Switch.QGD = n(charge), n(charge)
	s.Drive.RGateOn = n(on/(charge*(1/5.5+1/5.0)) - s.Drive.RSource.V)
	s.Drive.RGateOff = n(off/(charge*(1/2.5+1/3.0)) - s.Drive.RSink.V)
	return s
}

// conducting gives the switch its resistance in Ω, and the same to what rectifies if
// that is synchronous.
func (s sheet) conducting(ohm float64) sheet { s.Switch.RdsOn = n(ohm); return s }

// twin makes the rectifier synchronous, with the switch's own MOSFET.
func (s sheet) twin() sheet {
	s.Rectifier, s.Diode = "synchronous", nil
	rectifier := *s.Switch
	s.SyncSwitch = &rectifier
	return s
}

// solved is what the model finds at full load, but for another load or ambient.
func (s sheet) solved() solution { return s.at(s.Output.Current.V) }

func (s sheet) at(load float64) solution {
	b, m := s.try(load)
	if b.State != budget.Settled {
		s.t.fail("%s at %g A: %s", b.State, load, b.Reason())
	}
	return solution{b, m, s.t}
}

func (s sheet) try(load float64) (*budget.Budget, *budget.Model) {
	b := new(budget.Budget)
	m, err := budget.Prepare(s.Design)
	if err != nil {
		s.t.fail("the design: %w", err)
		b.State = budget.OutOfReach
		return b, m
	}
	m.At(budget.Point{Vin: s.Input.Nominal.V, Iout: load, Ambient: s.Ambient.V}, b)
	return b, m
}

// drawing finds the load at which something that rises with it reaches a value.
func (s sheet) drawing(value float64, of func(solution) float64) solution {
	load := boundary(0, 2*s.Output.Current.V, func(load float64) bool { return of(s.at(load)) < value })
	return s.at(load)
}

// boundary halves down to where a condition that holds at low and not at high ends.
func boundary(low, high float64, holds func(float64) bool) float64 {
	for range 50 {
		if mid := low + (high-low)/2; holds(mid) {
			low = mid
		} else {
			high = mid
		}
	}
	return low
}

// solution is a settled point.
type solution struct {
	*budget.Budget
	model *budget.Model
	t     *Trial
}

// item adds up rows of the ledger, each "part.kind".
func (b solution) item(names ...string) float64 {
	sum, found := 0.0, 0
	for _, name := range names {
		for _, it := range b.Items {
			if it.Part+"."+it.Kind == name {
				sum += it.Power
				found++
			}
		}
	}
	if found != len(names) {
		b.t.fail("of the items %v there are %d", names, found)
	}
	return sum
}

// finding returns what is found of a rule at the point.
func (b solution) finding(rule string) (budget.Finding, bool) {
	for _, f := range b.model.Findings(b.Budget) {
		if f.Rule == rule {
			return f, true
		}
	}
	return budget.Finding{}, false
}

// sized is the sizing of a design, for a wanted ripple.
func (s sheet) sized(ripple float64) budget.Sizing {
	z, wrong := budget.Size(s.Design, ripple)
	if len(wrong) > 0 {
		s.t.fail("the size: %v", wrong)
		return budget.Sizing{Parts: make([]budget.Requirement, 5)}
	}
	return z
}

func need(z budget.Sizing, part string) budget.Requirement {
	for _, r := range z.Parts {
		if r.Part == part {
			return r
		}
	}
	return budget.Requirement{Part: fmt.Sprintf("no %s", part), Peak: math.NaN()}
}
