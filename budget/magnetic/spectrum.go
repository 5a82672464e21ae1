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
	fixed     [Harmonics]float64 // of a curve, or of no winding: the same at any temperature
	beyond    [Harmonics]bool
	pieces    [pieceCount]atomic.Pointer[piece]
}

const (
	tableStart = -80.0 // °C
	pieceWidth = 16.0  // K
	pieceCount = 30    // up to 400 °C
	order      = 8     // coefficients of a piece
)

// piece holds, for each harmonic, a polynomial of s = −1…1 across the piece.
type piece [Harmonics][order]float64

// NewSpectrum returns the factors of a winding at the multiples of the frequency
// (Hz, > 0).
func NewSpectrum(w Winding, frequency float64) *Spectrum {
	s := &Spectrum{winding: w, frequency: frequency}
	for n := range s.fixed {
		s.fixed[n] = 1
		if w.curve != nil {
			s.fixed[n], s.beyond[n] = w.Factor(float64(n+1)*frequency, 0)
		}
	}
	return s
}

// Weigh returns Σ square[n]·F((n + 1)·f) in the unit of square, at t (°C), and the
// part of it that lies beyond the rows of a curve.
func (s *Spectrum) Weigh(square *[Harmonics]float64, t float64) (sum, beyond float64) {
	if s.winding.height > 0 && s.winding.curve == nil {
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
	at := (t - tableStart) / pieceWidth
	if !(at >= 0 && at < pieceCount) {
		for n, w := range square {
			factor, _ := s.winding.Factor(float64(n+1)*s.frequency, t)
			sum += w * factor
		}
		return sum
	}
	i := int(at)
	p := s.piece(i)
	x := 2*(at-float64(i)) - 1
	for n, w := range square {
		c := &p[n]
		sum += w * (c[0] + x*(c[1]+x*(c[2]+x*(c[3]+x*(c[4]+x*(c[5]+x*(c[6]+x*c[7])))))))
	}
	return sum
}

// piece returns a piece of the table, working it out if it is the first to ask. Two
// who ask at once work out the same numbers.
func (s *Spectrum) piece(i int) *piece {
	if p := s.pieces[i].Load(); p != nil {
		return p
	}
	p := new(piece)
	for n := range p {
		var values [order]float64
		for k, x := range nodes {
			t := tableStart + pieceWidth*(float64(i)+(x+1)/2)
			values[k], _ = s.winding.Factor(float64(n+1)*s.frequency, t)
		}
		for j := range p[n] {
			for k, v := range values {
				p[n][j] += powers[k][j] * v
			}
		}
	}
	s.pieces[i].Store(p)
	return p
}

// nodes are the Chebyshev points of a piece; powers[k] is Lagrange's polynomial that
// is 1 at node k and 0 at the others, as coefficients of 1, x, x², ….
var nodes, powers = lagrange()

func lagrange() (x [order]float64, basis [order][order]float64) {
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
func timesRoot(p [order]float64, root, scale float64) (q [order]float64) {
	for i, c := range p {
		q[i] -= root * c * scale
		if i+1 < order {
			q[i+1] += c * scale
		}
	}
	return q
}
