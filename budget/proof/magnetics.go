package proof

import (
	"math"

	"lossbook/budget/magnetic"
)

// Cores and copper.

// triangleShare is the loss of a two-segment swing over that of a sine of the same
// peak and frequency.
func triangleShare(alpha, beta, duty float64) float64 {
	s := magnetic.Steinmetz{Alpha: alpha, Beta: beta, CT0: 1}
	return magnetic.MaterialCore(1, 1, 1, 1, s, 1).Loss(2, duty, 1-duty, 1) // amplitude 1: the sine loses 1
}

func triangleOverSine(t *Trial) {
	alpha, beta := t.In("alpha"), t.In("beta")
	t.Each(func(_ string, in func(string) float64) float64 { return triangleShare(alpha, beta, in("duty")) })
	t.Is("ki over k", magnetic.SineShare(alpha)*math.Pow(2, -beta))
}

// ferrite carries the loss at one point to another by the exponents given; the model
// knows triangles alone, so that of duty ½ is taken back to a sine.
func ferrite(t *Trial) {
	alpha, beta := t.In("alpha"), t.In("beta")
	t.Each(func(_ string, in func(string) float64) float64 {
		k := in("loss there") / (math.Pow(in("from frequency"), alpha) * math.Pow(in("from flux"), beta))
		s := magnetic.Steinmetz{Alpha: alpha, Beta: beta, CT0: 1}
		core := magnetic.MaterialCore(1, 1, 1, k, s, in("frequency"))
		return core.Loss(2*in("flux"), 0.5, 0.5, 1) / triangleShare(alpha, beta, 0.5)
	})
}

func dowell(t *Trial) {
	foil, f := t.In("foil"), t.In("frequency")
	t.Is("foil, ξ", foil/magnetic.SkinDepth(f, 20))
	for layers, name := range map[float64]string{1: "foil, 1 layer", 2: "foil, 2 layers", 3: "foil, 3 layers"} {
		factor, _ := magnetic.FoilWinding(foil, layers, 1).Factor(f, 20)
		t.Is(name, factor)
	}
	t.Each(func(_ string, in func(string) float64) float64 { return magnetic.Dowell(in("ξ"), in("layers")) })
}

// copper takes the resistivity back out of the skin depth, and turns it into ohms of
// wire gauges, whose diameter is 0.005 in·92^((36 − gauge)/39).
func copper(t *Trial) {
	const f = 10e3
	depth := magnetic.SkinDepth(f, 20)
	resistivity := depth * depth * math.Pi * f * 4e-7 * math.Pi
	t.Is("conductivity", 1/resistivity)
	t.Is("rise of resistance", magnetic.CopperFactor(21)-1)
	t.Is("skin depth at 10 kHz", depth)
	t.Is("skin depth at 1 MHz", magnetic.SkinDepth(1e6, 20))
	t.Each(func(_ string, in func(string) float64) float64 {
		d := 0.005 * 25.4e-3 * math.Pow(92, (36-in("gauge"))/39)
		return resistivity / (math.Pi * d * d / 4)
	})
}
