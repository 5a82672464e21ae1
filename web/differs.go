package web

import (
	"context"
	"math"
)

// outdated reports whether the model of this program says something else of a
// revision's design than what was saved with it. The saved results stay.
func (r *Revision) outdated(ctx context.Context) (bool, error) {
	stored, err := r.rows()
	if err != nil {
		return false, err
	}
	design, err := readDesign(r.Design)
	if err != nil {
		return false, err
	}
	now, wrong, err := compute(ctx, design, nil)
	if err != nil {
		return false, err
	}
	return len(wrong) > 0 || differs(stored, now.Points), nil
}

// sameTo is how near, relatively, a recomputed figure must be to a stored one
// to count as the same: rounding differs between processors, physics more.
const sameTo = 1e-9

// differs reports whether results computed now say something else than the
// stored ones: another state, item or mark, or a figure further away than
// rounding goes.
func differs(stored, now []Point) bool {
	if len(stored) != len(now) {
		return true
	}
	for i := range stored {
		if pointDiffers(&stored[i], &now[i]) {
			return true
		}
	}
	return false
}

func pointDiffers(a, b *Point) bool {
	if a.State != b.State || a.Part != b.Part || far(a.Vin, b.Vin) || far(a.Iout, b.Iout) || far(a.Ambient, b.Ambient) || far(a.Vout, b.Vout) {
		return true
	}
	return a.Settled() && (a.Mode != b.Mode || anyFar(a.numbers(), b.numbers()) || itemsDiffer(a.Items, b.Items))
}

func (f *Figures) numbers() []float64 {
	c, t := f.InductorCurrent, f.Temperatures
	return []float64{f.Duty, f.OnTime, f.Pin, f.Pout, f.Loss, f.Efficiency, f.Iin, c.Mean, c.Min, c.Max, c.RMS, f.SwitchRMS,
		f.RectifierRMS, f.RectifierMean, f.InputCapacitorRMS, f.OutputCapacitorRMS, t.Switch, t.Rectifier, t.Inductor}
}

func itemsDiffer(a, b []Item) bool {
	if len(a) != len(b) {
		return true
	}
	for i := range a {
		if a[i].Part != b[i].Part || a[i].Kind != b[i].Kind || a[i].Outside != b[i].Outside || far(a[i].Power, b[i].Power) {
			return true
		}
	}
	return false
}

func anyFar(a, b []float64) bool {
	for i := range a {
		if far(a[i], b[i]) {
			return true
		}
	}
	return false
}

func far(a, b float64) bool {
	return math.Abs(a-b) > sameTo*max(math.Abs(a), math.Abs(b))
}
