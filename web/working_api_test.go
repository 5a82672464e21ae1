package web

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"lossbook/budget/formula"
)

// TestWorkingInTheAPI evaluates each formula of an answer with the terms that stand
// beside it, as a script would.
func TestWorkingInTheAPI(t *testing.T) {
	s := newSite(t)
	body := `{"design":` + text(t, sample(t, "radar")) + `,"working":true}`
	answer := read[Answer](t, s.want(200, "POST", "/api/v1/budget", body))
	formulas, reasons := 0, 0
	for _, p := range answer.Points {
		for _, it := range p.Items {
			if len(it.Working) == 0 || it.Working[0].Result != it.Power {
				t.Fatalf("%s.%s: %v W, working %+v", it.Part, it.Kind, it.Power, it.Working)
			}
			if it.Working[0].Formula == "" {
				reasons++
				continue
			}
			formulas++
			e, err := formula.Parse(it.Working[0].Formula)
			if err != nil {
				t.Fatal(err)
			}
			values := map[string]float64{}
			for _, term := range it.Working[0].Terms {
				values[term.Name] = term.Value
			}
			if got, err := e.Value(values); err != nil || math.Abs(got-it.Power) > 1e-12*it.Power {
				t.Errorf("%s.%s: %s is %v (%v), want %v", it.Part, it.Kind, e.Text, got, err, it.Power)
			}
		}
	}
	if formulas < 300 || reasons < 50 {
		t.Errorf("%d formulas and %d reasons were read", formulas, reasons)
	}
	plain := read[Answer](t, s.want(200, "POST", "/api/v1/budget", `{"design":`+text(t, sample(t, "radar"))+`,"working":false}`))
	if plain.Points[0].Items[0].Working != nil {
		t.Error("a working is given that was not asked for")
	}
}

func TestWorkingIsBounded(t *testing.T) {
	s := newSite(t)
	ask := func(points int, working string) string {
		list := strings.TrimSuffix(strings.Repeat(`{"vin":12,"iout":1},`, points), ",")
		return fmt.Sprintf(`{"design":%s,"points":[%s],"working":%s}`, text(t, sample(t, "frost")), list, working)
	}
	s.want(200, "POST", "/api/v1/budget", ask(maxWorkings, "true"))
	s.want(200, "POST", "/api/v1/budget", ask(maxWorkings+1, "false"))
	for body, field := range map[string]string{ask(maxWorkings+1, "true"): "points", ask(1, `"yes"`): "working", ask(1, "1"): "working"} {
		if p := read[problem](t, s.want(422, "POST", "/api/v1/budget", body)); len(p.Errors) != 1 || p.Errors[0].Field != field {
			t.Errorf("%+v, want one of %s", p.Errors, field)
		}
	}
}
