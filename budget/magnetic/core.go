package magnetic

import "math"

// Core is a core's loss by the improved generalised Steinmetz equation.
type Core struct {
	known         bool
	log           float64 // ln of V·k_i·f^α·(1/unit)^β, so that the loss is this times swing^β; its powers alone may overflow
	alpha, beta   float64
	ct0, ct1, ct2 float64
}

// Steinmetz holds the exponents and the temperature factor ct0 − ct1·T + ct2·T²
// (T in °C), which is 1 where none is known.
type Steinmetz struct{ Alpha, Beta, CT0, CT1, CT2 float64 }

// MaterialCore returns a core of the volume (m³) and area (m²) under a winding of
// turns, of a material with the loss k·f^α·B^β in W/m³, f in Hz, B the amplitude in
// T, at the switching frequency f.
func MaterialCore(volume, area, turns, k float64, s Steinmetz, f float64) Core {
	return newCore(volume*k, f, turns*area, s)
}

// CatalogueCore returns the core of an inductor whose loss power (W) is given for
// a sine of the frequency fRef (Hz) and the peak-to-peak ripple (A): the current
// stands for the flux, Δi = Δλ/inductance, and k = P_ref/(f_ref^α·(ripple/2)^β).
func CatalogueCore(power, fRef, ripple, inductance float64, s Steinmetz, f float64) Core {
	return newCore(power, f/fRef, ripple/2*inductance, s)
}

// newCore takes the loss scale·frequency^α·(amplitude/unit)^β of a sine, the amplitude
// that of the linkage in V·s, and turns it into the loss of a peak-to-peak swing under
// straight segments.
func newCore(scale, frequency, unit float64, s Steinmetz) Core {
	log := math.Log(scale) + s.Alpha*math.Log(frequency) - s.Beta*math.Log(2*unit) + math.Log(SineShare(s.Alpha))
	return Core{scale > 0, log, s.Alpha, s.Beta, s.CT0, s.CT1, s.CT2}
}

// SineShare returns k_i/k times 2^β, the factor that makes the integral of
// |dB/dt|^α over a sine give back Steinmetz's equation:
//
//	k_i = k/((2π)^(α−1)·2^(β−α)·c),   c = ∫|cos θ|^α dθ over a turn = 2·√π·Γ((α + 1)/2)/Γ(α/2 + 1)
//
// Source: K. Venkatachalam et al., Accurate prediction of ferrite core loss with
// nonsinusoidal waveforms using only Steinmetz parameters, IEEE COMPEL 2002.
func SineShare(alpha float64) float64 {
	c := 2 * math.Sqrt(math.Pi) * math.Gamma((alpha+1)/2) / math.Gamma(alpha/2+1)
	return math.Pow(2, alpha) / (math.Pow(2*math.Pi, alpha-1) * c)
}

// Loss returns the power in W of a flux-linkage swing (V·s, peak to peak) that
// rises during the share d1 of the period and falls during d2, at the temperature
// factor given:
//
//	P = V·k_i·ΔB^β·f^α·(d1^(1−α) + d2^(1−α)),   ΔB = Δλ/(N·A)
//
// the two segments of iGSE, a resting flux adding nothing. No swing, no loss.
func (c Core) Loss(swing, d1, d2, factor float64) float64 {
	if swing == 0 || !c.known {
		return 0
	}
	even := c.log + c.beta*math.Log(swing)
	return (math.Exp(even+(1-c.alpha)*math.Log(d1)) + math.Exp(even+(1-c.alpha)*math.Log(d2))) * factor
}

// Factor returns ct0 − ct1·T + ct2·T² at t (°C). Far from where it was fitted it
// can fall below zero, which no core does; the caller must not let that stand.
func (c Core) Factor(t float64) float64 { return c.ct0 - c.ct1*t + c.ct2*t*t }

// Rate returns the relative slope of Factor over t (°C) in 1/K, 0 where the factor is
// 0.
func (c Core) Rate(t float64) float64 {
	f := c.Factor(t)
	if f == 0 {
		return 0
	}
	return (2*c.ct2*t - c.ct1) / f
}

// Known reports whether the core has a loss at all.
func (c Core) Known() bool { return c.known }
