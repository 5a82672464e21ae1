// Package wave describes a periodic current that runs straight from its lowest
// value to its highest and back, and may then rest: mean, rms and harmonics in
// closed form.
package wave

import "math"

// Triangle is a current that rises from Min to Max during the share D1 of the
// period, falls back during D2, and rests at Min for what is left. Currents are
// in A; D1 ≥ 0, D2 ≥ 0, D1 + D2 ≤ 1.
type Triangle struct{ Min, Max, D1, D2 float64 }

// Swing returns Max − Min in A.
func (w Triangle) Swing() float64 { return w.Max - w.Min }

// Share is the part of a triangle that flows during the share D of the period
// while the current runs straight between Min and Max, and is 0 otherwise: the
// current of a switch (D1) or of a rectifier (D2).
type Share struct{ Min, Max, D float64 }

// Mean returns D·(Min + Max)/2 in A.
func (s Share) Mean() float64 { return s.D * (s.Min + s.Max) / 2 }

// MeanSquare returns D·(Min² + Min·Max + Max²)/3 in A², the rms value squared.
// Source: Erickson & Maksimović, Fundamentals of Power Electronics, appendix on
// rms values of commonly observed waveforms.
func (s Share) MeanSquare() float64 {
	return s.D * (s.Min*s.Min + s.Min*s.Max + s.Max*s.Max) / 3
}

// RippleSquare returns the mean square less the square of the mean, in A²: what
// a capacitor carries that filters this current. With m = (Min + Max)/2 and
// Δ = Max − Min it is D·(1 − D)·m² + D·Δ²/12, which loses no digits when the
// ripple is small beside the mean. D beyond 1, an iterate on its way, gives 0
// rather than less than nothing.
func (s Share) RippleSquare() float64 {
	mid, swing := (s.Min+s.Max)/2, s.Max-s.Min
	return max(0, s.D*(1-s.D)*mid*mid+s.D*swing*swing/12)
}

// Rise returns the current during D1, that of the switch.
func (w Triangle) Rise() Share { return Share{w.Min, w.Max, w.D1} }

// Fall returns the current during D2, that of the rectifier.
func (w Triangle) Fall() Share { return Share{w.Min, w.Max, w.D2} }

// Whole returns the current during both, that of the inductor, of a triangle
// that rests at 0 or not at all.
func (w Triangle) Whole() Share { return Share{w.Min, w.Max, w.D1 + w.D2} }

// Harmonics fills square with the mean square of harmonics 1, 2, …, len(square)
// in A²: the rms value of each, squared. The triangle's second derivative is
// three impulses, so the n-th coefficient is
//
//	I_n² = 2·[Δ/(4π²n²)]²·|(e^(jnθ1) − 1)/D1 + (e^(−jnθ2) − 1)/D2|²,  θ = 2π·D
//
// written with half angles, which loses no digits at small D. The angles are
// turned by rotation rather than computed anew. A triangle without swing, or
// without a rise or a fall, has none.
func (w Triangle) Harmonics(square []float64) {
	swing := w.Swing()
	if swing == 0 || w.D1 <= 0 || w.D2 <= 0 {
		clear(square)
		return
	}
	sin1, cos1 := math.Sincos(math.Pi * w.D1)
	sin2, cos2 := math.Sincos(math.Pi * w.D2)
	s1, c1, s2, c2 := sin1, cos1, sin2, cos2
	slope1, slope2 := 1/w.D1, 1/w.D2
	scale := swing / (2 * math.Pi * math.Pi)
	for n := range square {
		real := slope1*s1*s1 + slope2*s2*s2
		imag := slope1*s1*c1 - slope2*s2*c2
		k := float64(n+1) * float64(n+1)
		amplitude := scale / k
		square[n] = 2 * amplitude * amplitude * (real*real + imag*imag)
		s1, c1 = s1*cos1+c1*sin1, c1*cos1-s1*sin1
		s2, c2 = s2*cos2+c2*sin2, c2*cos2-s2*sin2
	}
}

// Weighed returns the sum of the mean squares of the harmonics in A², each times a
// weight w_n, of a triangle that does not rest (D1 + D2 = 1), from a sum over the weights
// alone:
//
//	Σ I_n²·w_n = Δ²/(4π⁴·D1²·D2²)·C      C = Σ w_n/n⁴·(1 − cos 2πn·D1)
//
// which is the square in Harmonics multiplied out.
func (w Triangle) Weighed(sum float64) float64 {
	swing := w.Swing() / (2 * math.Pi * math.Pi * w.D1 * w.D2)
	return swing * swing * sum
}
