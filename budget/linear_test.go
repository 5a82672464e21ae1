package budget

import (
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// TestSettles holds the criterion against the eigenvalues of random matrices.
func TestSettles(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	settled := 0
	for range 20000 {
		var a matrix
		dense := mat.NewDense(4, 4, nil)
		for i := range a {
			for j := range a {
				a[i][j] = r.NormFloat64()
			}
			a[i][i] += 1.5
			dense.SetRow(i, a[i][:])
		}
		var e mat.Eigen
		if !e.Factorize(dense, mat.EigenNone) {
			t.Fatal("no eigenvalues")
		}
		want := true
		for _, v := range e.Values(nil) {
			want = want && real(v) > 0
		}
		if a.settles() != want {
			t.Errorf("%v with the eigenvalues %v: %v", a, e.Values(nil), a.settles())
		}
		if want {
			settled++
		}
	}
	if settled < 5000 || settled > 15000 {
		t.Errorf("%d of 20000 settle: too one-sided", settled)
	}
}
