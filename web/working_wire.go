package web

import (
	"context"

	"lossbook/budget"
)

// work adds to every item of an answer how it came about.
func (a *Answer) work(ctx context.Context, d *budget.Design) error {
	model, err := budget.Prepare(d)
	if err != nil {
		return err
	}
	var b budget.Budget
	for i := range a.Points {
		if err := ctx.Err(); err != nil {
			return err
		}
		q := &a.Points[i]
		if !q.Settled() {
			continue
		}
		model.At(budget.Point{Vin: q.Vin, Iout: q.Iout, Ambient: q.Ambient}, &b)
		for j := range q.Items {
			it := &q.Items[j]
			if w, known := model.Working(&b, it.Part, it.Kind); known {
				it.Working = stepsOf(w)
			}
		}
	}
	return nil
}

func stepsOf(w budget.Working) []Step {
	steps := make([]Step, len(w.Steps))
	for i, s := range w.Steps {
		steps[i] = Step{Name: s.Name, Words: s.Words, Terms: make([]Term, len(s.Terms)), Result: s.Value, Unit: s.Unit, Source: s.Source, Inputs: s.Inputs}
		if s.Formula != nil {
			steps[i].Formula = s.Formula.Text
		}
		for j, t := range s.Terms {
			steps[i].Terms[j] = Term(t)
		}
	}
	return steps
}
