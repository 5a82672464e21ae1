package budget

import (
	"lossbook/budget/device"
	"lossbook/budget/stage"
)

// frame is what a point fixes before any current is known.
type frame struct {
	Point
	flux        stage.Drive
	blocking    float64 // V
	rest        float64 // V, on the switch when no current flows
	io          float64 // A, drawn from the stage's output
	gate        float64 // W, of the gates' charge
	regulator   float64 // W
	supply      float64 // W, of the controller
	fixed       float64 // W
	stored      float64 // J, in the junctions at the blocking voltage
	totalCharge float64 // C, of both junctions there
	ringing     device.Ringing
}

func (m *Model) frameAt(p Point) frame {
	t, d := m.topology, m.design
	f := frame{
		Point:    p,
		flux:     stage.Drive{On: t.OnVoltage(p.Vin, m.vout), Off: t.OffVoltage(p.Vin, m.vout), Period: m.period},
		blocking: t.Blocking(p.Vin, m.vout),
		rest:     t.Rest(p.Vin, m.vout),
	}
	swing := d.Drive.Voltage.V - d.Drive.VoltageOff.V
	f.gate = m.gateCharge * swing * m.frequency
	f.regulator = m.gateCharge * m.frequency * max(m.feed(d.Drive.FedFrom, p.Vin)-swing, 0)
	c := orZero(d.Controller)
	f.supply = c.Current.V * m.controllerFeed(p.Vin)
	f.fixed = c.FixedLoss.V
	f.io = p.Iout + m.fedFromOutput(f)/m.vout
	f.stored = device.TurnOnEnergy(m.switchCharge, m.rectifierCharge, f.blocking, f.blocking)
	f.totalCharge = m.switchCharge.At(f.blocking) + m.rectifierCharge.At(f.blocking)
	f.ringing = device.NewRinging(m.switchCharge, m.rectifierCharge, f.blocking, f.rest, m.linkage.Slope(0))
	return f
}

// feed returns the voltage of the place something is fed from, 0 for a rail of
// its own.
func (m *Model) feed(place string, vin float64) float64 {
	switch place {
	case "input":
		return vin
	case "output":
		return m.vout
	}
	return 0
}

// controllerFeed is the same for the controller, whose place is the input unless
// stated.
func (m *Model) controllerFeed(vin float64) float64 {
	if c := m.design.Controller; c != nil && c.FedFrom == "output" {
		return m.vout
	}
	return vin
}

// fedFromOutput returns the power in W that drive and controller draw from the
// converter's own output.
func (m *Model) fedFromOutput(f frame) (power float64) {
	if m.design.Drive.FedFrom == "output" {
		power += f.gate + f.regulator
	}
	if c := m.design.Controller; c != nil && c.FedFrom == "output" {
		power += f.supply
	}
	return power
}

// fedFromInput returns what they draw from the input directly, in W.
func (m *Model) fedFromInput(f *frame) (power float64) {
	if m.design.Drive.FedFrom == "input" {
		power += f.gate + f.regulator
	}
	if c := m.design.Controller; c == nil || c.FedFrom != "output" {
		power += f.supply
	}
	return power + f.fixed
}
