package budget

import (
	"math"

	"lossbook/budget/magnetic"
)

var copper = how("R_20·(1 + 0.00393·(T_L − 20))", byCopper)

func copperResistance(s *situation, st *Step, e *entry) {
	st.by(copper)
	st.given("R_20", "inductor.dcr", s.m.dcr)
	st.note("T_L", s.temperature[inductorHeat], "°C")
}

// windingFactor is a mean over fifty harmonics, which no single line shows.
func windingFactor(s *situation, st *Step, e *entry) {
	const weighed = ", at harmonics 1 to 50 of the inductor current, weighed by the square of each"
	l := s.m.design.Inductor
	switch {
	case len(l.ACCurve) > 0:
		st.found("the entered curve"+weighed+"; "+curveWords, byCurves+", in the logarithms of both", "inductor.ac_curve")
	case l.Winding != nil:
		inputs := []string{"inductor.winding.diameter", "inductor.winding.layers", "inductor.winding.porosity"}
		if l.Winding.Conductor == "foil" {
			inputs[0] = "inductor.winding.thickness"
		}
		st.found("Dowell’s factor of layers at the winding’s temperature"+weighed, "P. L. Dowell, Proc. IEE 113 (1966)", inputs...)
	default:
		st.found("1: nothing is stated about the winding", "")
	}
}

// Core

var catalogueCore = how("ct·k_i·Δi^β·f^α·(d_1^(1 − α) + d_2^(1 − α))", bySteinmetz+"; current for flux")

// coreTerms notes what the core's loss is computed from: of a material and its size,
// or of a catalogue's reference.
func coreTerms(s *situation, it *Item) {
	c := s.m.design.Inductor.Core
	it.note("ct", s.coreFactor, "")
	if c.ReferencePower.Stated {
		it.by(catalogueCore)
		it.note("k_i", s.m.coreCoefficient(), "")
		it.note("Δi", s.flow.Linkage/s.m.design.Inductor.Inductance.V, "A")
	} else {
		it.given("V_e", "inductor.core.volume", c.Volume.V)
		it.note("k_i", s.m.coreCoefficient(), "")
		it.note("ΔB", s.flow.Linkage/(c.Turns.V*c.Area.V), "T")
	}
	it.given("β", "inductor.core.beta", c.Beta.V)
	it.given("f", "frequency", s.m.frequency)
	it.given("α", "inductor.core.alpha", c.Alpha.V)
	it.note("d_1", s.flow.D1, "")
	it.note("d_2", s.flow.D2, "")
}

// coreCoefficient is k_i of the improved generalised Steinmetz equation.
func (m *Model) coreCoefficient() float64 {
	c := m.design.Inductor.Core
	return m.steinmetz() * magnetic.SineShare(c.Alpha.V) * math.Pow(2, -c.Beta.V)
}

// steinmetz is the coefficient of a sine's loss: as stated, or from the reference.
func (m *Model) steinmetz() float64 {
	c := m.design.Inductor.Core
	if c.ReferencePower.Stated {
		return c.ReferencePower.V / (math.Pow(c.ReferenceFrequency.V, c.Alpha.V) * math.Pow(c.ReferenceRipple.V/2, c.Beta.V))
	}
	return c.K.V
}

var (
	coefficientOfMaterial = how("k_S/((2·π)^(α − 1)·2^(β − α)·c_α)", bySteinmetz)
	coefficientOfPart     = how("k_ref/((2·π)^(α − 1)·2^(β − α)·c_α)", bySteinmetz)
	sineShape             = how("2·√π·Γ((α + 1)/2)/Γ(α/2 + 1)", "∫|cos θ|^α dθ over a turn")
	referenceLoss         = how("P_ref/(f_ref^α·(Δi_ref/2)^β)", "Steinmetz’s equation at the reference")
	swingOfFlux           = how("Δλ/(N·A_e)", "flux linkage over turns and area")
	swingOfCurrent        = how("Δλ/L", "the current stands for the flux")
	noCoreTemperature     = how("1", "no temperature factor is stated")
	coreOverTemperature   = how("ct_0 − ct_1·T_L + ct_2·T_L^2", "the maker’s temperature factor")
)

func coreCoefficient(s *situation, st *Step, e *entry) {
	c := s.m.design.Inductor.Core
	if c.ReferencePower.Stated {
		st.by(coefficientOfPart)
		st.note("k_ref", s.m.steinmetz(), "")
	} else {
		st.by(coefficientOfMaterial)
		st.given("k_S", "inductor.core.k", c.K.V)
	}
	st.given("α", "inductor.core.alpha", c.Alpha.V)
	st.given("β", "inductor.core.beta", c.Beta.V)
	st.note("c_α", s.m.sineIntegral(), "")
}

// sineIntegral is ∫|cos θ|^α dθ over a turn.
func (m *Model) sineIntegral() float64 {
	a := m.design.Inductor.Core.Alpha.V
	return math.Pow(2, a) / (math.Pow(2*math.Pi, a-1) * magnetic.SineShare(a))
}

func sineIntegral(s *situation, st *Step, e *entry) {
	st.by(sineShape)
	st.given("α", "inductor.core.alpha", s.m.design.Inductor.Core.Alpha.V)
}

func catalogueCoefficient(s *situation, st *Step, e *entry) {
	c := s.m.design.Inductor.Core
	st.by(referenceLoss)
	st.given("P_ref", "inductor.core.reference_power", c.ReferencePower.V)
	st.given("f_ref", "inductor.core.reference_frequency", c.ReferenceFrequency.V)
	st.given("Δi_ref", "inductor.core.reference_ripple", c.ReferenceRipple.V)
	st.given("α", "inductor.core.alpha", c.Alpha.V)
	st.given("β", "inductor.core.beta", c.Beta.V)
}

func fluxSwing(s *situation, st *Step, e *entry) {
	c := s.m.design.Inductor.Core
	st.by(swingOfFlux)
	st.note("Δλ", s.flow.Linkage, "V·s")
	st.given("N", "inductor.core.turns", c.Turns.V)
	st.given("A_e", "inductor.core.area", c.Area.V)
}

func rippleAsFlux(s *situation, st *Step, e *entry) {
	st.by(swingOfCurrent)
	st.note("Δλ", s.flow.Linkage, "V·s")
	st.given("L", "inductor.inductance", s.m.design.Inductor.Inductance.V)
}

func temperatureFactor(s *situation, st *Step, e *entry) {
	c := s.m.design.Inductor.Core
	if !c.CT0.Stated {
		st.by(noCoreTemperature)
		return
	}
	st.by(coreOverTemperature)
	st.given("ct_0", "inductor.core.ct0", c.CT0.V)
	st.given("ct_1", "inductor.core.ct1", c.CT1.V)
	st.note("T_L", s.temperature[inductorHeat], "°C")
	st.given("ct_2", "inductor.core.ct2", c.CT2.V)
}
