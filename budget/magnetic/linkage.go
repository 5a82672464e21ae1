package magnetic

import "math"

// Linkage is the flux linkage λ(i) of an inductor: constant inductance, the
// saturation law through one stated drop, or a curve L(i) of the data sheet.
type Linkage struct {
	inductance float64
	rate       float64 // √c/i_sat in 1/A; 0: no saturation
	curve      Area
}

// NewLinkage returns the linkage of the inductance l (H, > 0 at no current) that
// has dropped by the share drop (0 ≤ drop < 1) at iSat (A):
//
//	L(i) = L/(1 + c·(i/i_sat)²), c = drop/(1 − drop)      λ(i) = L·i_sat/√c·atan(√c·i/i_sat)
//
// A curve of H over A, if not nil, goes before it: L(|i|), λ its integral.
// Source: common practice (a smooth even law through the stated drop).
func NewLinkage(l, iSat, drop float64, curve Area) Linkage {
	k := Linkage{inductance: l, curve: curve}
	if drop > 0 {
		k.rate = math.Sqrt(drop/(1-drop)) / iSat
	}
	return k
}

// At returns λ(i) in V·s, an odd function of the current i in A.
func (k Linkage) At(i float64) float64 {
	switch {
	case k.curve != nil:
		return math.Copysign(k.curve.Integral(math.Abs(i)), i)
	case k.rate > 0:
		return k.inductance / k.rate * math.Atan(k.rate*i)
	}
	return k.inductance * i
}

// Slope returns L(i) = dλ/di in H.
func (k Linkage) Slope(i float64) float64 {
	switch {
	case k.curve != nil:
		l, _ := k.curve.At(math.Abs(i))
		return l
	case k.rate > 0:
		return k.inductance / (1 + k.rate*i*k.rate*i)
	}
	return k.inductance
}

// Outside reports whether the largest current magnitude (A) lies beyond the rows
// of the curve.
func (k Linkage) Outside(i float64) bool {
	if k.curve == nil {
		return false
	}
	_, outside := k.curve.At(math.Abs(i))
	return outside
}

// Swing returns half the current swing, in A, about the mean current (A) for a
// swing of the linkage (V·s, ≥ 0): λ(mean + half) − λ(mean − half) = linkage. With
// the saturation law it has the closed form
//
//	y = linkage·rate/L, A = rate·mean:  half = sin y·(1 + A²)/(cos y + √(1 + A²·sin² y))/rate
//
// which ends at y = π, where the law can hold no more flux: then possible is
// false.
func (k Linkage) Swing(mean, linkage float64) (half float64, possible bool) {
	switch {
	case k.curve != nil:
		return k.swingOnCurve(mean, linkage), true
	case k.rate > 0:
		return k.swingOnLaw(mean, linkage)
	}
	return linkage / k.inductance / 2, true
}

func (k Linkage) swingOnLaw(mean, linkage float64) (float64, bool) {
	y := linkage * k.rate / k.inductance
	if !(y < math.Pi) {
		return 0, false
	}
	a2 := k.rate * mean * k.rate * mean
	sin, cos := math.Sincos(y)
	root := math.Sqrt(1 + a2*sin*sin)
	if cos < 0 { // the sum of cos and root cancels: use its conjugate, sin²·(1 + A²)/(root − cos)
		return (root - cos) / sin / k.rate, true
	}
	return sin * (1 + a2) / (cos + root) / k.rate, true
}

// swingOnCurve solves by Newton's method within a bracket; the inductance is
// positive everywhere, so the difference of linkages rises with the swing.
func (k Linkage) swingOnCurve(mean, linkage float64) float64 {
	low, high := 0.0, math.Inf(1)
	half := linkage / k.Slope(mean) / 2
	for range 200 {
		excess := k.At(mean+half) - k.At(mean-half) - linkage
		if excess > 0 {
			high = half
		} else {
			low = half
		}
		next := half - excess/(k.Slope(mean+half)+k.Slope(mean-half))
		if !(next >= low && next <= high) {
			next = low + (math.Min(high, 2*half+low)-low)/2
		}
		if math.Abs(next-half) <= 1e-14*next {
			return next
		}
		half = next
	}
	return half
}
