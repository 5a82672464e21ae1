package budget

import (
	"encoding/json"
	"math"
	"slices"
	"strings"
	"testing"
)

// review draws up the points and returns the design's findings of one rule.
func review(t *testing.T, d *Design, rule string, points ...Point) (list []Finding) {
	t.Helper()
	m, err := Prepare(d)
	if err != nil {
		t.Fatal(err)
	}
	budgets := make([]Budget, len(points))
	for i, p := range points {
		m.At(p, &budgets[i])
	}
	for _, f := range m.Review(budgets) {
		if f.Rule == rule {
			list = append(list, f)
		}
	}
	return list
}

func TestNotStated(t *testing.T) {
	for path, c := range map[string]struct{ part, words string }{
		"switch.theta_ja": {"switch", "thermal resistance"}, "switch.q_oss": {"switch", "output charge"},
		"sync_switch.theta_ja": {"rectifier", "thermal resistance"}, "sync_switch.q_oss": {"rectifier", "output charge"}, "sync_switch.q_rr": {"rectifier", "recovery"},
		"diode.theta_ja": {"rectifier", "thermal resistance"}, "diode.c_j": {"rectifier", "charge"}, "diode.q_rr": {"rectifier", "recovery"}, "diode.i_leak": {"rectifier", "leakage"},
		"inductor.theta_ja": {"inductor", "thermal resistance"}, "input_capacitor.esr": {"input_capacitor", "resistance"}, "output_capacitor.esr": {"output_capacitor", "resistance"},
	} {
		build := full
		if ofDiode(path) {
			build = quietDiode
		}
		bare := func(d *Design) {
			d.Switch.EOSS, d.SyncSwitch.EOSS = Num{}, Num{}
		}
		d := build()
		all(bare, unset(path))(d)
		list := review(t, d, "not_stated", easy)
		expect(t, "without "+path, list, Note)
		if len(list) == 1 && (list[0].Part != c.part || !strings.Contains(list[0].Message, c.words)) {
			t.Errorf("without %s: %+v", path, list[0])
		}
		all(bare, set(path, 0))(d)
		expect(t, path+" stated as 0", review(t, d, "not_stated", easy), "")
	}
	d := full()
	d.Inductor.Core, d.Inductor.Winding, d.Inductor.ACCurve, d.InputCapacitor = nil, nil, nil, nil
	list := review(t, d, "not_stated", easy)
	if len(list) != 2 || !strings.Contains(list[0].Message, "core loss and ac resistance are not stated") || list[1].Part != "input_capacitor" {
		t.Errorf("core, winding and a capacitor absent: %+v", list)
	}
	d = full()
	d.Switch.QOSS, d.Switch.EOSS, d.Switch.COSS, d.Switch.COSSAt = Num{}, Num{}, N(1e-10), N(25)
	expect(t, "a capacitance states the charge", review(t, d, "not_stated", easy), "")
}

// TestRipple finds by halving the inductance at which the note begins and asks that
// the ripple there is the bound.
func TestRipple(t *testing.T) {
	for _, c := range []struct{ least, most, bound float64 }{{5e-6, 15e-6, 0.4}, {15e-6, 60e-6, 0.2}} {
		noted := func(l float64) bool {
			d := quiet()
			d.Inductor.Inductance = N(l)
			return len(review(t, d, "ripple")) == 1
		}
		if noted(c.least) == noted(c.most) {
			t.Fatalf("no bound between %g and %g H", c.least, c.most)
		}
		low, high := c.least, c.most
		for range 30 {
			if mid := (low + high) / 2; noted(mid) == noted(c.least) {
				low = mid
			} else {
				high = mid
			}
		}
		d := quiet()
		d.Inductor.Inductance = N(low)
		_, b := solved(t, d, easy)
		if ratio := (b.Inductor.Max - b.Inductor.Min) / b.Inductor.Mean; math.Abs(ratio-c.bound) > 1e-6 {
			t.Errorf("the note begins at a ripple of %g, want %g", ratio, c.bound)
		}
	}
	d := quiet()
	d.Inductor.Inductance = N(5e-6)
	if list := review(t, d, "ripple"); *list[0].At != (Point{48, 8, 25}) || list[0].Limit != 0.4 {
		t.Errorf("%+v is not at full load and nominal input", list[0])
	}
}

