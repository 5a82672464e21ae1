package web

import (
	"context"
	"encoding/json"
	"fmt"
	"math"
	"reflect"
	"runtime"
	"slices"
	"strings"
	"testing"

	"lossbook/assets"
	"lossbook/budget"
	"lossbook/web/view"
)

// rough is a design whose map has everything: points out of reach, a switch that runs
// away, limits exceeded and near.
func rough(t *testing.T) *budget.Design {
	d := sample(t, "radar-hut")
	d.Name = "=rough <b>&amp;"
	d.Input.Min, d.Ambient = budget.N(8), budget.N(70)
	d.Switch.ThetaJA, d.Switch.RdsOnHotRatio, d.Inductor.ISat = budget.N(70), budget.N(2.2), budget.N(8.5)
	return d
}

func mapOfSize(t *testing.T, d *budget.Design, columns, rows int) efficiencyMap {
	t.Helper()
	m, err := mapOf(context.Background(), d, budget.MapLattice(d, columns, rows, false))
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// TestMapIsTheBudget holds a map against the API's points: state, figures, bit for
// bit, and limits.
func TestMapIsTheBudget(t *testing.T) {
	s := newSite(t)
	d := rough(t)
	m := mapOfSize(t, d, 12, 9)
	request := budgetRequest{Design: d}
	for i := range m.size() {
		request.Points = append(request.Points, pointRequest(m.at(i)))
	}
	answer := read[Answer](t, s.want(200, "POST", "/api/v1/budget", text(t, request)))
	data := m.data(lookAt(d, sight{}))
	seen := map[string]int{}
	for i, q := range answer.Points {
		spot := m.at(i)
		seen[q.State]++
		if spot.State.String() != q.State {
			t.Fatalf("point %d: %s, want %s", i, spot.State, q.State)
		}
		if !q.Settled() {
			if data.Values[i] != nil || data.Losses[i] != nil || spot.Efficiency != 0 {
				t.Errorf("point %d has a figure although it is %s", i, q.State)
			}
			continue
		}
		if math.Float64bits(spot.Efficiency) != math.Float64bits(q.Efficiency) || math.Float64bits(spot.Loss) != math.Float64bits(q.Loss) {
			t.Errorf("point %d: %v, %v, want %v, %v", i, spot.Efficiency, spot.Loss, q.Efficiency, q.Loss)
		}
		if got := *data.Values[i]; math.Abs(got-100*q.Efficiency) > 0.00000501 {
			t.Errorf("point %d is drawn at %v %%, want %v", i, got, 100*q.Efficiency)
		}
		over := slices.ContainsFunc(q.Findings, func(f Finding) bool { return f.Level == "exceeded" })
		if drawn := inAreas(data.Limits, "exceeded", i); drawn != over || exceeds(spot) != over {
			t.Errorf("point %d: drawn as exceeded: %v, findings say %v", i, drawn, over)
		}
		if over {
			seen["over"]++
		}
		if near := slices.ContainsFunc(q.Findings, func(f Finding) bool { return f.Level == "caution" }); inAreas(data.Limits, "caution", i) != near {
			t.Errorf("point %d: drawn as near a limit: %v", i, !near)
		} else if near {
			seen["near"]++
		}
	}
	for _, area := range data.Unsettled {
		seen["drawn "+area.Level] += points(area.Runs)
	}
	if seen["drawn runaway"] != seen["runaway"] || seen["drawn out_of_reach"] != seen["out_of_reach"] {
		t.Errorf("points without a figure: %v", seen)
	}
	for what, least := range map[string]int{"settled": 60, "out_of_reach": 12, "runaway": 1, "over": 10, "near": 10} {
		if seen[what] < least {
			t.Errorf("only %d of %s: %v", seen[what], what, seen)
		}
	}
}

func pointRequest(q *budget.Spot) requestPoint {
	return requestPoint{Vin: budget.N(q.Vin), Iout: budget.N(q.Iout), Ambient: budget.N(q.Ambient)}
}

func inAreas(areas []assets.MapArea, level string, i int) bool {
	return slices.ContainsFunc(areas, func(a assets.MapArea) bool {
		return a.Level == level && slices.ContainsFunc(a.Runs, func(r assets.Run) bool { return r[0] <= i && i < r[0]+r[1] })
	})
}

func points(runs []assets.Run) (n int) {
	for _, r := range runs {
		n += r[1]
	}
	return n
}

// TestMapTakesNoSides computes a map with one processor and with eight.
func TestMapTakesNoSides(t *testing.T) {
	before := runtime.GOMAXPROCS(1)
	defer runtime.GOMAXPROCS(before)
	d := rough(t)
	one := mapOfSize(t, d, 30, 20)
	runtime.GOMAXPROCS(8)
	for range 3 {
		if eight := mapOfSize(t, d, 30, 20); !reflect.DeepEqual(one, eight) {
			t.Fatal("eight processors give another map than one")
		}
	}
	if one.size() != 600 || len(one.spots[19]) != 30 {
		t.Errorf("%d points", one.size())
	}
	text, err := one.csv()
	if again, failed := one.csv(); err != nil || failed != nil || string(text) != string(again) {
		t.Error("the CSV differs from itself")
	}
}

func TestMapEndsWithItsRequest(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	d := rough(t)
	if _, err := mapOf(ctx, d, budget.MapLattice(d, 20, 20, true)); err == nil {
		t.Error("a request that has ended got a map")
	}
}

// A panic beside the request comes up in it, where it is caught and told.
func TestInTurn(t *testing.T) {
	done := make([]bool, 100)
	inTurn(len(done), func(i int) { done[i] = true })
	if slices.Contains(done, false) {
		t.Error("some work was left out")
	}
	defer func() {
		if cause := fmt.Sprint(recover()); !strings.HasPrefix(cause, "broken 7") || !strings.Contains(cause, "map_test.go") {
			t.Errorf("%.200s", cause)
		}
	}()
	inTurn(20, func(i int) {
		if i == 7 {
			panic("broken 7")
		}
	})
}

func TestMapWords(t *testing.T) {
	d := rough(t)
	m := mapOfSize(t, d, 12, 9)
	if m.caution() != "" {
		t.Error("a caution stands although some points are sound")
	}
	for _, f := range m.limitLines() {
		if f.At == "" || strings.Contains(f.Message, "_") {
			t.Errorf("%+v", f)
		}
	}
	d.Switch.VdsRating = budget.N(40)
	m = mapOfSize(t, d, 12, 9)
	if !strings.HasPrefix(m.caution(), "Every point of this map exceeds a limit") {
		t.Errorf("caution: %q", m.caution())
	}
	if lines := m.limitLines(); !slices.ContainsFunc(lines, func(f view.Finding) bool {
		return f.Message == "over the limit: switch, blocking voltage" && f.At == "at every point that has a figure"
	}) {
		t.Errorf("%+v", lines)
	}
	d.Output.Voltage = budget.N(60)
	m = mapOfSize(t, d, 12, 9)
	if m.caution() != "No point of this map has a figure." || m.limitLines()[0].At != "at every point" {
		t.Errorf("caution: %q, %+v", m.caution(), m.limitLines())
	}
	if data := m.data(lookAt(d, sight{})); points(data.Unsettled[0].Runs) != m.size() || data.Values[0] != nil {
		t.Error("a map without figures is drawn with some")
	}
}

// TestLimitWords wants words for every limit that a random design runs into.
func TestLimitWords(t *testing.T) {
	seen := map[string]bool{}
	for name, change := range map[string]func(d *budget.Design){
		"radar-hut":   func(d *budget.Design) {},
		"frost":       func(d *budget.Design) { d.Controller = &budget.Controller{OnTimeMin: budget.N(1e-5)} },
		"fish-ladder": func(d *budget.Design) { d.Drive.Voltage = budget.N(d.Switch.VPlateau.V + 0.5) },
	} {
		d := sample(t, name)
		for _, s := range []*budget.MOSFET{d.Switch, d.SyncSwitch} {
			if s != nil {
				s.VdsRating, s.IDRating, s.TjMax, s.ThetaJA = budget.N(1), budget.N(0.01), budget.N(30), budget.N(s.ThetaJA.V*1.5)
			}
		}
		if d.Diode != nil {
			d.Diode.VRRM, d.Diode.IFRating, d.Diode.TjMax = budget.N(1), budget.N(0.01), budget.N(30)
		}
		d.Inductor.ISat, d.Inductor.IRMSRating, d.Inductor.TMax = budget.N(0.01), budget.N(0.01), budget.N(20)
		for _, c := range []*budget.Capacitor{d.InputCapacitor, d.OutputCapacitor} {
			if c != nil {
				c.RippleRating, c.VoltageRating = budget.N(0.001), budget.N(1)
			}
		}
		change(d)
		if wrong := budget.Validate(d); len(wrong) > 0 {
			t.Fatal(name, wrong)
		}
		m := mapOfSize(t, d, 6, 4)
		for _, l := range m.limits() {
			rule := strings.Trim(l.rule+"."+l.aspect, ".")
			seen[rule] = true
			if _, known := limitWords[rule]; !known {
				t.Errorf("%s: no words for %s", name, rule)
			}
		}
	}
	if len(seen) < 9 {
		t.Errorf("only %v were seen", seen)
	}
	if got := (limit{budget.Exceeded, "switch", "some_new_rule", "kind"}).words(); got != "switch, some new rule, kind" {
		t.Errorf("a rule without words reads %q", got)
	}
}

func TestMapData(t *testing.T) {
	d := rough(t)
	m := mapOfSize(t, d, 12, 9)
	at := lookAt(d, sight{vin: "200"})
	if m.data(at).Here != nil {
		t.Error("a point beyond the map is marked on it")
	}
	text, err := json.Marshal(m.data(lookAt(d, sight{load: "50"})))
	if err != nil || strings.Contains(string(text), "NaN") || !strings.Contains(string(text), `"here":[50,48]`) {
		t.Errorf("%v, %.300s", err, text)
	}
	got := assets.RunsOf(9, func(i int) bool { return i != 2 && i != 5 && i != 8 })
	if want := []assets.Run{{0, 2}, {3, 2}, {6, 2}}; !slices.Equal(got, want) {
		t.Errorf("runs %v, want %v", got, want)
	}
	if everyFourth(1)[0] != 0 || !slices.Equal(everyFourth(9), []int{0, 4, 8}) || !slices.Equal(everyFourth(10), []int{0, 4, 8, 9}) {
		t.Error("which rows a table shows")
	}
}
