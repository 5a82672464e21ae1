package web

import (
	"encoding/json"
	"math"
	"slices"

	"lossbook/assets"
	"lossbook/budget"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// waves draws the currents at the point looked at, and the voltage of the switch.
func (p *picture) waves() (*view.Waves, error) {
	q := p.chosen()
	switch {
	case q == nil:
		return &view.Waves{Reason: "it was not kept"}, nil
	case !q.Settled():
		return &view.Waves{Reason: q.Reason}, nil
	}
	w, fit := budget.Waveforms(p.design, budgetOf(q))
	if !fit {
		return &view.Waves{Reason: "the figures kept here are not those of the waveforms that this version draws"}, nil
	}
	s := scopeOf(w)
	data := assets.Waves{Title: "Waveforms at " + p.spot.words(p.design), Period: s.time(w.Period),
		X: assets.Axis{Label: "time, " + s.times.Unit, Unit: s.times.Unit}, Y: assets.Axis{Label: "currents and switch voltage"},
		Intervals: s.intervals()}
	for _, f := range w.List {
		data.Rows = append(data.Rows, s.row(f))
	}
	text, err := json.Marshal(data)
	v := &view.Waves{Intervals: s.told(),
		Chart: view.Chart{ID: "chart-waves", Kind: "waves", Title: "Waveforms", Data: string(text), Caption: conductionWords(q) + " at " + p.spot.words(p.design)}}
	v.Chart.Heads, v.Chart.Rows = s.table()
	return v, err
}

func conductionWords(q *Point) string {
	switch {
	case q.Mode == budget.DCM.String():
		return "discontinuous conduction"
	case q.InductorCurrent.Min < 0:
		return "continuous conduction, flowing back in part of the period,"
	}
	return "continuous conduction"
}

// budgetOf is the part of a budget that its waveforms follow from.
func budgetOf(q *Point) *budget.Budget {
	b := &budget.Budget{
		Point: budget.Point{Vin: q.Vin, Iout: q.Iout, Ambient: q.Ambient}, Vout: q.Vout, Duty: q.Duty, OnTime: q.OnTime,
		Inductor: budget.Current(q.InductorCurrent), SwitchRMS: q.SwitchRMS, RectifierRMS: q.RectifierRMS, RectifierMean: q.RectifierMean,
		InputCapRMS: q.InputCapacitorRMS, OutputCapRMS: q.OutputCapacitorRMS,
	}
	if q.Mode == budget.DCM.String() {
		b.Mode = budget.DCM
	}
	return b
}

// waveWords name a waveform: as a title, and where its value is read.
var waveWords = map[string]struct{ title, short string }{
	"inductor current":         {"Inductor current", "inductor"},
	"switch current":           {"Switch current", "switch"},
	"rectifier current":        {"Rectifier current", "rectifier"},
	"input_capacitor current":  {"Input capacitor’s current", "input capacitor"},
	"output_capacitor current": {"Output capacitor’s current", "output capacitor"},
	"switch voltage":           {"Switch voltage", "across the switch"},
}

// scope is waveforms with the units they are drawn in: one for all times, one for all
// currents, one for the voltage.
type scope struct {
	budget.Waves
	times, currents, volts quantity.Scale
}

func scopeOf(w budget.Waves) scope {
	s := scope{Waves: w, times: quantity.ScaleFor(w.Period, "s")}
	most := map[string]float64{}
	for _, f := range w.List {
		most[f.Quantity] = max(most[f.Quantity], math.Abs(f.Peak))
	}
	s.currents, s.volts = quantity.ScaleFor(most["current"], "A"), quantity.ScaleFor(most["voltage"], "V")
	return s
}

// time is a time as the chart reads it, no finer than a pixel can show.
func (s scope) time(t float64) float64 { return round(t/s.times.Factor, 7) }

func (s scope) scale(f budget.Waveform) quantity.Scale {
	if f.Quantity == "voltage" {
		return s.volts
	}
	return s.currents
}

// edges are the times at which one interval ends and the next begins; every waveform
// has a breakpoint there.
func (s scope) edges() (times []float64) {
	for _, p := range s.List[0].Points {
		if n := len(times); n == 0 || times[n-1] != p.Time {
			times = append(times, p.Time)
		}
	}
	return times
}

// intervalNames are those that last; the edges lie between them.
func (s scope) intervalNames() (names []string) {
	for i, lasts := range []float64{s.T1, s.T2, s.T3} {
		if lasts > 0 {
			names = append(names, [...]string{"t1", "t2", "t3"}[i])
		}
	}
	return names
}

func (s scope) told() string {
	what := map[string]string{"t1": "the switch conducts", "t2": "the rectifier conducts", "t3": "no inductor current flows"}
	text := "Two periods of " + quantityOf(s.Period, "s", 4)
	for i, name := range s.intervalNames() {
		text += [...]string{"; ", ", ", ", "}[i] + name + ": " + what[name]
	}
	return text + "."
}

func (s scope) intervals() (list []assets.Interval) {
	edges := s.edges()
	for i, name := range s.intervalNames() {
		list = append(list, assets.Interval{Name: name, From: s.time(edges[i]), To: s.time(edges[i+1])})
	}
	return list
}

func (s scope) row(f budget.Waveform) assets.Wave {
	scale, words := s.scale(f), waveWords[f.Part+" "+f.Quantity]
	w := assets.Wave{Name: words.title + ", " + scale.Unit, Short: words.short, Class: classOf(f.Part), Unit: scale.Unit}
	for _, p := range f.Points {
		w.Points = append(w.Points, [2]float64{s.time(p.Time), round(p.Value/scale.Factor, 6)})
	}
	level := func(name string, v float64, dash int) {
		w.Levels = append(w.Levels, assets.Level{Name: name, Text: s.write(f, v), Value: round(v/scale.Factor, 6), Dash: dash})
	}
	level("peak", f.Peak, 2)
	level("rms", f.RMS, 1)
	level("mean", f.Mean, 0)
	if f.Part == "inductor" {
		level("valley", valley(f), 2)
	}
	return w
}

func valley(f budget.Waveform) float64 {
	return slices.MinFunc(f.Points, func(a, b budget.Breakpoint) int {
		if a.Value < b.Value {
			return -1
		}
		return 1
	}).Value
}

// write writes a value of a waveform with as many decimals as give its peak four
// digits.
func (s scope) write(f budget.Waveform, v float64) string {
	if v == 0 || f.Peak == 0 {
		return "0"
	}
	scale := s.scale(f)
	places := 3 - int(math.Floor(math.Log10(math.Abs(f.Peak)/scale.Factor)))
	return decimals(v/scale.Factor, max(0, min(places, 9)))
}

// table holds where each waveform bends: what it is as an interval begins and as it
// ends; and its figures.
func (s scope) table() (heads []string, rows []view.Line) {
	heads = []string{"Time, " + s.times.Unit}
	for _, f := range s.List {
		heads = append(heads, waveWords[f.Part+" "+f.Quantity].title+", "+s.scale(f).Unit)
	}
	edges := s.edges()
	for i, name := range s.intervalNames() {
		begins := view.Line{Head: s.clock(edges[i]) + ", " + name + " begins"}
		ends := view.Line{Head: s.clock(edges[i+1]) + ", " + name + " ends"}
		for _, f := range s.List {
			begins.Cells = append(begins.Cells, s.write(f, f.Points[lastAt(f, edges[i])].Value))
			ends.Cells = append(ends.Cells, s.write(f, f.Points[firstAt(f, edges[i+1])].Value))
		}
		rows = append(rows, begins, ends)
	}
	peak, rms, mean := view.Line{Head: "peak"}, view.Line{Head: "rms"}, view.Line{Head: "mean"}
	for _, f := range s.List {
		peak.Cells, rms.Cells, mean.Cells = append(peak.Cells, s.write(f, f.Peak)), append(rms.Cells, s.write(f, f.RMS)), append(mean.Cells, s.write(f, f.Mean))
	}
	return heads, append(rows, peak, rms, mean)
}

func (s scope) clock(t float64) string { return s.times.Number(t, 4) }

func firstAt(f budget.Waveform, time float64) int {
	return slices.IndexFunc(f.Points, func(p budget.Breakpoint) bool { return p.Time == time })
}

func lastAt(f budget.Waveform, time float64) int {
	i := firstAt(f, time)
	for i+1 < len(f.Points) && f.Points[i+1].Time == time {
		i++
	}
	return i
}
