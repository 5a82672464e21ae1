package assets

// Map is the data of a <loss-chart> of the kind "map": a figure over load and input
// voltage. chart-map.js says how it is drawn. Its points lie in rows from the lowest
// voltage, in each from the lowest load, and are numbered in that order.
type Map struct {
	Title     string      `json:"title"`
	X         Axis        `json:"x"`
	Y         Axis        `json:"y"`
	Value     Axis        `json:"value"`
	Loss      Axis        `json:"loss"`
	Loads     []float64   `json:"loads"` // of the columns, in the unit of X
	Vins      []float64   `json:"vins"`  // of the rows, in the unit of Y
	Even      bool        `json:"even"`  // the loads lie in equal steps, not in equal ratios
	Values    []*float64  `json:"values"`
	Losses    []*float64  `json:"losses"` // both null where a point has no figure
	Outside   []Run       `json:"outside"`
	Unsettled []MapArea   `json:"unsettled"`
	Limits    []MapArea   `json:"limits"`
	Here      *[2]float64 `json:"here,omitempty"` // load and voltage of the point that is looked at
}

// MapArea is where something holds: Level is "exceeded" or "caution" of a limit,
// "out_of_reach" or "runaway" of points without a figure.
type MapArea struct {
	Name  string `json:"name"`
	Level string `json:"level"`
	Runs  []Run  `json:"runs"`
}

// Run is so many points from a first one on.
type Run [2]int

// RunsOf lists the points of n for which something holds.
func RunsOf(n int, holds func(i int) bool) []Run {
	runs := []Run{}
	for i := 0; i < n; i++ {
		if !holds(i) {
			continue
		}
		if last := len(runs) - 1; last >= 0 && runs[last][0]+runs[last][1] == i {
			runs[last][1]++
		} else {
			runs = append(runs, Run{i, 1})
		}
	}
	return runs
}
