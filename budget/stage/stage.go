// Package stage says which currents flow in a power stage: the voltages on its
// inductor, what its parts block, and the balances of charge, power and flux.
package stage

// Topology is one row of the table from which names, form, validation and API
// description are read. All voltages are magnitudes in V, currents in A.
type Topology struct {
	Name      string // as the design file writes it
	Title     string // as a person reads it
	Inverting bool   // the output is negative; its voltage is a magnitude all the same

	OnVoltage   func(vin, vout float64) float64 // on the inductor, switch conducting, without drops
	OffVoltage  func(vin, vout float64) float64 // on the inductor, rectifier conducting, without drops
	Blocking    func(vin, vout float64) float64 // on the part that is off
	Rest        func(vin, vout float64) float64 // on the switch when no inductor current flows
	MeanCurrent func(is, io float64) float64    // of the inductor, from stage input and output current
	InputSees   Branch                          // whose current the input capacitor filters
	OutputSees  Branch                          // whose current the output capacitor filters
	Reach       func(vin, vout float64) string  // why the ratio can't be had, "" when it can
}

// Branch is a place in the stage where current flows.
type Branch uint8

// The branches.
const (
	Inductor Branch = iota
	Switch
	Rectifier
)

// Topologies returns the table, in the order a form offers it.
func Topologies() []Topology { return topologies }

var topologies = []Topology{boost, buck, buckBoost}

// ByName returns the topology that the design file names.
func ByName(name string) (Topology, bool) {
	for _, t := range topologies {
		if t.Name == name {
			return t, true
		}
	}
	return Topology{}, false
}
