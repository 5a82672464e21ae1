package budget

import "math"

// matrix is a 4 × 4 matrix; the solver needs no larger one, and this one lives on
// the stack.
type matrix [4][4]float64

func identity() matrix {
	return matrix{{1, 0, 0, 0}, {0, 1, 0, 0}, {0, 0, 1, 0}, {0, 0, 0, 1}}
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

// settles reports whether dx/dt = −A·x comes to rest: whether all eigenvalues of A
// have a positive real part. The coefficients of the characteristic polynomial
// λ⁴ + c₁λ³ + c₂λ² + c₃λ + c₄ of −A follow by Faddeev and LeVerrier's recursion; all its roots
// lie to the left by the criterion of Routh and Hurwitz (F. R. Gantmacher, The Theory
// of Matrices, chapters IV and XV; from memory).
func (a *matrix) settles() bool {
	var c [5]float64
	for k, m := 1, identity(); k <= 4; k++ {
		m = a.scaledProduct(-1, m)
		for i := range m {
			c[k] -= m[i][i] / float64(k)
		}
		for i := range m {
			m[i][i] += c[k]
		}
	}
	return c[1] > 0 && c[2] > 0 && c[3] > 0 && c[4] > 0 && c[1]*c[2]*c[3] > c[3]*c[3]+c[1]*c[1]*c[4]
}

// scaledProduct returns k·A·B.
func (a *matrix) scaledProduct(k float64, b matrix) (p matrix) {
	for i := range p {
		for j := range p {
			for n := range a {
				p[i][j] += k * a[i][n] * b[n][j]
			}
		}
	}
	return p
}

func (v unknowns) plus(w unknowns) unknowns {
	for i := range v {
		v[i] += w[i]
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