// TestDiscontinuousNote asks for the load at which the valley touches zero: half the ripple.
func TestDiscontinuousNote(t *testing.T) {
	d := quietDiode()
	list := review(t, d, "discontinuous")
	expect(t, "diode", list, Note)
	load := list[0].Value * 8
	_, b := solved(t, d, Point{48, load * 1.02, 25})
	_, below := solved(t, d, Point{48, load * 0.98, 25})
	if b.Mode != CCM || below.Mode != DCM || math.Abs((b.Inductor.Max-b.Inductor.Min)/2-load) > 0.02*load {
		t.Errorf("said below %g A; there the ripple is %g A, modes %s and %s", load, b.Inductor.Max-b.Inductor.Min, below.Mode, b.Mode)
	}
	expect(t, "forced", review(t, quiet(), "discontinuous"), "")
	d.Inductor.Inductance = N(1e-6)
	if list := review(t, d, "discontinuous"); len(list) != 1 || list[0].Value != 1 {
		t.Errorf("discontinuous at full load: %+v", list)
	}
}

func TestOutsideCurve(t *testing.T) {
	d := quiet()
	_, b := solved(t, d, easy)
	warm, peak := b.Temperatures.Switch, b.Inductor.Max
	for _, c := range []struct {
		path, part string
		rows       Curve
		level      Level
	}{
		{"switch.rds_on_curve", "switch", Curve{{0, 1}, {warm + 20, 1.5}}, ""},
		{"switch.rds_on_curve", "switch", Curve{{0, 1}, {warm - 5, 1.5}}, Note},
		{"sync_switch.rds_on_curve", "rectifier", Curve{{60, 1}, {90, 1.5}}, Note},
		{"inductor.l_curve", "inductor", Curve{{0, 12e-6}, {peak + 1, 12e-6}}, ""},
		{"inductor.l_curve", "inductor", Curve{{0, 12e-6}, {peak - 0.1, 12e-6}}, Note},
		{"inductor.ac_curve", "inductor", Curve{{300e3, 3}, {50.01 * 300e3, 30}}, ""},
		{"inductor.ac_curve", "inductor", Curve{{300e3, 3}, {20 * 300e3, 10}}, ""}, // beyond it next to nothing flows
		{"inductor.ac_curve", "inductor", Curve{{1e3, 1}, {299e3, 3}}, Note},
		{"inductor.ac_curve", "inductor", Curve{{301e3, 1}, {3e7, 3}}, Note},
	} {
		d := quiet()
		rows(c.path, c.rows)(d)
		expect(t, c.path, foundAt(t, d, easy, "outside_curve", c.part), c.level)
	}
}

// TestWindingShare puts the end of the curve of factors on either side of where the
// harmonics beyond it carry 1 % of the loss: a flat factor, so the share is that of I².
func TestWindingShare(t *testing.T) {
	d := quiet()
	m, b := solved(t, d, easy)
	s := m.situationOf(b)
	total := 0.0
	harmonics := s.harmonics()
	for _, square := range harmonics {
		total += square
	}
	marked := false
	beyond := 0.0
	for n := len(harmonics); n > 1; n-- {
		beyond += harmonics[n-1]
		d.Inductor.ACCurve = Curve{{1e3, 2}, {(float64(n) - 0.5) * 300e3, 2}}
		want := Level("")
		if beyond > 0.01*total {
			want, marked = Note, true
		}
		expect(t, "share", foundAt(t, d, easy, "outside_curve", "inductor"), want)
	}
	if !marked {
		t.Error("the share was never reached")
	}
}

func TestNoDeadTime(t *testing.T) {
	d := quiet()
	expect(t, "a dead time", review(t, d, "no_dead_time"), "")
	d.Drive.DeadTimeOn = N(0)
	expect(t, "none", review(t, d, "no_dead_time"), Note)
	d.SyncSwitch.QRRTau = Num{}
	expect(t, "no lifetime", review(t, d, "no_dead_time"), "")
}

func TestUnsettled(t *testing.T) {
	d := quiet()
	d.Switch.ThetaJA = N(3000)
	list := review(t, d, "unsettled", Point{11, 8, 25}, Point{48, 8, 25}, Point{12, 8, 25})
	if len(list) != 2 || list[0].Level != Exceeded || list[1].Level != Exceeded {
		t.Fatalf("%+v, want what runs away and what is out of reach", list)
	}
	for _, f := range list {
		want := Point{12, 8, 25} // the last of those out of reach
		if f.Part == "switch" {
			want = Point{48, 8, 25}
		}
		if *f.At != want || f.Message == "" {
			t.Errorf("%+v, want it at %v", f, want)
		}
	}
}

