package magnetic

import (
	"math"
	"sync/atomic"
)

// Spectrum is a winding's factor at the harmonics of one frequency, over
// temperature. Layers are costly to evaluate fifty times at every temperature tried,
// and smooth: between the ends of the table the factors are polynomials over short
// pieces of temperature, worked out when first asked for, which agree with Factor to
// 1e-12. It is safe for concurrent use, and what it returns does not depend on who
// asked before.
type Spectrum struct {
	winding   Winding
	frequency float64
	layered   bool               // the factors follow the temperature
	fixed     [Harmonics]float64 // of a curve, or of no winding: the same at any temperature
	beyond    [Harmonics]bool
	ends      bool // some of them are
	pieces    [pieceCount]atomic.Pointer[piece]
}

const (
	tableStart = -80.0 // °C
	pieceWidth = 16.0  // K
	pieceCount = 30    // up to 400 °C
	order      = 8     // coefficients of a piece along each of its sides
)

// polynomial is one of s = −1…1 across a piece, the constant first.
type polynomial [order]float64

func (c *polynomial) at(x float64) float64 {
	return c[0] + x*(c[1]+x*(c[2]+x*(c[3]+x*(c[4]+x*(c[5]+x*(c[6]+x*c[7]))))))
}

// piece holds the factors over a few kelvin: at its nodes, and as a polynomial of each
// harmonic; and the sums of Cosines, a patch for each short stretch of the period.
type piece struct {
	nodes   [order][Harmonics]float64
	factor  [Harmonics]polynomial
	patches [patchCount]atomic.Pointer[patch]
}

// NewSpectrum returns the factors of a winding at the multiples of the frequency
// (Hz, > 0).
func NewSpectrum(w Winding, frequency float64) *Spectrum {
	s := &Spectrum{winding: w, frequency: frequency, layered: w.height > 0 && w.curve == nil}
	for n := range s.fixed {
		s.fixed[n] = 1
		if w.curve != nil {
			s.fixed[n], s.beyond[n] = w.Factor(float64(n+1)*frequency, 0)
			s.ends = s.ends || s.beyond[n]
		}
	}
	return s
}

// Ends reports whether any harmonic lies beyond the rows of a curve.
func (s *Spectrum) Ends() bool { return s.ends }

// Weigh returns Σ square[n]·F((n + 1)·f) in the unit of square, at t (°C), and the
// part of it that lies beyond the rows of a curve.
func (s *Spectrum) Weigh(square *[Harmonics]float64, t float64) (sum, beyond float64) {
	if s.layered {
		return s.weighLayers(square, t), 0
	}
	for n, w := range square {
		part := w * s.fixed[n]
		sum += part
		if s.beyond[n] {
			beyond += part
		}
	}
	return sum, beyond
}

func (s *Spectrum) weighLayers(square *[Harmonics]float64, t float64) (sum float64) {
	p, x := s.place(t)
	if p == nil {
		for n, w := range square {
			factor, _ := s.winding.Factor(float64(n+1)*s.frequency, t)
			sum += w * factor
		}
		return sum
	}
	for n, w := range square {
		sum += w * p.factor[n].at(x)
	}
	return sum
}

// place returns the piece that holds t (°C) and where in it, −1…1; nil beyond the
// table. Factors that don't follow the temperature have one piece for all.
func (s *Spectrum) place(t float64) (*piece, float64) {
	at := 0.5
	if s.layered {
		at = (t - tableStart) / pieceWidth
	}
	if !(at >= 0 && at < pieceCount) {
		return nil, 0
	}
	i := int(at)
	p := s.pieces[i].Load()
	if p == nil {
		p = s.newPiece(i)
	}
	return p, 2*(at-float64(i)) - 1
}

// newPiece works out a piece for the first to ask. Two who ask at once work out the
// same numbers, and whichever is kept serves both.
func (s *Spectrum) newPiece(i int) *piece {
	p := new(piece)
	for n := range Harmonics {
		var values polynomial
		for k, x := range nodes {
			values[k] = s.fixed[n]
			if s.layered {
				values[k], _ = s.winding.Factor(float64(n+1)*s.frequency, tableStart+pieceWidth*(float64(i)+(x+1)/2))
			}
			p.nodes[k][n] = values[k]
		}
		p.factor[n] = through(&values)
	}
	s.pieces[i].CompareAndSwap(nil, p)
	return s.pieces[i].Load()
}

// through returns the polynomial with these values at the nodes. Only what they differ
// by is spread over the powers, since that loses two digits.
func through(values *polynomial) (c polynomial) {
	level := values[0]
	for k, v := range values {
		for j := range c {
			c[j] += powers[k][j] * (v - level)
		}
	}
	c[0] += level
	return c
}

// nodes are the Chebyshev points of a piece; powers[k] is Lagrange's polynomial that
// is 1 at node k and 0 at the others.
var nodes, powers = lagrange()

func lagrange() (x [order]float64, basis [order]polynomial) {
	for k := range x {
		x[k] = math.Cos(math.Pi * (2*float64(k) + 1) / (2 * order))
	}
	for k := range x {
		basis[k][0] = 1
		for j := range x {
			if j == k {
				continue
			}
			basis[k] = timesRoot(basis[k], x[j], 1/(x[k]-x[j]))
		}
	}
	return x, basis
}

// timesRoot multiplies a polynomial by (x − root)·scale.
func timesRoot(p polynomial, root, scale float64) (q polynomial) {
	for i, c := range p {
		q[i] -= root * c * scale
		if i+1 < order {
			q[i+1] += c * scale
		}
	}
	return q
}
