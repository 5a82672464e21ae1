package budget

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/interp"
)

// curve is a monotone cubic through the rows of a Curve, held flat outside.
// Source: F. N. Fritsch and J. Butland, A method for constructing local monotone
// piecewise cubic interpolants, SIAM J. Sci. Stat. Comput. 5 (1984).
type curve struct {
	xs    []float64
	ys    []float64
	cubic interp.FritschButland
	areas []float64 // integral from xs[0] to each x
}

// newCurve fits the rows, whose x must increase; nil rows give nil.
func newCurve(rows Curve) *curve {
	if len(rows) == 0 {
		return nil
	}
	c := &curve{}
	for _, row := range rows {
		c.xs, c.ys = append(c.xs, row[0]), append(c.ys, row[1])
	}
	if len(rows) > 1 {
		// Fit fails by panicking on rows that Validate refuses; its error is always nil.
		_ = c.cubic.Fit(c.xs, c.ys)
	}
	c.areas = make([]float64, len(rows))
	for i := 1; i < len(rows); i++ {
		c.areas[i] = c.areas[i-1] + c.piece(c.xs[i-1], c.xs[i])
	}
	return c
}

// At returns the value at x, and whether x lies outside the rows.
func (c *curve) At(x float64) (y float64, outside bool) {
	last := len(c.xs) - 1
	switch {
	case x <= c.xs[0]:
		return c.ys[0], x < c.xs[0]
	case x >= c.xs[last]:
		return c.ys[last], x > c.xs[last]
	}
	return c.cubic.Predict(x), false
}

// Most returns the largest value, which is that of a row: the curve is monotone
// between rows.
func (c *curve) Most() float64 { return slices.Max(c.ys) }

// Integral returns the integral of the value from 0 to x ≥ 0, for rows that begin
// at or above 0.
func (c *curve) Integral(x float64) float64 {
	first, last := c.xs[0], c.xs[len(c.xs)-1]
	if x <= first {
		return x * c.ys[0]
	}
	total := first * c.ys[0]
	if x >= last {
		return total + c.areas[len(c.areas)-1] + (x-last)*c.ys[len(c.ys)-1]
	}
	i := 0
	for c.xs[i+1] < x {
		i++
	}
	return total + c.areas[i] + c.piece(c.xs[i], x)
}

// piece integrates within one interval by two-point Gauss quadrature, which is
// exact for a cubic.
func (c *curve) piece(a, b float64) float64 {
	mid, half := (a+b)/2, (b-a)/2
	node := half / math.Sqrt(3)
	return half * (c.cubic.Predict(mid-node) + c.cubic.Predict(mid+node))
}

// logCurve is a curve through the logarithms of both columns.
type logCurve struct{ *curve }

func newLogCurve(rows Curve) logCurve {
	logs := make(Curve, len(rows))
	for i, row := range rows {
		logs[i] = [2]float64{math.Log(row[0]), math.Log(row[1])}
	}
	return logCurve{newCurve(logs)}
}

// At returns the value at x > 0, and whether x lies outside the rows.
func (c logCurve) At(x float64) (y float64, outside bool) {
	logY, outside := c.curve.At(math.Log(x))
	return math.Exp(logY), outside
}
