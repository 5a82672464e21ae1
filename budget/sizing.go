package budget

import (
	"math"
	"slices"

	"lossbook/budget/magnetic"
	"lossbook/budget/stage"
	"lossbook/budget/wave"
)

// Sizing is what can be said of a converter before its parts are chosen: the
// inductance for a wanted ripple, and what each part must stand over the input
// range, from the lossless balances.
type Sizing struct {
	Ripple     float64       // wanted Δi/IL at full load and nominal input
	Inductance float64       // H, for that ripple
	Used       float64       // H, the inductance the currents are worked out with: the entered one, else Inductance
	Parts      []Requirement // inductor, switch, rectifier, input and output capacitor
}

// Requirement is what one part must stand: the worst of each quantity over the
// input range at full load. Blocking is 0 for the inductor, which blocks nothing;
// for a capacitor it is the voltage across it.
type Requirement struct {
	Part                      string
	Blocking, Peak, Mean, RMS float64 // V, A
	DutyMin, DutyMax          float64 // of the switch
}

// DefaultRipple is the ripple ratio that is assumed where none is wanted. Source:
// common practice.
const DefaultRipple = 0.3

var sizingPaths = []string{"topology", "rectifier", "light_load", "frequency", "input.min", "input.nominal", "input.max", "output.voltage", "output.current"}

// Size works out the sizing of a design from its topology, input range, output and
// frequency alone; ripple is the wanted Δi/IL, above 0. The errors name what is
// missing or wrong among these.
func Size(d *Design, ripple float64) (Sizing, []FieldError) {
	var wrong []FieldError
	for _, e := range Validate(d) {
		if slices.Contains(sizingPaths, e.Path) {
			wrong = append(wrong, e)
		}
	}
	if !(ripple > 0) || ripple > Largest {
		wrong = append(wrong, FieldError{Path: "specification.ripple_ratio", Message: "must be above 0"})
	}
	if len(wrong) > 0 {
		return Sizing{}, wrong
	}
	z := newSizer(d)
	if path, reason := z.unreachable(); reason != "" {
		return Sizing{}, []FieldError{{Path: path, Message: "is out of reach: " + reason}}
	}
	return z.size(ripple), nil
}

// sizer holds the lossless stage.
type sizer struct {
	topology                     stage.Topology
	low, nominal, high, vout, io float64
	period                       float64
	forced                       bool
	entered                      float64 // H, 0 when no inductance is entered
}

func newSizer(d *Design) sizer {
	t, _ := stage.ByName(d.Topology)
	z := sizer{topology: t, low: d.Input.Min.V, nominal: d.Input.Nominal.V, high: d.Input.Max.V,
		vout: d.Output.Voltage.V, io: d.Output.Current.V, period: 1 / d.Frequency.V}
	z.forced = d.Rectifier == "synchronous" && d.LightLoad != "diode_emulation"
	if d.Inductor != nil && d.Inductor.Inductance.V > 0 {
		z.entered = d.Inductor.Inductance.V
	}
	return z
}

// unreachable names the end of the input range that the stage can't serve.
func (z sizer) unreachable() (path, reason string) {
	if reason := z.topology.Reach(z.low, z.vout); reason != "" {
		return "input.min", reason
	}
	if reason := z.topology.Reach(z.high, z.vout); reason != "" {
		return "input.max", reason
	}
	return "", ""
}

func (z sizer) size(ripple float64) Sizing {
	mean := z.meanAt(z.nominal)
	s := Sizing{Ripple: ripple, Inductance: z.voltSeconds(z.nominal) / (ripple * mean)}
	if s.Used = z.entered; s.Used == 0 {
		s.Used = s.Inductance
	}
	for _, part := range []string{"inductor", "switch", "rectifier", "input_capacitor", "output_capacitor"} {
		s.Parts = append(s.Parts, Requirement{Part: part, DutyMin: 1})
	}
	const steps = 32 // between the ends: the ripple of a boost stage is largest inside the range
	for i := range steps + 1 {
		z.raise(s.Parts, z.low+(z.high-z.low)*float64(i)/steps, s.Used)
	}
	return s
}

func (z sizer) flux(vin float64) stage.Drive {
	return stage.Drive{On: z.topology.OnVoltage(vin, z.vout), Off: z.topology.OffVoltage(vin, z.vout), Period: z.period}
}

// meanAt returns the mean inductor current in A at full load without losses.
func (z sizer) meanAt(vin float64) float64 {
	return z.topology.MeanCurrent(z.vout*z.io/vin, z.io)
}

// voltSeconds returns the flux-linkage swing V_on·t1 in V·s of continuous conduction.
func (z sizer) voltSeconds(vin float64) float64 {
	f := z.flux(vin)
	return f.On * f.Off / (f.On + f.Off) * f.Period
}

// flow returns the lossless current at full load, and whether it rests.
func (z sizer) flow(vin, inductance float64) (flow stage.Flow, resting bool) {
	law := magnetic.NewLinkage(inductance, 0, 0, nil)
	flow, _ = stage.Continuous(z.flux(vin), stage.Branches{}, law, z.meanAt(vin))
	if resting = flow.Min < 0 && !z.forced; resting {
		flow, _ = stage.Discontinuous(z.flux(vin), stage.Branches{}, law, z.meanAt(vin))
	}
	return flow, resting
}

// raise takes one input voltage into the worst of each part.
func (z sizer) raise(parts []Requirement, vin, inductance float64) {
	flow, resting := z.flow(vin, inductance)
	blocking := z.topology.Blocking(vin, z.vout)
	branch := map[stage.Branch]wave.Share{stage.Inductor: flow.Whole(), stage.Switch: flow.Rise(), stage.Rectifier: flow.Fall()}
	worst := func(r *Requirement, volt, peak, mean, square float64) {
		r.Blocking, r.Peak = math.Max(r.Blocking, volt), math.Max(r.Peak, peak)
		r.Mean, r.RMS = math.Max(r.Mean, mean), math.Max(r.RMS, math.Sqrt(square))
		r.DutyMin, r.DutyMax = math.Min(r.DutyMin, flow.D1), math.Max(r.DutyMax, flow.D1)
	}
	for i, b := range []stage.Branch{stage.Inductor, stage.Switch, stage.Rectifier} {
		volt := blocking
		if b == stage.Inductor {
			volt = 0
		}
		worst(&parts[i], volt, flow.Max, branch[b].Mean(), branch[b].MeanSquare())
	}
	for i, c := range []struct {
		volt float64
		of   stage.Branch
	}{{vin, z.topology.InputSees}, {z.vout, z.topology.OutputSees}} {
		share := branch[c.of]
		lowest := 0.0 // what it filters pauses once a period, but for the continuous inductor's
		if c.of == stage.Inductor && !resting {
			lowest = flow.Min
		}
		worst(&parts[3+i], c.volt, math.Max(flow.Max-share.Mean(), share.Mean()-lowest), 0, share.RippleSquare())
	}
}
