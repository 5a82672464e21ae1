package web

import (
	"math"
	"strings"
	"testing"

	"lossbook/budget"
)

// TestSolverIsTold asks that each settled point says what its search took and how near
// its figures are, in the API and beside the figures that were solved for.
func TestSolverIsTold(t *testing.T) {
	s := seeded(t)
	answer := read[Answer](t, s.want(200, "POST", "/api/v1/budget", text(t, designRequest{sample(t, "frost")})))
	far := 0.0
	for _, p := range answer.Points {
		if p.Solver == nil || p.Solver.Evaluations < 2 || p.Solver.Error > 1e-10 || p.Solver.LossError > 1e-9*p.Loss {
			t.Errorf("%g V, %g A: %+v", p.Vin, p.Iout, p.Solver)
			continue
		}
		t := p.Solver.TemperatureErrors
		far = math.Max(far, math.Min(p.Solver.LossError, math.Max(t.Switch, math.Max(t.Rectifier, t.Inductor))))
	}
	if far == 0 {
		t.Error("no point says how far it may be off")
	}
	raw := s.want(200, "POST", "/api/v1/budget", strings.TrimSuffix(text(t, designRequest{sample(t, "frost")}), "}\n")+`,"points":[{"vin":30,"iout":1}]}`)
	if body := raw.Body.String(); !strings.Contains(body, "out_of_reach") || strings.Contains(body, "solver") {
		t.Errorf("a point out of reach: %s", body)
	}
	for key, want := range map[string]string{
		"budget.loss": "W of the solution.", "temperature.switch": "K of the solution.", "temperature.inductor": "K of the solution.",
	} {
		got := words(s.open(200, "/designs/1?load=100&working="+key).one("working"))
		if !strings.Contains(got, want) || !strings.Contains(got, "evaluations of all losses; within about ") {
			t.Errorf("%s: %s", key, got)
		}
		t.Log(got[strings.Index(got, "Solved in"):])
	}
	for _, key := range []string{"budget.efficiency", "switch.conduction", "subtotal.switch"} {
		if got := words(s.open(200, "/designs/1?load=100&working="+key).one("working")); strings.Contains(got, "Solved in") {
			t.Errorf("%s: %s", key, got)
		}
	}
}

// A revision that was kept before points told about their search is shown as it is.
func TestRevisionWithoutSolver(t *testing.T) {
	s := seeded(t)
	points := read[Answer](t, s.want(200, "POST", "/api/v1/budget", text(t, designRequest{sample(t, "frost")}))).Points
	for i := range points {
		points[i].Solver = nil
	}
	s.another(budget.ModelVersion, points)
	for _, key := range []string{"budget.loss", "temperature.switch"} {
		got := words(s.open(200, "/designs/1/revisions/2?load=100&working="+key).one("working"))
		if !strings.Contains(got, "Solved in") {
			t.Errorf("%s: %s", key, got)
		}
	}
	if body := s.want(200, "GET", "/api/v1/designs/1/revisions/2", "").Body.String(); strings.Contains(body, "solver") {
		t.Error("a revision tells what was not kept")
	}
}
