package wave_test

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/dsp/fourier"
	"lossbook/budget/wave"
	"pgregory.net/rapid"
)

// at returns the triangle's value at the share x of the period.
func at(w wave.Triangle, x float64) float64 {
	switch {
	case x < w.D1:
		return w.Min + w.Swing()*x/w.D1
	case x < w.D1+w.D2:
		return w.Max - w.Swing()*(x-w.D1)/w.D2
	}
	return w.Min
}

// TestShare holds quadrature and figures worked by hand.
func TestShare(t *testing.T) {
	rising := wave.Share{Min: 2, Max: 4, D: 0.4}
	ramp := func(x float64) float64 { return 2 + 2*x }
	mean := 0.4 * integral(ramp, 0, 1)
	square := 0.4 * integral(func(x float64) float64 { return ramp(x) * ramp(x) }, 0, 1)
	w := wave.Triangle{Min: -1, Max: 5, D1: 0.3, D2: 0.6}
	hold(t, []row{
		{"mean", rising.Mean(), mean, exact, "quadrature"},
		{"mean square", rising.MeanSquare(), square, exact, "quadrature"},
		{"ripple", rising.RippleSquare(), square - mean*mean, 1e-14, "rms² − mean²"},
		{"ripple of a whole triangle", wave.Share{Min: 99, Max: 101, D: 1}.RippleSquare(), 4.0 / 12, exact, "Δi²/12"},
		{"ripple, tiny beside the mean", wave.Share{Min: 1e6, Max: 1e6 + 0.125, D: 1}.RippleSquare(), 0.015625 / 12, exact, "Δi²/12"},
		{"rising part", w.Rise().D, 0.3, 0, "D1"}, {"falling part", w.Fall().D, 0.6, 0, "D2"},
		{"both", w.Whole().D, 0.9, exact, "D1 + D2"}, {"swing", w.Swing(), 6, 0, "Max − Min"},
		{"reversing, mean", w.Whole().Mean(), 1.8, exact, "by hand"}, {"reversing, mean square", w.Whole().MeanSquare(), 0.9 * 7, exact, "(1 − 5 + 25)/3·D"},
	})
	if got := (wave.Share{Min: 1, Max: 1, D: 1.5}).RippleSquare(); got != 0 {
		t.Errorf("beyond the period: %g, want 0", got)
	}
	for _, part := range []wave.Share{w.Rise(), w.Fall(), w.Whole()} {
		if part.Min != w.Min || part.Max != w.Max {
			t.Errorf("part %+v of %+v", part, w)
		}
	}
}

// coefficient integrates the n-th Fourier coefficient piece by piece and returns the
// square of the harmonic's rms.
func coefficient(w wave.Triangle, n int) float64 {
	var sum complex128
	edges := []float64{0, w.D1, w.D1 + w.D2}
	for i := range 2 {
		a, b := edges[i], edges[i+1]
		slices := 1 + int(4*float64(n)*(b-a))
		for s := range slices {
			low, high := a+(b-a)*float64(s)/float64(slices), a+(b-a)*float64(s+1)/float64(slices)
			part := func(trig func(float64) float64) float64 {
				return integral(func(x float64) float64 { return (at(w, x) - w.Min) * trig(2*math.Pi*float64(n)*x) }, low, high)
			}
			sum += complex(part(math.Cos), -part(math.Sin))
		}
	}
	return 2 * real(sum*cmplx.Conj(sum)) // amplitude 2·|c|, its rms squared 2·|c|²
}

func TestHarmonics(t *testing.T) {
	var rows []row
	for _, w := range []wave.Triangle{
		{Min: 3, Max: 5, D1: 0.353, D2: 0.647}, {Min: -2, Max: 9, D1: 0.907, D2: 0.093}, {Max: 4, D1: 0.207, D2: 0.306},
		{Max: 4, D1: 1e-3, D2: 0.2}, {Max: 4, D1: 0.31, D2: 2e-3}, {Min: 1, Max: 2, D1: 0.013, D2: 0.987},
	} {
		var square [50]float64
		w.Harmonics(square[:])
		for _, n := range []int{1, 2, 3, 7, 20, 50} {
			rows = append(rows, row{fmt.Sprintf("%+v, harmonic %d", w, n), square[n-1], coefficient(w, n), 1e-9, "piecewise quadrature"})
		}
	}
	hold(t, rows)
}