// TestReviewWorst asks for the worst point of a rule, by level and then by value.
func TestReviewWorst(t *testing.T) {
	d := quiet()
	d.Switch.IDRating = N(4) // 7 A of load are a caution, 9 and 11 A beyond
	points := []Point{{48, 7, 25}, {48, 9, 25}, {48, 11, 25}, {48, 1, 25}}
	for range points {
		list := review(t, d, "current_rating", points...)
		if len(list) != 1 || *list[0].At != (Point{48, 11, 25}) || list[0].Level != Exceeded {
			t.Errorf("%+v of %v, want the one at 11 A", list, points)
		}
		points = append(points[1:], points[0])
	}
	d.Switch.TjMax = N(20)
	m, _ := Prepare(d)
	var b Budget
	m.At(Point{48, 11, 25}, &b)
	b2 := b
	all := m.Review([]Budget{b, b2})
	if !slices.IsSortedFunc(all, func(a, b Finding) int { return rank(a.Level) - rank(b.Level) }) || len(all) < 2 {
		t.Errorf("not worst first: %+v", all)
	}
}

// TestFindingsAreWords asks of random designs, well and badly made, that everything
// found can be written, read and traced.
func TestFindingsAreWords(t *testing.T) {
	seen := map[string]int{}
	for seed := range uint64(150) {
		d := newChance(seed).design([...]float64{1, 4, 10}[seed%3])
		m, err := Prepare(d)
		if err != nil {
			t.Fatal(err)
		}
		points := Grid(d)[8:16]
		budgets := make([]Budget, len(points))
		for i, p := range points {
			m.At(p, &budgets[i])
		}
		for _, f := range m.Review(budgets) {
			seen[f.Rule]++
			if f.Message == "" || f.Source == "" || f.Rule == "" || rank(f.Level) < 0 || strings.Contains(f.Message, "%!") || strings.Contains(f.Message, "NaN") || strings.Contains(f.Message, "Inf") {
				t.Errorf("seed %d: %+v", seed, f)
			}
			if _, err := json.Marshal(f); err != nil {
				t.Errorf("seed %d: %v in %+v", seed, err, f)
			}
		}
	}
	if len(seen) < 10 {
		t.Errorf("only %v seen", seen)
	}
}

// TestDoubtful walks the entries that contradict or displace each other, each beside
// the same design without the fault.
func TestDoubtful(t *testing.T) {
	for _, row := range []struct {
		name, rule string
		spoil      func(d *Design)
		want       Level
	}{
		{"gate charge of the switch", "gate_charge", func(d *Design) { d.Switch.QG = N(0.9 * (d.Switch.QGS2.V + d.Switch.QGD.V)) }, Caution},
		{"gate charge of the rectifier", "gate_charge", func(d *Design) { d.SyncSwitch.QG = N(0) }, Caution},
		{"nothing to recover", "recovery_charge", func(d *Design) { d.SyncSwitch.QRRVoltage = N(1e9) }, Caution},
		{"hot ratio beside a curve", "not_used", func(d *Design) {
			d.Switch.RdsOnHotRatio, d.Switch.RdsOnCurve = N(2), Curve{{25, 1}, {150, 2}}
		}, Note},
		{"capacitance beside a charge", "not_used", func(d *Design) { d.Switch.COSS, d.Switch.COSSAt = N(1e-10), N(10) }, Note},
		{"saturation beside a curve", "not_used", func(d *Design) {
			d.Inductor.SatDrop, d.Inductor.ISat, d.Inductor.LCurve = N(0.3), N(40), Curve{{0, d.Inductor.Inductance.V}}
		}, Note},
		{"inductance unlike its curve", "inductance", func(d *Design) { d.Inductor.LCurve = Curve{{0, 3 * d.Inductor.Inductance.V}} }, Caution},
	} {
		d := quiet()
		d.Inductor.Winding = nil
		expect(t, row.name+", before", review(t, d, row.rule), "")
		row.spoil(d)
		expect(t, row.name, review(t, d, row.rule), row.want)
	}
}

// TestImplausible asks for a word where more is lost than delivered, but not at light
// load, where that is nothing unusual.
func TestImplausible(t *testing.T) {
	d := quiet()
	full := d.Output.Current.V
	expect(t, "plausible", review(t, d, "implausible", Point{48, full, 25}), "")
	d.Switch.QG = N(1e-3)
	expect(t, "a millicoulomb", review(t, d, "implausible", Point{48, full, 25}), Caution)
	expect(t, "light load", review(t, d, "implausible", Point{48, 0.1 * full, 25}), "")
}
