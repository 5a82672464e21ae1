package web

import (
	"math"
	"testing"

	"lossbook/budget"
	"lossbook/web/quantity"
)

func TestLedgerFigures(t *testing.T) {
	mW, W := watts{"mW", 1e3, 2}, watts{"W", 1, 3}
	for _, c := range []struct {
		unit  watts
		power float64
		want  string
	}{
		{mW, 0, "·"}, {mW, 0.0006, "0.60"}, {mW, 0.0017, "1.70"}, {mW, 0.0622, "62.2"}, {mW, 0.1234, "123"}, {mW, 2.3094, "2\u202f309"},
		{mW, 0.0000049, "< 0.01"}, {mW, 0.000005, "0.01"}, {mW, 0.00099949, "1.00"}, {mW, 0.0099949, "9.99"}, {mW, 0.009995, "10.0"},
		{mW, 0.09994, "99.9"}, {mW, 0.09995, "100"}, {mW, -0.0017, "−1.70"},
		{W, 12.345, "12.3"}, {W, 123.45, "123"}, {W, 0.0123, "0.012"}, {W, 0.0004, "< 0.001"}, {W, 1234.5, "1\u202f234"},
	} {
		if got := c.unit.write(c.power); got != c.want {
			t.Errorf("%v W in %s: %q, want %q", c.power, c.unit.unit, got, c.want)
		}
	}
	small, large := settledAt(9.99), settledAt(10)
	if wattsFor([]Point{small}).unit != "mW" || wattsFor([]Point{small, large, {}}).unit != "W" || wattsFor(nil).unit != "mW" {
		t.Error("the unit is not chosen by the largest total")
	}
}

func settledAt(loss float64) Point { return Point{Figures: &Figures{Loss: loss}} }

func TestDecimals(t *testing.T) {
	for _, c := range []struct {
		v    float64
		n    int
		want string
	}{
		{0, 2, "0.00"}, {math.Copysign(0, -1), 2, "0.00"}, {-0.001, 2, "0.00"}, {-1.5, 1, "−1.5"}, {1234567.5, 1, "1\u202f234\u202f567.5"},
		{999, 0, "999"}, {1000, 0, "1\u202f000"}, {math.NaN(), 2, quantity.NoFigure}, {math.Inf(1), 0, quantity.NoFigure},
	} {
		if got := decimals(c.v, c.n); got != c.want {
			t.Errorf("%v with %d: %q, want %q", c.v, c.n, got, c.want)
		}
	}
}

func TestSigned(t *testing.T) {
	points := func(v float64) string { return decimals(v, 2) }
	for v, want := range map[float64]string{0.11: "+0.11", -0.15: "−0.15", 0.001: "±0.00", -0.001: "±0.00"} {
		if got := signed(v, points); got != want {
			t.Errorf("%v: %q, want %q", v, got, want)
		}
	}
	milliwatts := func(v float64) string { return quantity.Show(v, "W", 2) }
	if got := signed(-0.058, milliwatts); got != "−58 mW" {
		t.Errorf("%q", got)
	}
	if got := signed(0, milliwatts); got != "±0 W" {
		t.Errorf("%q", got)
	}
}

func TestQuantityOf(t *testing.T) {
	for want, got := range map[string]string{
		"12\u00a0V": quantityOf(12, "V", 4), "14.4\u00a0V": quantityOf(14.4, "V", 4), "266\u00a0mA": quantityOf(0.26612, "A", 3),
		"333.3\u00a0V": quantityOf(333.33333, "V", 4),
	} {
		if got != want {
			t.Errorf("%q, want %q", got, want)
		}
	}
}

func TestShade(t *testing.T) {
	for _, c := range []struct {
		power, loss float64
		want        string
	}{{0, 1, "s0"}, {0.04, 1, "s0"}, {0.05, 1, "s1"}, {0.54, 1, "s5"}, {1, 1, "s10"}, {2, 1, "s10"}, {1, 0, "s0"}, {-1, 1, "s0"}} {
		if got := shade(c.power, c.loss); got != c.want {
			t.Errorf("%v of %v: %s, want %s", c.power, c.loss, got, c.want)
		}
	}
}

func TestUnderstood(t *testing.T) {
	ohms, _ := budget.FieldAt("switch.rds_on")
	slope, _ := budget.FieldAt("switch.q_rr_didt")
	plain, _ := budget.FieldAt("switch.softness")
	for _, c := range []struct {
		f                budget.Field
		text, read       string
		wantRead, wantIn string
	}{
		{ohms, "", "", "", "Ω"}, {ohms, "11 m", "11 mΩ", "", "Ω"}, {ohms, "11 mΩ", "11 mΩ", "", ""}, {ohms, "0.011", "11 mΩ", "= 11 mΩ", "Ω"},
		{ohms, "11m5", "11.5 mΩ", "= 11.5 mΩ", "Ω"}, {ohms, "x", "", "", "Ω"}, {ohms, "11 m\u00a0Ω", "11 mΩ", "", ""},
		{slope, "100 A/µs", "100 A/µs", "", ""}, {slope, "1e8", "100 A/µs", "= 100 A/µs", "A/s"}, {plain, "0.5", "0.5", "", ""},
	} {
		if got := understood(c.f, c.text, c.read); got != c.wantRead {
			t.Errorf("%q: understood %q, want %q", c.text, got, c.wantRead)
		}
		if got := unitBeside(c.f, c.text, c.read); got != c.wantIn {
			t.Errorf("%q: unit %q, want %q", c.text, got, c.wantIn)
		}
	}
}

