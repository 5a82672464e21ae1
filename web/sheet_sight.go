package web

import (
	"cmp"
	"math"
	"net/http"
	"net/url"
	"slices"
	"strconv"

	"lossbook/budget"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// sight is what of a budget is looked at, as the address says it: input voltage
// and ambient of the ledger, the load of the large figures, the charts' axis, the
// loss whose working is open, the chart that is opened besides the usual ones. What
// is blank is the usual one, or none.
type sight struct {
	vin, ambient, load, scale, working, chart string

	whole bool // asked for as a whole page: what a script would fetch stands on it
}

func sightOf(q url.Values, prefix string) sight {
	return sight{vin: q.Get(prefix + "vin"), ambient: q.Get(prefix + "ambient"), load: q.Get(prefix + "load"), scale: q.Get(prefix + "scale"),
		working: q.Get(prefix + "working"), chart: q.Get(prefix + "chart")}
}

// sightOn is the sight that the address of a page's request names.
func sightOn(r *http.Request) sight {
	g := sightOf(r.URL.Query(), "")
	g.whole = !live(r)
	return g
}

// address returns where the page at base shows this.
func (g sight) address(base string) string {
	q := url.Values{}
	for key, value := range map[string]string{"vin": g.vin, "ambient": g.ambient, "load": g.load, "scale": g.scale, "working": g.working, "chart": g.chart} {
		if value != "" {
			q.Set(key, value)
		}
	}
	if len(q) == 0 {
		return base
	}
	return base + "?" + q.Encode()
}

func (g sight) atVin(vin string) sight      { g.vin = vin; return g }
func (g sight) atLoad(load string) sight    { g.load = load; return g }
func (g sight) scaled(scale string) sight   { g.scale = scale; return g }
func (g sight) opened(working string) sight { g.working = working; return g }
func (g sight) charted(chart string) sight  { g.chart = chart; return g }
func (g sight) hidden() view.Hidden {
	return view.Hidden{Vin: g.vin, Ambient: g.ambient, Load: g.load, Scale: g.scale, Working: g.working, Chart: g.chart}
}

// spot is a sight worked out for a design. An entry of the address that can't
// be used is named, and the usual one stands in for it.
type spot struct {
	sight
	vin, ambient float64
	load         int // index in the load grid
	wrong        map[string]string
}

// lookAt works out what of the design is looked at.
func lookAt(d *budget.Design, g sight) spot {
	s := spot{sight: g, vin: d.Input.Nominal.V, ambient: d.AmbientTemperature(), load: len(budget.LoadGrid()) - 1, wrong: map[string]string{}}
	s.read("vin", g.vin, "V", &s.vin)
	s.read("ambient", g.ambient, "°C", &s.ambient)
	s.readLoad(g.load)
	for _, e := range budget.ValidatePoints([]budget.Point{{Vin: s.vin, Iout: d.Output.Current.V, Ambient: s.ambient}}) {
		s.refuse(d, e)
	}
	return s
}

func (s *spot) read(name, text string, unit quantity.Unit, into *float64) {
	if blank(text) {
		return
	}
	v, err := quantity.Parse(text, unit)
	if err != nil {
		s.wrong[name] = err.Error()
		return
	}
	*into = v
}

func (s *spot) readLoad(text string) {
	if blank(text) {
		return
	}
	for i, part := range budget.LoadGrid() {
		if loadShare(part) == text {
			s.load = i
			return
		}
	}
	s.wrong["load"] = "is not one of the loads of the table"
}

// refuse puts the usual value in the place of one that no point can have.
func (s *spot) refuse(d *budget.Design, e budget.FieldError) {
	switch e.Path {
	case "points[0].vin":
		s.vin, s.wrong["vin"] = d.Input.Nominal.V, e.Message
	case "points[0].ambient":
		s.ambient, s.wrong["ambient"] = d.AmbientTemperature(), e.Message
	}
}

// voltage is an input voltage as a line of a chart: how it is drawn says which
// of the range it is.
type voltage struct {
	vin  float64
	dash int
}

// voltages are the lowest, nominal and highest input, each once, and the one
// looked at if it is another.
func voltages(d *budget.Design, vin float64) []voltage {
	var list []voltage
	for _, v := range []voltage{{d.Input.Nominal.V, 0}, {d.Input.Min.V, 2}, {d.Input.Max.V, 1}, {vin, 3}} {
		if !slices.ContainsFunc(list, func(have voltage) bool { return have.vin == v.vin }) {
			list = append(list, v)
		}
	}
	slices.SortFunc(list, func(a, b voltage) int { return cmp.Compare(a.vin, b.vin) })
	return list
}

// loads are the shares of full load at which the efficiency is drawn: evenly
// set on a logarithmic axis, and those of the table.
var loads = drawnLoads()

const linePoints = 60

func drawnLoads() []float64 {
	grid := budget.LoadGrid()
	low, high := grid[0], grid[len(grid)-1]
	list := append([]float64{}, grid...)
	for i := 1; i < linePoints; i++ {
		list = append(list, low*math.Pow(high/low, float64(i)/linePoints))
	}
	slices.Sort(list)
	return list
}

// views draws the choice of what is looked at.
func (s spot) views(d *budget.Design, base string, typed bool, vins []voltage) view.Views {
	v := view.Views{Href: base, Typed: typed, Scale: s.scale, Working: s.working, Chart: s.chart, At: s.words(d)}
	for _, l := range vins {
		text := quantity.Format(l.vin, "V")
		v.Vins = append(v.Vins, view.Link{Text: text, Href: s.atVin(text).address(base), Here: l.vin == s.vin})
	}
	v.Vin = view.Field{Name: "vin", Key: "view.vin", Label: "Input", Symbol: symbolOf("V_in"), Numeric: true, Error: s.wrong["vin"],
		Value: s.sight.vin, Assumed: quantity.Format(d.Input.Nominal.V, "V")}
	v.Ambient = view.Field{Name: "ambient", Key: "view.ambient", Label: "Ambient", Symbol: symbolOf("T_a"), Numeric: true, Error: s.wrong["ambient"],
		Value: s.sight.ambient, Assumed: quantity.Format(d.AmbientTemperature(), "°C")}
	v.Load = view.Field{Name: "load", Key: "view.load", Label: "Load", Symbol: symbolOf("I_out"), Error: s.wrong["load"]}
	for i, part := range budget.LoadGrid() {
		v.Load.Options = append(v.Load.Options, view.Option{Value: loadShare(part), Label: loadShare(part) + " %", Chosen: i == s.load})
	}
	return v
}

// words name the point of the large figures.
func (s spot) words(d *budget.Design) string {
	part := budget.LoadGrid()[s.load]
	return quantityOf(s.vin, "V", 4) + " in, " + quantityOf(part*d.Output.Current.V, "A", 3) + " (" + loadShare(part) + " %), " +
		degreesCelsius(s.ambient)
}

func degreesCelsius(t float64) string {
	return strconv.FormatFloat(math.Round(t*10)/10, 'f', -1, 64) + " °C"
}
