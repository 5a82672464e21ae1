package web

import (
	"context"

	"lossbook/budget"
)

// maxPoints bounds the points of one call.
const maxPoints = 10_000

// Answer is a design's results: one row a point, in the order asked, and what
// is to be said of the design as a whole.
type Answer struct {
	Points   []Point   `json:"points"`
	Findings []Finding `json:"findings"`
}

// maxWorkings bounds the points of one call that asks for the working of every item:
// each is some hundred times as long as its figures.
const maxWorkings = 500

// compute is the one way from a design to its results. Nil points are the
// default grid. What is wrong with design or points comes back as a list;
// the error is that of an ended request.
func compute(ctx context.Context, d *budget.Design, points []budget.Point) (Answer, []budget.FieldError, error) {
	wrong := append(budget.Validate(d), budget.ValidatePoints(points)...)
	if len(wrong) > 0 {
		return Answer{}, wrong, nil
	}
	model, err := budget.Prepare(d)
	if err != nil {
		return Answer{}, nil, err // what Validate lets through, Prepare takes
	}
	if points == nil {
		points = budget.Grid(d)
	}
	return answer(ctx, model, points)
}

func answer(ctx context.Context, model *budget.Model, points []budget.Point) (Answer, []budget.FieldError, error) {
	budgets := make([]budget.Budget, len(points))
	rows := make([]Point, len(points))
	var items []budget.Item // one ledger for all: of a budget that was looked at only its marks are needed again
	for i, p := range points {
		if err := ctx.Err(); err != nil {
			return Answer{}, nil, err
		}
		b := &budgets[i]
		b.Items = items
		model.At(p, b)
		rows[i] = pointOf(b, model.Findings(b))
		items, b.Items = b.Items, outside(b.Items)
	}
	return Answer{rows, findingsOf(model.Review(budgets))}, nil, nil
}

// outside copies the items that a review of all points looks at.
func outside(items []budget.Item) (marked []budget.Item) {
	for i := range items {
		if items[i].Outside {
			marked = append(marked, items[i])
		}
	}
	return marked
}
