package web

import (
	"cmp"
	"math"
	"slices"

	"lossbook/budget"
)

// margin is how near a part comes to one of its limits, at the worst of the points.
type margin struct {
	part, what   string
	value, limit float64
	unit         string
	used         float64 // share of the limit; of a temperature the share of the rise it may have
	at           *Point  // nil for what holds over the input range
}

// rating is a limit of a part and what of a point is held against it.
type rating struct {
	part, what, unit string
	path             string // of the entry that states the limit
	value            func(d *budget.Design, q *Point) float64
	heat             string // of a temperature: the entry without which it is the air's alone
}

// ratingsOf are the limits of a design, in the order of its parts.
func ratingsOf(d *budget.Design) []rating {
	re := rectifierOf(d)
	list := []rating{
		{part: "switch", what: "rms current", unit: "A", path: "switch.id_rating", value: func(_ *budget.Design, q *Point) float64 { return q.SwitchRMS }},
		{part: "switch", what: "junction", unit: "°C", path: "switch.tj_max", heat: "switch.theta_ja", value: func(_ *budget.Design, q *Point) float64 { return q.Temperatures.Switch }},
		{part: "rectifier", what: "junction", unit: "°C", path: re + ".tj_max", heat: re + ".theta_ja", value: func(_ *budget.Design, q *Point) float64 { return q.Temperatures.Rectifier }},
		{part: "inductor", what: "peak current to saturation", unit: "A", path: "inductor.i_sat", value: func(_ *budget.Design, q *Point) float64 { return q.InductorCurrent.Max }},
		{part: "inductor", what: "rms current", unit: "A", path: "inductor.i_rms_rating", value: func(_ *budget.Design, q *Point) float64 { return q.InductorCurrent.RMS }},
		{part: "inductor", what: "temperature", unit: "°C", path: "inductor.t_max", heat: "inductor.theta_ja", value: func(_ *budget.Design, q *Point) float64 { return q.Temperatures.Inductor }},
		{part: "input_capacitor", what: "ripple current, rms", unit: "A", path: "input_capacitor.ripple_rating", value: func(_ *budget.Design, q *Point) float64 { return q.InputCapacitorRMS }},
		{part: "input_capacitor", what: "voltage", unit: "V", path: "input_capacitor.voltage_rating", value: func(d *budget.Design, _ *Point) float64 { return d.Input.Max.V }},
		{part: "output_capacitor", what: "ripple current, rms", unit: "A", path: "output_capacitor.ripple_rating", value: func(_ *budget.Design, q *Point) float64 { return q.OutputCapacitorRMS }},
		{part: "output_capacitor", what: "voltage", unit: "V", path: "output_capacitor.voltage_rating", value: func(d *budget.Design, _ *Point) float64 { return d.Output.Voltage.V }},
		{part: "controller", what: "duty", path: "controller.duty_max", value: func(_ *budget.Design, q *Point) float64 { return q.Duty }},
	}
	if re == "sync_switch" {
		return append(list, rating{part: "rectifier", what: "rms current", unit: "A", path: "sync_switch.id_rating", value: func(_ *budget.Design, q *Point) float64 { return q.RectifierRMS }})
	}
	return append(list, rating{part: "rectifier", what: "mean current", unit: "A", path: "diode.i_f_rating", value: func(_ *budget.Design, q *Point) float64 { return q.RectifierMean }})
}

// marginsOf holds the points against every limit stated, the nearest first, and
// names the limits that nothing is stated for.
func marginsOf(d *budget.Design, points []Point) (list []margin, unrated []string) {
	for _, r := range ratingsOf(d) {
		limit, stated := entered(d, r.path)
		if r.heat != "" {
			_, stated = entered(d, r.heat)
			limit = limitOf(d, r.path)
		}
		if !stated {
			unrated = append(unrated, partWords[r.part]+" "+r.what)
			continue
		}
		if m, any := r.worst(d, points, limit); any {
			list = append(list, m)
		}
	}
	list = append(list, blockingMargins(d)...)
	if m, any := onTimeMargin(d, points); any {
		list = append(list, m)
	}
	slices.SortStableFunc(list, func(a, b margin) int { return cmp.Compare(b.used, a.used) })
	return list, unrated
}

// entered returns the number stated at a path, above 0.
func entered(d *budget.Design, path string) (float64, bool) {
	if slot, ok := d.Slot(path, false); ok {
		if n, is := slot.(*budget.Num); is && n.Stated && n.V > 0 {
			return n.V, true
		}
	}
	return 0, false
}

func (r rating) worst(d *budget.Design, points []Point, limit float64) (worst margin, any bool) {
	for i := range points {
		q := &points[i]
		if !q.Settled() {
			continue
		}
		m := margin{part: r.part, what: r.what, value: r.value(d, q), limit: limit, unit: r.unit, at: q}
		if m.used = m.value / limit; r.heat != "" {
			m.used = heatUsed(m.value, limit, q.Ambient)
		}
		if !any || m.used >= worst.used { // the last of equals: the highest input and load come last
			worst, any = m, true
		}
	}
	return worst, any
}

// heatUsed is the share of the rise from ambient to the limit; air as hot as the
// limit leaves none.
func heatUsed(t, limit, ambient float64) float64 {
	if limit <= ambient {
		return math.Inf(1)
	}
	return (t - ambient) / (limit - ambient)
}

// blockingMargins hold what switch and rectifier must block over the input range
// against their ratings.
func blockingMargins(d *budget.Design) (list []margin) {
	size, wrong := budget.Size(d, budget.DefaultRipple)
	if len(wrong) > 0 {
		return nil
	}
	rated := map[string]string{"switch": "switch.vds_rating", "rectifier": "diode.v_rrm"}
	if d.Rectifier == "synchronous" {
		rated["rectifier"] = "sync_switch.vds_rating"
	}
	for _, p := range size.Parts {
		if limit, ok := entered(d, rated[p.Part]); ok {
			list = append(list, margin{part: p.Part, what: "blocking voltage, without ringing", value: p.Blocking, limit: limit, unit: "V", used: p.Blocking / limit})
		}
	}
	return list
}

// onTimeMargin is the shortest time the controller can switch on for, over the
// shortest it has to.
func onTimeMargin(d *budget.Design, points []Point) (worst margin, any bool) {
	least, ok := entered(d, "controller.on_time_min")
	if !ok {
		return margin{}, false
	}
	for i := range points {
		if q := &points[i]; q.Settled() && q.OnTime > 0 && (!any || least/q.OnTime >= worst.used) {
			worst, any = margin{part: "controller", what: "on-time, not below", value: q.OnTime, limit: least, unit: "s", used: least / q.OnTime, at: q}, true
		}
	}
	return worst, any
}
