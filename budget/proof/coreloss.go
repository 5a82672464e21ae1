package proof

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"

	"gonum.org/v1/gonum/mat"

	"lossbook/budget/magnetic"
)

// CoreLoss is how far the model of a core is from measured loss under triangular
// flux.
type CoreLoss struct {
	Material       string
	Temperature    float64 // °C
	K, Alpha, Beta float64 // of Steinmetz's equation in W/m³, Hz and T, fitted at duty ½; exponents as ratio
	Duties         []DutyError
}

// DutyError is the model's error at one duty of the triangle.
type DutyError struct {
	Duty   float64 // share of the period in which the flux rises, to one digit
	Points int
	Fitted bool    // these points gave the exponents
	Mean   float64 // mean of model over measured less 1, as a share
	Worst  float64 // the share at the point farthest off
	Low    float64 // Hz, the lowest frequency among the points
	High   float64 // Hz, the highest
}

// sample is one measured point, in the units of CoreLoss.
type sample struct{ f, amplitude, duty, loss float64 }

const even = 0.5 // the duty at which a triangle is fitted

// MeasureCore reads measured points, fits Steinmetz's equation to those at duty ½ by
// least squares of the logarithms, and asks the model for all.
func MeasureCore(text []byte) (CoreLoss, error) {
	c, points, err := readCore(text)
	if err != nil {
		return c, err
	}
	if err := c.fit(points); err != nil {
		return c, err
	}
	groups := map[float64][]sample{}
	for _, p := range points {
		groups[p.nominal()] = append(groups[p.nominal()], p)
	}
	for duty, group := range groups {
		c.Duties = append(c.Duties, c.miss(duty, group))
	}
	slices.SortFunc(c.Duties, func(a, b DutyError) int { return int(math.Copysign(1, a.Duty-b.Duty)) })
	return c, nil
}

// nominal is the duty that a point was meant to have.
func (p sample) nominal() float64 { return math.Round(p.duty*10) / 10 }

var coreHead = []string{"material", "frequency_Hz", "flux_amplitude_T", "duty", "temperature_C", "loss_W_per_m3"}

func readCore(text []byte) (c CoreLoss, points []sample, err error) {
	rows, err := csv.NewReader(bytes.NewReader(text)).ReadAll()
	if err != nil {
		return c, nil, err
	}
	if len(rows) < 2 || !slices.Equal(rows[0], coreHead) {
		return c, nil, fmt.Errorf("measured core loss: want the columns %v and points", coreHead)
	}
	for i, row := range rows[1:] {
		var v [5]float64
		for j := range v {
			v[j], err = strconv.ParseFloat(row[j+1], 64)
			if err != nil || !(v[j] > 0) {
				return c, nil, fmt.Errorf("measured core loss, row %d: %q in %s", i+2, row[j+1], coreHead[j+1])
			}
		}
		if i > 0 && (row[0] != c.Material || v[3] != c.Temperature) {
			return c, nil, fmt.Errorf("measured core loss, row %d: another material or temperature", i+2)
		}
		c.Material, c.Temperature = row[0], v[3]
		points = append(points, sample{v[0], v[1], v[2], v[4]})
	}
	return c, points, nil
}

// fit finds ln k', α and β of ln P = ln k' + α·ln f + β·ln B over the points at duty
// ½, and takes k' of the triangle back to k of a sine.
func (c *CoreLoss) fit(points []sample) error {
	var rows, losses []float64
	for _, p := range points {
		if p.nominal() == even {
			rows = append(rows, 1, math.Log(p.f), math.Log(p.amplitude))
			losses = append(losses, math.Log(p.loss))
		}
	}
	if len(losses) < 4 {
		return errors.New("measured core loss: too few points at duty ½ to fit")
	}
	var x mat.VecDense
	if err := x.SolveVec(mat.NewDense(len(losses), 3, rows), mat.NewVecDense(len(losses), losses)); err != nil {
		return fmt.Errorf("measured core loss: %w", err)
	}
	c.Alpha, c.Beta = x.AtVec(1), x.AtVec(2)
	c.K = math.Exp(x.AtVec(0)) / triangleShare(c.Alpha, c.Beta, even)
	return nil
}

// model returns the loss density in W/m³ that the model gives for a point.
func (c *CoreLoss) model(p sample) float64 {
	core := magnetic.MaterialCore(1, 1, 1, c.K, magnetic.Steinmetz{Alpha: c.Alpha, Beta: c.Beta, CT0: 1}, p.f)
	return core.Loss(2*p.amplitude, p.duty, 1-p.duty, 1)
}

func (c *CoreLoss) miss(duty float64, group []sample) DutyError {
	e := DutyError{Duty: duty, Points: len(group), Fitted: duty == even, Low: math.Inf(1)}
	for _, p := range group {
		off := c.model(p)/p.loss - 1
		e.Mean += off / float64(len(group))
		if math.Abs(off) > math.Abs(e.Worst) {
			e.Worst = off
		}
		e.Low, e.High = math.Min(e.Low, p.f), math.Max(e.High, p.f)
	}
	return e
}
