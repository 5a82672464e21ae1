package proof_test

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"lossbook/budget/magnetic"
	"lossbook/budget/proof"
)

func measured(t *testing.T) (string, proof.CoreLoss) {
	t.Helper()
	text, err := os.ReadFile("../../testdata/measured/coreloss-n87.csv")
	if err != nil {
		t.Fatal(err)
	}
	c, err := proof.MeasureCore(text)
	if err != nil {
		t.Fatal(err)
	}
	return string(text), c
}

// TestCoreLossMeasured states how far the improved generalised Steinmetz equation is
// from loss measured under triangular flux. The bounds hold the error from both sides:
// it must neither grow nor be tuned away.
func TestCoreLossMeasured(t *testing.T) {
	_, c := measured(t)
	bounds := map[float64]struct {
		points         int
		meanLow, means float64
		worst          float64 // of one point, to either side
		why            string
	}{
		0.1: {5, -0.23, -0.18, 0.26, "the equation knows the slope of the flux alone; while it falls slowly or rests, the material goes on relaxing"},
		0.3: {13, -0.07, -0.03, 0.22, "as at 0.5, and a little of what is missed at 0.1"},
		0.5: {13, -0.01, 0.01, 0.18, "one pair of exponents over 63 to 397 kHz and 49 to 277 mT: those of a ferrite rise with both"},
		0.7: {13, -0.07, -0.03, 0.22, "as at 0.3: rise and fall changed about"},
		0.9: {5, -0.23, -0.18, 0.26, "as at 0.1"},
	}
	if len(c.Duties) != len(bounds) {
		t.Fatalf("%d duties, want %d", len(c.Duties), len(bounds))
	}
	for _, d := range c.Duties {
		b := bounds[d.Duty]
		t.Logf("duty %.1f: %2d points, mean %+.1f %%, worst %+.1f %% (%s)", d.Duty, d.Points, 100*d.Mean, 100*d.Worst, b.why)
		if d.Points != b.points || !(d.Mean > b.meanLow && d.Mean < b.means) || !(math.Abs(d.Worst) < b.worst && math.Abs(d.Worst) > b.worst/2) || d.Fitted != (d.Duty == 0.5) {
			t.Errorf("duty %.1f: %+v, want %+v", d.Duty, d, b)
		}
	}
}

// TestCoreLossFit asks that what the fit leaves stands at right angles to what it
// could have used, which least squares does and nothing else.
func TestCoreLossFit(t *testing.T) {
	text, c := measured(t)
	rows, err := csv.NewReader(strings.NewReader(text)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	used, sums := 0, [3]float64{}
	for _, row := range rows[1:] {
		v := func(i int) float64 { x, _ := strconv.ParseFloat(row[i], 64); return x }
		if v(3) < 0.45 || v(3) > 0.55 {
			continue
		}
		core := magnetic.MaterialCore(1, 1, 1, c.K, magnetic.Steinmetz{Alpha: c.Alpha, Beta: c.Beta, CT0: 1}, v(1))
		left := math.Log(core.Loss(2*v(2), 0.5, 0.5, 1) / v(5))
		for i, x := range []float64{1, math.Log(v(1)), math.Log(v(2))} {
			sums[i] += left * x
		}
		used++
	}
	for i, sum := range sums {
		if math.Abs(sum) > 1e-9 {
			t.Errorf("column %d: %g is left", i, sum)
		}
	}
	if used != 13 {
		t.Errorf("%d points at duty ½", used)
	}
}

func TestCoreLossRefused(t *testing.T) {
	text, _ := measured(t)
	for name, wrong := range map[string]string{
		"nothing":           "",
		"a head alone":      "material,frequency_Hz,flux_amplitude_T,duty,temperature_C,loss_W_per_m3\n",
		"another head":      strings.Replace(text, "duty", "share", 1),
		"no number":         strings.Replace(text, "63130", "much", 1),
		"a negative":        strings.Replace(text, "63130", "-63130", 1),
		"another material":  text + "N97,63130,0.04863,0.100,25,20197\n",
		"another warmth":    text + "N87,63130,0.04863,0.100,60,20197\n",
		"a column too much": text + "N87,63130,0.04863,0.100,25,20197,1\n",
		"too few to fit":    strings.ReplaceAll(text, ",0.500,", ",0.400,"),
	} {
		if c, err := proof.MeasureCore([]byte(wrong)); err == nil {
			t.Errorf("%s: read as %+v", name, c)
		}
	}
}
