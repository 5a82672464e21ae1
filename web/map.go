package web

import (
	"context"
	"fmt"
	"runtime/debug"
	"slices"
	"sync"

	"lossbook/budget"
)

// What a page's map is drawn from: columns of load and rows of input voltage.
const mapColumns, mapRows = 60, 40

// efficiencyMap is a design's efficiency over load and input voltage.
type efficiencyMap struct {
	design *budget.Design
	budget.Lattice
	spots [][]budget.Spot // a row an input voltage, from the lowest
}

// mapOf computes a map of a valid design.
func mapOf(ctx context.Context, d *budget.Design, l budget.Lattice) (efficiencyMap, error) {
	model, err := budget.Prepare(d)
	if err != nil {
		return efficiencyMap{}, err
	}
	m := efficiencyMap{d, l, make([][]budget.Spot, len(l.Vins))}
	inTurn(len(m.spots), func(row int) {
		if ctx.Err() == nil {
			m.spots[row] = model.Spots(l, row)
		}
	})
	return m, ctx.Err()
}

// hands is over how many goroutines the rows of a map are dealt out. It is fixed, as
// is which of them does a row; a row's result depends on neither.
const hands = 8

// inTurn does n pieces of work side by side. A panic in one of them comes up in the
// caller, where a request's panics are caught.
func inTurn(n int, work func(i int)) {
	var done sync.WaitGroup
	panics := make([]any, hands)
	for hand := range hands {
		done.Go(func() {
			defer func() {
				if cause := recover(); cause != nil {
					panics[hand] = fmt.Errorf("%v\n%s", cause, debug.Stack())
				}
			}()
			for i := hand; i < n; i += hands {
				work(i)
			}
		})
	}
	done.Wait()
	for _, cause := range panics {
		if cause != nil {
			panic(cause)
		}
	}
}

// at is the point with a number: along the rows, from the lowest voltage.
func (m *efficiencyMap) at(i int) *budget.Spot {
	return &m.spots[i/len(m.Loads)][i%len(m.Loads)]
}

func (m *efficiencyMap) size() int { return len(m.Vins) * len(m.Loads) }

// limit is a limit that some point of a map exceeds, or comes near to.
type limit struct {
	level              budget.Level
	part, rule, aspect string
}

func limitAt(f budget.Finding) limit { return limit{f.Level, f.Part, f.Rule, f.Aspect} }

// limits lists the limits exceeded at settled points, then the cautions, each in the
// order in which they come up along the rows.
func (m *efficiencyMap) limits() []limit {
	var list []limit
	for i := range m.size() {
		q := m.at(i)
		if q.State != budget.Settled {
			continue
		}
		for _, f := range q.Findings {
			if l := limitAt(f); f.Level != budget.Note && !slices.Contains(list, l) {
				list = append(list, l)
			}
		}
	}
	slices.SortStableFunc(list, func(a, b limit) int { return weight(a.level) - weight(b.level) })
	return list
}

func weight(l budget.Level) int {
	return slices.Index([]budget.Level{budget.Exceeded, budget.Caution, budget.Note}, l)
}

// holds reports whether a limit is one of a settled point's findings.
func (l limit) holds(q *budget.Spot) bool {
	return q.State == budget.Settled && slices.ContainsFunc(q.Findings, func(f budget.Finding) bool { return limitAt(f) == l })
}

// exceeds reports whether a settled point exceeds any limit.
func exceeds(q *budget.Spot) bool {
	return q.State == budget.Settled && slices.ContainsFunc(q.Findings, func(f budget.Finding) bool { return f.Level == budget.Exceeded })
}
