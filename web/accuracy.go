package web

import (
	"encoding/json"
	"fmt"
	"io/fs"
	"math"
	"strings"

	"lossbook/budget/proof"
)

// evidence is what there is to show of how far the figures are right. It holds
// nothing that changes while the program runs.
type evidence struct {
	file    proof.File
	results []proof.Result
	core    proof.CoreLoss
	cases   agreement
	bounds  []bound
}

// agreement is how far the figures agree with those of a separate implementation.
type agreement struct {
	Files   int     `json:"files"`
	Figures int     `json:"figures"`
	Worst   float64 `json:"worst"` // share of a figure
}

// bound is how far a quantity is from the exact periodic solution of the stage, over
// the random stages of one topology, mode and domain.
type bound struct {
	Quantity string  `json:"quantity"`
	Topology string  `json:"topology"`
	Mode     string  `json:"mode"`
	Domain   string  `json:"domain"` // in words
	N        int     `json:"n"`      // stages
	Median   float64 `json:"median"` // share of the quantity; of efficiency the difference
	Worst    float64 `json:"worst"`  // likewise
}

// The files of the evidence, below the folder that it is read from.
const (
	checksFile = "published/checks.json"
	casesFile  = "published/agreement.json"
	coreFile   = "measured/coreloss-n87.csv"
	boundsFile = "exact/bounds.json"
)

// gather reads the evidence and asks the model for every figure of it.
func gather(data fs.FS) (*evidence, error) {
	e := new(evidence)
	text, err := fs.ReadFile(data, checksFile)
	if err != nil {
		return nil, err
	}
	if e.file, err = proof.ReadFile(text); err != nil {
		return nil, fmt.Errorf("%s: %w", checksFile, err)
	}
	if e.results, err = proof.Run(e.file, map[int]proof.Runner{weightsCheck: proveWeights}); err != nil {
		return nil, err
	}
	if text, err = fs.ReadFile(data, coreFile); err != nil {
		return nil, err
	}
	if e.core, err = proof.MeasureCore(text); err != nil {
		return nil, err
	}
	if err := readEvidence(data, casesFile, &e.cases); err != nil {
		return nil, err
	}
	return e, readEvidence(data, boundsFile, &e.bounds)
}

func readEvidence(data fs.FS, name string, value any) error {
	text, err := fs.ReadFile(data, name)
	if err != nil {
		return err
	}
	if err := json.Unmarshal(text, value); err != nil {
		return fmt.Errorf("%s: %w", name, err)
	}
	return nil
}

// weightsCheck is the check that is about the weights of loads.
const weightsCheck = 26

// weightsCalled is how the check's figures begin, by weighting.
var weightsCalled = map[string]string{"mean_active": "mean active at ", "european": "European at ", "cec": "CEC at "}

// proveWeights looks every weight up that the check asks for; one that is not in the
// table is no number.
func proveWeights(t *proof.Trial) {
	t.Each(func(figure string, in func(string) float64) float64 {
		load := in("load")
		for _, w := range weightings {
			for _, l := range w.Weights {
				if strings.HasPrefix(figure, weightsCalled[w.Key]) && math.Abs(l.Load-load) < 1e-9 {
					return l.Weight
				}
			}
		}
		return math.NaN()
	})
}
