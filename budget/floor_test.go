package budget

import (
	"encoding/json"
	"os"
	"testing"
)

// BenchmarkFloor evaluates every item once at each of the yardstick's points, with the
// stage's loss and the temperatures known: what a point would cost if nothing had to be
// found.
func BenchmarkFloor(b *testing.B) {
	m, points := yardstick(b)
	settled := make([]situation, len(points))
	for i, p := range points {
		var budget Budget
		m.At(p, &budget)
		settled[i] = *m.situationOf(&budget)
	}
	b.ReportAllocs()
	b.ResetTimer()
	n := 0
	for b.Loop() {
		s := &settled[n%len(settled)]
		if s.evaluate(s.guess, s.temperature) != sound {
			b.Fatal("a settled point has no answer")
		}
		n++
	}
}

// yardstick is the design and the points that speed is measured with.
func yardstick(b *testing.B) (*Model, []Point) {
	b.Helper()
	var c struct {
		Design Design
		Points []Point
	}
	raw, err := os.ReadFile("../testdata/cases/bench.json")
	if err == nil {
		err = json.Unmarshal(raw, &c)
	}
	if err != nil {
		b.Fatal(err)
	}
	m, err := Prepare(&c.Design)
	if err != nil {
		b.Fatal(err)
	}
	for i := range c.Points {
		c.Points[i].Ambient = c.Design.Ambient.V
	}
	return m, c.Points
}
