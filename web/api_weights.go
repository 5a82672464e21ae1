package web

import (
	"net/http"
	"slices"

	"lossbook/budget"
)

// weightsAnswer is the weighted figures of a revision: its means at each input
// voltage that it was kept with, from the kept points, and the day of its load
// profile.
type weightsAnswer struct {
	Model    string            `json:"model"` // of the kept points
	Voltages []weightedVoltage `json:"voltages"`
	Profile  *profileAnswer    `json:"profile,omitempty"`
}

type weightedVoltage struct {
	Vin     float64    `json:"vin"`
	Ambient float64    `json:"ambient"`
	Means   []Weighted `json:"means"`
}

type profileAnswer struct {
	Model string `json:"model"` // that worked out its points now
	Energy
}

func (s *Server) getWeights(w http.ResponseWriter, r *http.Request) error {
	saved, design, err := s.savedDesign(r)
	if err != nil {
		return err
	}
	points, _, err := savedResults(saved)
	if err != nil {
		return err
	}
	answer := weightsAnswer{Model: saved.Model, Voltages: weightedVoltages(points, design.Output.Current.V)}
	energy, _, err := savedEnergy(r.Context(), saved, design)
	if err != nil {
		return err
	}
	if energy != nil {
		answer.Profile = &profileAnswer{budget.ModelVersion, *energy}
	}
	return writeJSON(w, http.StatusOK, answer)
}

func weightedVoltages(points []Point, full float64) []weightedVoltage {
	list := []weightedVoltage{}
	for _, row := range byVoltage(points) {
		list = append(list, weightedVoltage{row[0].Vin, row[0].Ambient, weightedOf(row, full)})
	}
	return list
}

// byVoltage parts points by their input voltage, each in the order they have.
func byVoltage(points []Point) (rows [][]Point) {
	for _, q := range points {
		i := slices.IndexFunc(rows, func(row []Point) bool { return row[0].Vin == q.Vin })
		if i < 0 {
			i, rows = len(rows), append(rows, nil)
		}
		rows[i] = append(rows[i], q)
	}
	return rows
}
