package wave

import "math"

// Corner is where a periodic line bends: its value at the share At (0…1) of the
// period.
type Corner struct{ At, Value float64 }

// Line is one period of a quantity that runs straight from corner to corner. At
// rises from 0 to 1; two corners at one share are a jump, in the order in which
// they are passed. Values are in the unit of what it describes.
type Line []Corner

// piece is a straight stretch that takes the share D of the period.
type piece struct{ D, From, To float64 }

// through joins pieces into a line. One that takes no time leaves no corner, and
// the last corner stands at 1, whatever the shares have gathered in rounding.
func through(pieces ...piece) Line {
	l, at := make(Line, 0, 2*len(pieces)), 0.0
	for _, p := range pieces {
		if !(p.D > 0) {
			continue
		}
		if n := len(l); n == 0 || l[n-1].Value != p.From {
			l = append(l, Corner{at, p.From})
		}
		at += p.D
		l = append(l, Corner{at, p.To})
	}
	if len(l) > 0 {
		l[len(l)-1].At = 1
	}
	return l
}

// rest is the share of the period during which nothing rises or falls.
func (w Triangle) rest() float64 { return math.Max(0, 1-w.D1-w.D2) }

// Course returns the triangle itself: up during D1, down during D2, at Min for the
// rest.
func (w Triangle) Course() Line {
	return through(piece{w.D1, w.Min, w.Max}, piece{w.D2, w.Max, w.Min}, piece{w.rest(), w.Min, w.Min})
}

// Rising returns the triangle during D1 and 0 otherwise: the current of a switch.
func (w Triangle) Rising() Line {
	return through(piece{w.D1, w.Min, w.Max}, piece{w.D2, 0, 0}, piece{w.rest(), 0, 0})
}

// Falling returns the triangle during D2 and 0 otherwise: the current of a
// rectifier.
func (w Triangle) Falling() Line {
	return through(piece{w.D1, 0, 0}, piece{w.D2, w.Max, w.Min}, piece{w.rest(), 0, 0})
}

// Levels returns a quantity, in V, that holds one value during each interval: up
// during D1, down during D2, still for the rest.
func (w Triangle) Levels(up, down, still float64) Line {
	return through(piece{w.D1, up, up}, piece{w.D2, down, down}, piece{w.rest(), still, still})
}

// Less returns sign·(l − level) in A: what is left of a current when its mean goes
// another way, as a capacitor sees it. Sign is 1 or −1.
func (l Line) Less(level, sign float64) Line {
	out := make(Line, len(l))
	for i, c := range l {
		out[i] = Corner{c.At, sign*(c.Value-level) + 0} // and never −0
	}
	return out
}

// Mean returns Σ ΔAt·(a + b)/2 over the pieces from a to b, in A or V as they are.
func (l Line) Mean() (sum float64) {
	for i := 1; i < len(l); i++ {
		sum += (l[i].At - l[i-1].At) * (l[i-1].Value + l[i].Value) / 2
	}
	return sum
}

// MeanSquare returns Σ ΔAt·(a² + a·b + b²)/3 in A² or V², the rms value squared. Source: Erickson
// & Maksimović, Fundamentals of Power Electronics, appendix on rms values of commonly
// observed waveforms.
func (l Line) MeanSquare() (sum float64) {
	for i := 1; i < len(l); i++ {
		a, b := l[i-1].Value, l[i].Value
		sum += (l[i].At - l[i-1].At) * (a*a + a*b + b*b) / 3
	}
	return sum
}

// Peak returns the value farthest from 0, in A or V with its sign. Where a valley is as far as
// the highest value, to 1e-9, that one is the peak. A line without corners has 0.
func (l Line) Peak() float64 {
	high, low := 0.0, 0.0
	for _, c := range l {
		high, low = math.Max(high, c.Value), math.Min(low, c.Value)
	}
	if -low > high*(1+1e-9) {
		return low
	}
	return high
}