func TestLabels(t *testing.T) {
	for path, want := range map[string]string{
		"frequency": "Switching frequency", "switch.q_gd": "Switch: Miller charge", "series_resistances[1].resistance": "Copper and shunts: Resistance, row 2",
		"inductor.core.k": "Core: Steinmetz k", "sources.switch.rds_on": "Source of Switch: On-resistance", rippleRatio: "Ripple ratio wanted", "nobody": "nobody",
	} {
		if got := labelOf(path); got != want {
			t.Errorf("%s: %q, want %q", path, got, want)
		}
	}
}

// Two ways to write the same value are no change; a curve is one change.
func TestChanges(t *testing.T) {
	d := sample(t, "frost")
	was := draftOf(d)
	now := draftOf(d)
	if got := changes(was, now, nil); len(got) != 0 {
		t.Errorf("nothing changed: %+v", got)
	}
	same := Draft{}
	for path, text := range was {
		same[path] = text
	}
	same["switch.rds_on"] = "0.011"
	read, _ := same.design()
	if got := changes(was, draftOf(read), nil); len(got) != 0 {
		t.Errorf("11 mΩ is 0.011: %+v", got)
	}
	now["switch.rds_on"], now["rectifier"] = "8.5 mΩ", "synchronous"
	now["sources.switch.rds_on"], now["inductor.ac_curve[0][1]"] = "p. 3", "1.1"
	delete(now, "ambient")
	got := changes(was, now, nil)
	want := [][3]string{{"#f-rectifier", "diode", "synchronous MOSFET"}, {"#f-ambient", "45 °C", "not given"}, {"#f-switch.rds_on", "11 mΩ", "8.5 mΩ"},
		{"#f-sources.switch.rds_on", "not given", "p. 3"}, {"#f-inductor.ac_curve", "5 rows", "5 rows, other values"}}
	if len(got) != len(want) {
		t.Fatalf("%d changes: %+v", len(got), got)
	}
	for i, w := range want {
		if got[i].Href != w[0] || got[i].From != w[1] || got[i].To != w[2] {
			t.Errorf("%d: %+v, want %v", i, got[i], w)
		}
	}
}

func TestVoltages(t *testing.T) {
	d := sample(t, "frost")
	list := voltages(d, 13)
	want := []voltage{{10.5, 2}, {12, 0}, {13, 3}, {14.4, 1}}
	if len(list) != len(want) {
		t.Fatalf("%+v", list)
	}
	for i := range want {
		if list[i] != want[i] {
			t.Errorf("%+v, want %+v", list, want)
		}
	}
	d.Input.Min, d.Input.Max = d.Input.Nominal, d.Input.Nominal
	if list := voltages(d, d.Input.Nominal.V); len(list) != 1 || list[0].dash != 0 {
		t.Errorf("one voltage: %+v", list)
	}
}

// The part named is the one that comes nearest to its own limit.
func TestHottest(t *testing.T) {
	d := sample(t, "frost") // 150, 150 and 125 °C
	p := picture{design: d}
	for want, temperatures := range map[string]Temperatures{
		"nearest its limit: inductor, 25 K below": {Switch: 110, Rectifier: 90, Inductor: 100},
		"nearest its limit: switch, 10 K below":   {Switch: 140, Rectifier: 90, Inductor: 100},
		"over its limit: rectifier, 12 K above":   {Switch: 140, Rectifier: 162, Inductor: 100},
	} {
		if got, _ := p.hottest(temperatures); got != want {
			t.Errorf("%+v: %q, want %q", temperatures, got, want)
		}
	}
}

// Losses of a picture add up: the shown parts are those of the points.
func TestPictureAddsUp(t *testing.T) {
	for name, d := range everyDesign(t) {
		p, err := paint(t.Context(), d, sight{})
		if err != nil {
			t.Fatal(err)
		}
		for _, q := range p.columns {
			if !q.Settled() {
				continue
			}
			column, _ := p.stackColumn(q, watts{"W", 1, 3})
			sum := 0.0
			for _, v := range column.Values {
				sum += v
			}
			if math.Abs(sum-q.Loss) > 1e-4*q.Loss {
				t.Errorf("%s: the parts at %v A add up to %v W of %v W", name, q.Iout, sum, q.Loss)
			}
		}
		if len(p.lines[0].points) != len(loads) || len(loads) < 60 {
			t.Errorf("%s: %d points a line", name, len(p.lines[0].points))
		}
	}
}
