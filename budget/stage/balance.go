package stage

import (
	"math"

	"lossbook/budget/wave"
)

// Branches holds the resistances in the two current paths and the rectifier's
// threshold, at the temperatures of the moment.
type Branches struct {
	On        float64 // Ω, in series with the inductor while the switch conducts
	Off       float64 // Ω, in series while the rectifier conducts
	Threshold float64 // V, of a diode; 0 of a synchronous rectifier
}

// Drive is what the flux balance starts from: the inductor's voltages without
// drops, in V, and the period in s.
type Drive struct{ On, Off, Period float64 }

// Linkage is the inductor's flux linkage over current.
type Linkage interface {
	At(i float64) float64                                      // λ(i) in V·s
	Slope(i float64) float64                                   // dλ/di in H
	Swing(mean, linkage float64) (half float64, possible bool) // Δi/2 in A about the mean, for a swing of λ
}

// Fault says why a balance has no solution.
type Fault uint8

// The faults of a balance.
const (
	NoFault        Fault = iota
	NoOnVoltage          // the drops leave nothing to raise the current
	NoOffVoltage         // nothing is left to lower it
	SwingTooLarge        // the flux swing is beyond the saturation model
	CurrentReverse       // the mean current is negative
)

// Flow is a solved balance: the inductor current, its flux-linkage swing in
// V·s, and the on-time in s.
type Flow struct {
	wave.Triangle
	Linkage float64
	OnTime  float64
}

// Continuous returns the flow of continuous conduction at the mean inductor
// current il (A), drops taken at that mean:
//
//	V_on = V_on0 − il·R_on      V_off = V_off0 + V_d + il·R_off
//	t1 = T·V_off/(V_on + V_off)      Δλ = V_on·t1      I = il ± Δi/2
//
// Source: Erickson & Maksimović, Fundamentals of Power Electronics, chapters 2
// and 3 (volt-second balance with conduction drops).
func Continuous(d Drive, b Branches, l Linkage, il float64) (Flow, Fault) {
	on, off := d.On-il*b.On, d.Off+b.Threshold+il*b.Off
	if !(on > 0) {
		return Flow{}, NoOnVoltage
	}
	if !(off > 0) {
		return Flow{}, NoOffVoltage
	}
	d1, d2 := off/(on+off), on/(on+off)
	linkage := on * d1 * d.Period
	half, possible := l.Swing(il, linkage)
	if !possible {
		return Flow{}, SwingTooLarge
	}
	return Flow{wave.Triangle{Min: il - half, Max: il + half, D1: d1, D2: d2}, linkage, d1 * d.Period}, NoFault
}

// Discontinuous returns the flow of discontinuous conduction whose mean is il
// (A, ≥ 0): the current starts from 0, and the peak Ip solves
//
//	Ip/2·(t1 + t2)/T = il
//	t1 = λ(Ip)/(V_on0 − Ip/2·R_on)      t2 = λ(Ip)/(V_off0 + V_d + Ip/2·R_off)
//
// with drops taken at the mean current of each interval. The left side rises
// with Ip, so the solution is the only one. D1 + D2 above 1 means that the
// stage can't be discontinuous at this current; the caller decides. Source:
// Erickson & Maksimović, Fundamentals of Power Electronics, chapter 5.
func Discontinuous(d Drive, b Branches, l Linkage, il float64) (Flow, Fault) {
	switch off := d.Off + b.Threshold; {
	case !(d.On > 0):
		return Flow{}, NoOnVoltage
	case !(off > 0):
		return Flow{}, NoOffVoltage
	case il < 0:
		return Flow{}, CurrentReverse
	case il == 0:
		return Flow{}, NoFault
	}
	peak := peakCurrent(d, b, l, il)
	linkage := l.At(peak)
	t1, t2 := intervals(d, b, linkage, peak)
	if !(t1 >= 0) {
		return Flow{}, NoOnVoltage
	}
	if !(t2 >= 0) { // a resistance below zero, that of an iterate gone astray
		return Flow{}, NoOffVoltage
	}
	d1, d2 := t1/d.Period, t2/d.Period
	return Flow{wave.Triangle{Max: peak, D1: d1, D2: d2}, linkage, t1}, NoFault
}

// intervals returns t1 and t2 in s for a peak current in A and its linkage.
func intervals(d Drive, b Branches, linkage, peak float64) (t1, t2 float64) {
	return linkage / (d.On - peak/2*b.On), linkage / (d.Off + b.Threshold + peak/2*b.Off)
}

// peakCurrent finds the peak by Newton's method in the logarithm of the mean,
// where the equation is nearly straight (mean ∝ peak² without saturation or
// resistance), kept inside a bracket that shrinks with every step.
func peakCurrent(d Drive, b Branches, l Linkage, il float64) float64 {
	low, high := 0.0, math.Inf(1)
	if b.On > 0 {
		high = 2 * d.On / b.On
	}
	peak := math.Sqrt(2 * il * d.Period / (l.Slope(0) * (1/d.On + 1/(d.Off+b.Threshold))))
	if !(peak < high) {
		peak = high / 2
	}
	for range 100 {
		mean, slope := meanOfPeak(d, b, l, peak)
		if mean > il {
			high = peak
		} else {
			low = peak
		}
		next := peak * math.Exp(math.Log(il/mean)*mean/(slope*peak))
		if next == peak { // nothing is left, though peak has just become an end of the bracket
			return peak
		}
		if !(next > low && next < high) {
			next = between(low, high)
		}
		if math.Abs(next-peak) <= 1e-9*next { // quadratic: what is left is of the order of 1e-18
			return next
		}
		peak = next
	}
	return peak
}

func between(low, high float64) float64 {
	if math.IsInf(high, 1) {
		return 2 * low
	}
	return low + (high-low)/2
}

// meanOfPeak returns the mean current of a peak and its derivative by the peak.
func meanOfPeak(d Drive, b Branches, l Linkage, peak float64) (mean, slope float64) {
	linkage := l.At(peak)
	on, off := d.On-peak/2*b.On, d.Off+b.Threshold+peak/2*b.Off
	t, dt := linkage/on+linkage/off, l.Slope(peak)*(1/on+1/off)
	dt += linkage * (b.On/2/(on*on) - b.Off/2/(off*off))
	return peak / 2 * t / d.Period, (t + peak*dt) / 2 / d.Period
}

// CannotRest proves that no discontinuous flow ends within the period when the mean
// current is at least il (A), the resistances and threshold are at most those of
// worst, and the on-path has any resistance at all: without solving for one. Such a
// flow would peak above 2·il, and below the current P whose linkage takes the whole
// period to build up, so that
//
//	t1 + t2 ≥ λ(2·il)·[1/V_on0 + 1/(V_off0 + V_d + P/2·R_off)]
//
// False proves nothing.
func CannotRest(d Drive, worst Branches, l Linkage, il float64) bool {
	most, possible := l.Swing(0, 2*d.On*d.Period)
	if !possible || !(d.On > 0) || il <= 0 {
		return false
	}
	off := d.Off + worst.Threshold + most/2*worst.Off
	return off > 0 && l.At(2*il)*(1/d.On+1/off) >= d.Period
}
