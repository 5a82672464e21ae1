package web

import (
	"context"
	"errors"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"

	"lossbook/budget"
)

// TestReviewMissesNothing compares the findings with those of budgets that kept
// all their items, so that a rule that looks at others is noticed.
func TestReviewMissesNothing(t *testing.T) {
	outsides := 0
	for name, d := range everyDesign(t) {
		model, err := budget.Prepare(d)
		if err != nil {
			t.Fatal(name, err)
		}
		points := append(budget.Grid(d), budget.Point{Vin: d.Input.Max.V, Iout: 1.5 * d.Output.Current.V, Ambient: 150})
		budgets := make([]budget.Budget, len(points))
		for i, p := range points {
			model.At(p, &budgets[i])
		}
		got, wrong, err := compute(context.Background(), d, points)
		if err != nil || len(wrong) > 0 {
			t.Fatal(name, wrong, err)
		}
		if diff := cmp.Diff(findingsOf(model.Review(budgets)), got.Findings); diff != "" {
			t.Errorf("%s: %s", name, diff)
		}
		if slices.ContainsFunc(got.Findings, func(f Finding) bool { return f.Rule == "outside_curve" }) {
			outsides++
		}
	}
	if outsides == 0 {
		t.Error("no design has an item outside its curve, so nothing was tested")
	}
}

func TestComputeEndsWithItsRequest(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, _, err := compute(ctx, sample(t, "frost"), nil); !errors.Is(err, context.Canceled) {
		t.Errorf("an ended request gives %v", err)
	}
}
