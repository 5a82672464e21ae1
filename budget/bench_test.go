package budget_test

import (
	"testing"

	"lossbook/budget"
)

// BenchmarkPoint runs the yardstick's points, one after the other on one core:
// coupled temperatures, Dowell's winding, Steinmetz core and leakage.
func BenchmarkPoint(b *testing.B) {
	c := cases(b)["bench"]
	m, err := budget.Prepare(&c.Design)
	if err != nil {
		b.Fatal(err)
	}
	points := make([]budget.Point, len(c.Points))
	for i, p := range c.Points {
		points[i] = p.point(&c.Design)
	}
	var result budget.Budget
	for _, p := range points {
		m.At(p, &result)
	}
	evaluations := 0
	b.ReportAllocs()
	b.ResetTimer()
	n := 0
	for b.Loop() {
		m.At(points[n%len(points)], &result)
		evaluations += result.Iterations
		n++
	}
	b.ReportMetric(float64(evaluations)/float64(n), "evaluations/op")
}