// TestHarmonicsBySampling compares with the transform of a sampled triangle.
func TestHarmonicsBySampling(t *testing.T) {
	const samples = 1 << 15
	w := wave.Triangle{Min: -1, Max: 6, D1: 0.25, D2: 0.5}
	values := make([]float64, samples)
	for i := range values {
		values[i] = at(w, float64(i)/samples)
	}
	spectrum := fourier.NewFFT(samples).Coefficients(nil, values)
	var square [20]float64
	w.Harmonics(square[:])
	var rows []row
	for n := 1; n <= len(square); n++ {
		c := cmplx.Abs(spectrum[n]) / samples
		if square[n-1] < 1e-12 {
			continue // one that vanishes by symmetry
		}
		rows = append(rows, row{fmt.Sprintf("harmonic %d", n), square[n-1], 2 * c * c, 1e-5, "FFT of samples"})
	}
	hold(t, rows)
	if len(rows) < 10 {
		t.Errorf("only %d harmonics", len(rows))
	}
}

// TestHarmonicsSymmetric is the triangle that text books give: D1 = D2 = ½ has
// amplitude 4Δ/(π²n²) at odd n and nothing at even n.
func TestHarmonicsSymmetric(t *testing.T) {
	var square [50]float64
	wave.Triangle{Min: 1, Max: 3, D1: 0.5, D2: 0.5}.Harmonics(square[:])
	for n := 1; n <= 50; n++ {
		want := 0.0
		if n%2 == 1 {
			want = math.Pow(4*2/(math.Pi*math.Pi*float64(n*n)), 2) / 2
		}
		if math.Abs(square[n-1]-want) > 1e-12*math.Max(want, 1e-6) {
			t.Errorf("harmonic %d: %g, want %g", n, square[n-1], want)
		}
	}
}

// TestHarmonicsAddUp asks that all harmonics together hold the whole ripple (Parseval).
func TestHarmonicsAddUp(t *testing.T) {
	many := make([]float64, 20000)
	rapid.Check(t, func(t *rapid.T) {
		d1 := rapid.Float64Range(0.01, 0.98).Draw(t, "d1")
		d2 := rapid.Float64Range(0.01, 1-d1).Draw(t, "d2")
		w := wave.Triangle{Max: 5, D1: d1, D2: d2}
		w.Harmonics(many)
		sum := 0.0
		for _, s := range many {
			sum += s
		}
		if ripple := w.Whole().RippleSquare(); math.Abs(sum-ripple) > 1e-6*ripple {
			t.Fatalf("D1 %g, D2 %g: harmonics hold %g A², ripple %g A²", d1, d2, sum, ripple)
		}
	})
}

// TestHarmonicsEdges attacks the ends of the domain.
func TestHarmonicsEdges(t *testing.T) {
	for _, w := range []wave.Triangle{{}, {Min: 2, Max: 2, D1: 0.5, D2: 0.5}, {Max: 3, D1: 0, D2: 0.5}, {Max: 3, D1: 0.5, D2: 0}, {Max: 3, D1: -1e-9, D2: 1}} {
		square := []float64{9, 9, 9}
		w.Harmonics(square)
		if square[0] != 0 || square[1] != 0 || square[2] != 0 {
			t.Errorf("%+v: %v, want none", w, square)
		}
	}
	// a rise within next to no time is a saw tooth: amplitude Δ/(π·n)
	for _, d := range []float64{1e-6, 1e-12, 1e-300} {
		var square [50]float64
		wave.Triangle{Max: 1, D1: d, D2: 1 - d}.Harmonics(square[:])
		for _, n := range []int{1, 50} {
			want := 1 / (2 * math.Pi * math.Pi * float64(n*n))
			if math.Abs(square[n-1]-want) > 2*want*float64(n)*d*20+1e-9*want {
				t.Errorf("D1 %g, harmonic %d: %g, want %g of a saw tooth", d, n, square[n-1], want)
			}
		}
	}
}

// TestWeighed adds up the harmonics one by one, each times a weight, and compares with
// the closed form of their sum.
func TestWeighed(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d1 := rapid.Float64Range(0.1, 0.9).Draw(t, "d1")
		w := wave.Triangle{Min: 1, Max: rapid.Float64Range(1.01, 40).Draw(t, "max"), D1: d1, D2: 1 - d1}
		weights := rapid.SliceOfN(rapid.Float64Range(0, 10), 50, 50).Draw(t, "weights")
		var square [50]float64
		w.Harmonics(square[:])
		want := 0.0
		for n, i2 := range square {
			want += i2 * weights[n]
		}
		sum := 0.0
		for i, weight := range weights {
			n := float64(i + 1)
			sum += weight / (n * n * n * n) * (1 - math.Cos(2*math.Pi*n*d1))
		}
		if got := w.Weighed(sum); math.Abs(got-want) > 1e-11*want {
			t.Fatalf("%+v: %.15g in one sum, %.15g one by one", w, got, want)
		}
	})
}
