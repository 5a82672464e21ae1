package magnetic

import "math"

// A triangle's harmonics are differences of cosines, so that the sum over them all of
// loss × factor is a function of two numbers, a share of the period and the
// temperature, and can be kept as a table like the factors themselves.

const patchCount = 256 // over the shares 0…½; the fiftieth harmonic turns by 0.6 rad across one

// patch holds, for each power of s = −1…1 along the share, a polynomial along the
// temperature.
type patch [order]polynomial

// Cosines returns
//
//	C(d) = Σ F(n·f)/n⁴·(1 − cos 2π·n·d)      n = 1 … 50
//
// of the share d of the period (0…1) at t (°C): the sum from which
// the loss of a triangular current follows (wave.Triangle.Weighed), since
// the n-th coefficient of a corner is 1/n². It is told to 2e-13 of its largest value over
// d; near whole periods, where it vanishes, that is few digits of itself. possible is
// false beyond the table's temperatures; the harmonics have then to be weighed one by
// one (Weigh).
func (s *Spectrum) Cosines(d, t float64) (sum float64, possible bool) {
	p, x := s.place(t)
	if p == nil || !(d >= 0 && d <= 1) {
		return 0, false
	}
	if d > 0.5 { // it is even about half a period
		d = 1 - d
	}
	at := d * (2 * patchCount)
	i := min(int(at), patchCount-1)
	q := p.patches[i].Load()
	if q == nil {
		q = p.newPatch(i)
	}
	var along polynomial
	for j := range q {
		along[j] = q[j].at(x)
	}
	return along.at(2*(at-float64(i)) - 1), true
}

// newPatch works out a patch for the first to ask, as newPiece does a piece.
func (p *piece) newPatch(i int) *patch {
	var values [order]polynomial // by node of the temperature, along the share
	for j, y := range nodes {
		weights := cosineWeights((float64(i) + (y+1)/2) / (2 * patchCount))
		for k := range values {
			values[k][j] = dot(&weights, &p.nodes[k])
		}
	}
	q := new(patch)
	for k := range values {
		values[k] = through(&values[k])
	}
	for j := range q {
		var along polynomial
		for k := range along {
			along[k] = values[k][j]
		}
		q[j] = through(&along)
	}
	p.patches[i].CompareAndSwap(nil, q)
	return p.patches[i].Load()
}

// dot returns Σ a·b, even and odd harmonics side by side: a processor has then not to
// wait for each sum before it begins the next.
func dot(a, b *[Harmonics]float64) float64 {
	odd, even := 0.0, 0.0
	for n := 0; n+1 < Harmonics; n += 2 {
		odd += a[n] * b[n]
		even += a[n+1] * b[n+1]
	}
	return odd + even
}

// cosineWeights returns (1 − cos 2π·n·d)/n⁴ as 2·sin²(π·n·d)/n⁴. The angles are turned
// by rotation rather than computed anew.
func cosineWeights(d float64) (w [Harmonics]float64) {
	sin1, cos1 := math.Sincos(math.Pi * d)
	sin, cos := sin1, cos1
	for i := range w {
		w[i] = 2 * sin * sin * overFourth[i]
		sin, cos = sin*cos1+cos*sin1, cos*cos1-sin*sin1
	}
	return w
}

// overFourth holds 1/n⁴.
var overFourth = func() (p [Harmonics]float64) {
	for i := range p {
		n := float64(i + 1)
		p[i] = 1 / (n * n * n * n)
	}
	return p
}()
