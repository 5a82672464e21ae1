package budget

import "math"

// matrix is a 4 × 4 matrix; the solver needs no larger one, and this one lives on
// the stack.
type matrix [4][4]float64

func identity() matrix {
	return matrix{{1, 0, 0, 0}, {0, 1, 0, 0}, {0, 0, 1, 0}, {0, 0, 0, 1}}
}

func (a *matrix) times(v unknowns) (w unknowns) {
	for i := range w {
		for j := range v {
			w[i] += a[i][j] * v[j]
		}
	}
	return w
}

// learn updates an approximate inverse of the negative slope of the residual by a
// step and what it changed: Broyden's first method in the form of Sherman and
// Morrison. A step that tells nothing leaves it as it is.
func (a *matrix) learn(step, change unknowns) {
	moved := a.times(change).scaled(-1) // what the matrix would have expected of the step
	var row unknowns
	for j := range row {
		for i := range step {
			row[j] += step[i] * a[i][j]
		}
	}
	denominator := step.dot(moved)
	if denominator == 0 {
		return
	}
	miss := step.minus(moved)
	for i := range miss {
		for j := range row {
			a[i][j] += miss[i] * row[j] / denominator
		}
	}
}

// solve returns x of (A + I/pace)·x = r by elimination with pivoting. regular is
// false when a pivot vanishes.
func (a matrix) solve(r unknowns, pace float64) (x unknowns, regular bool) {
	for i := range a {
		a[i][i] += 1 / pace
	}
	for col := range a {
		pivot := col
		for i := col + 1; i < len(a); i++ {
			if math.Abs(a[i][col]) > math.Abs(a[pivot][col]) {
				pivot = i
			}
		}
		if a[pivot][col] == 0 {
			return x, false
		}
		a[col], a[pivot] = a[pivot], a[col]
		r[col], r[pivot] = r[pivot], r[col]
		for i := col + 1; i < len(a); i++ {
			k := a[i][col] / a[col][col]
			for j := col; j < len(a); j++ {
				a[i][j] -= k * a[col][j]
			}
			r[i] -= k * r[col]
		}
	}
	for i := len(a) - 1; i >= 0; i-- {
		x[i] = r[i]
		for j := i + 1; j < len(a); j++ {
			x[i] -= a[i][j] * x[j]
		}
		x[i] /= a[i][i]
	}
	return x, true
}

func (v unknowns) plus(w unknowns) unknowns {
	for i := range v {
		v[i] += w[i]
	}
	return v
}

func (v unknowns) minus(w unknowns) unknowns {
	for i := range v {
		v[i] -= w[i]
	}
	return v
}

func (v unknowns) scaled(k float64) unknowns {
	for i := range v {
		v[i] *= k
	}
	return v
}

func (v unknowns) dot(w unknowns) (sum float64) {
	for i := range v {
		sum += v[i] * w[i]
	}
	return sum
}

func (v unknowns) norm() float64 { return math.Sqrt(v.dot(v)) }
