package budget

import (
	"math"
	"strings"
	"testing"
)

// easy is where the full design has no findings.
var easy = Point{48, 8, 25}

// at the point: what is found of one rule and part there.
func foundAt(t *testing.T, d *Design, p Point, rule, part string) (list []Finding) {
	t.Helper()
	m, b := solved(t, d, p)
	for _, f := range m.Findings(b) {
		if f.Rule == rule && f.Part == part {
			list = append(list, f)
		}
	}
	return list
}

// expect asks for one finding of the level, or for none with "".
func expect(t *testing.T, what string, list []Finding, level Level) {
	t.Helper()
	switch {
	case level == "" && len(list) > 0:
		t.Errorf("%s: found %+v", what, list)
	case level != "" && (len(list) != 1 || list[0].Level != level):
		t.Errorf("%s: found %+v, want one %s", what, list, level)
	case level != "" && (list[0].Message == "" || list[0].Source == ""):
		t.Errorf("%s: no words or no source: %+v", what, list)
	}
}

// quiet is the full design without what would tie its currents to its ratings.
func quiet() *Design {
	d := full()
	d.Inductor.SatDrop = Num{}
	return d
}

func quietDiode() *Design {
	d := quiet()
	diode(d)
	return d
}

func TestNothingToSay(t *testing.T) {
	for name, d := range map[string]*Design{"synchronous": full(), "diode": quietDiode()} {
		m, b := solved(t, d, easy)
		if list := m.Findings(b); len(list) != 0 {
			t.Errorf("%s: %+v", name, list)
		}
	}
	d := full()
	d.Inductor.Winding = nil // displaced by its curve, which is worth a note
	m, b := solved(t, d, easy)
	if list := m.Review([]Budget{*b}); len(list) != 0 {
		t.Errorf("review: %+v", list)
	}
}

// shares are the rules that measure a value against a rating, caution at a share of it.
var shares = []struct {
	rule, part, rating string
	caution            float64
	diode              bool
	value              func(b *Budget) float64
}{
	{"blocking_voltage", "switch", "switch.vds_rating", 0.8, false, func(*Budget) float64 { return 56 }}, // the highest input
	{"blocking_voltage", "rectifier", "sync_switch.vds_rating", 0.8, false, func(*Budget) float64 { return 56 }},
	{"blocking_voltage", "rectifier", "diode.v_rrm", 0.8, true, func(*Budget) float64 { return 56 }},
	{"current_rating", "switch", "switch.id_rating", 0.8, false, func(b *Budget) float64 { return b.SwitchRMS }},
	{"current_rating", "rectifier", "sync_switch.id_rating", 0.8, false, func(b *Budget) float64 { return b.RectifierRMS }},
	{"current_rating", "rectifier", "diode.i_f_rating", 0.8, true, func(b *Budget) float64 { return b.RectifierMean }},
	{"saturation", "inductor", "inductor.i_sat", 0.8, false, func(b *Budget) float64 { return b.Inductor.Max }},
	{"inductor_heat", "inductor", "inductor.i_rms_rating", 0.9, false, func(b *Budget) float64 { return b.Inductor.RMS }},
	{"capacitor", "input_capacitor", "input_capacitor.ripple_rating", 0.8, false, func(b *Budget) float64 { return b.InputCapRMS }},
	{"capacitor", "output_capacitor", "output_capacitor.ripple_rating", 0.8, false, func(b *Budget) float64 { return b.OutputCapRMS }},
	{"capacitor", "input_capacitor", "input_capacitor.voltage_rating", 0.8, false, func(*Budget) float64 { return 56 }},
	{"capacitor", "output_capacitor", "output_capacitor.voltage_rating", 0.8, false, func(*Budget) float64 { return 12 }},
	{"modulation", "controller", "controller.duty_max", 0.9, false, func(b *Budget) float64 { return b.Duty }},
}

// TestShares puts each rating just beside where the caution and the limit begin, and
// asks that without a rating nothing is said.
func TestShares(t *testing.T) {
	for _, r := range shares {
		build := quiet
		if r.diode {
			build = quietDiode
		}
		_, b := solved(t, build(), easy)
		value := r.value(b)
		for _, c := range []struct {
			share float64
			level Level
		}{{r.caution * (1 - 1e-9), ""}, {r.caution * (1 + 1e-9), Caution}, {1 - 1e-9, Caution}, {1 + 1e-9, Exceeded}, {3, Exceeded}} {
			if c.share == 3 && r.rating == "controller.duty_max" {
				continue
			}
			d := build()
			set(r.rating, value/c.share)(d)
			list := foundAt(t, d, easy, r.rule, r.part)
			expect(t, r.rating, list, c.level)
			if len(list) == 1 && (math.Abs(list[0].Value-c.share) > 1e-12*c.share || list[0].Limit != 1) {
				t.Errorf("%s: %g of %g, want %g of 1", r.rating, list[0].Value, list[0].Limit, c.share)
			}
		}
		if entry, _ := FieldAt(r.rating); !entry.Required && entry.Default == 0 {
			d := build()
			unset(r.rating)(d)
			expect(t, "without "+r.rating, foundAt(t, d, easy, r.rule, r.part), "")
		}
	}
}

// TestBlockingAtHigherInput asks that a point above the range counts itself.
func TestBlockingAtHigherInput(t *testing.T) {
	d := quiet()
	d.Switch.VdsRating = N(70)
	expect(t, "56 of 70 V", foundAt(t, d, easy, "blocking_voltage", "switch"), "")
	expect(t, "71 of 70 V", foundAt(t, d, Point{71, 8, 25}, "blocking_voltage", "switch"), Exceeded)
}

func TestOnTime(t *testing.T) {
	_, b := solved(t, quiet(), easy)
	for share, level := range map[float64]Level{0.9 - 1e-9: "", 0.9 + 1e-9: Caution, 1 - 1e-9: Caution, 1 + 1e-9: Exceeded} {
		d := quiet()
		d.Controller.OnTimeMin = N(share * b.OnTime)
		expect(t, "shortest on-time", foundAt(t, d, easy, "modulation", "controller"), level)
	}
	d := quiet()
	d.Controller = nil
	expect(t, "no controller", foundAt(t, d, easy, "modulation", "controller"), "")
}

// TestTemperatures puts the highest temperatures beside where the parts settle.
func TestTemperatures(t *testing.T) {
	for _, r := range []struct {
		rule, part, limit string
		room              float64 // K below the limit at which the caution begins
		diode             bool
		of                func(Temperatures) float64
	}{
		{"junction", "switch", "switch.tj_max", 25, false, func(t Temperatures) float64 { return t.Switch }},
		{"junction", "rectifier", "sync_switch.tj_max", 25, false, func(t Temperatures) float64 { return t.Rectifier }},
		{"junction", "rectifier", "diode.tj_max", 25, true, func(t Temperatures) float64 { return t.Rectifier }},
		{"inductor_heat", "inductor", "inductor.t_max", 10, false, func(t Temperatures) float64 { return t.Inductor }},
	} {
		build := quiet
		if r.diode {
			build = quietDiode
		}
		_, b := solved(t, build(), easy)
		settled := r.of(b.Temperatures)
		for above, level := range map[float64]Level{r.room + 1e-6: "", r.room - 1e-6: Caution, 1e-6: Caution, -1e-6: Exceeded} {
			d := build()
			set(r.limit, settled+above)(d)
			list := foundAt(t, d, easy, r.rule, r.part)
			expect(t, r.limit, list, level)
			if len(list) == 1 && (math.Abs(list[0].Value-settled) > 1e-6 || list[0].Limit != settled+above || list[0].Unit != "°C") {
				t.Errorf("%s: %+v, settled at %g", r.limit, list[0], settled)
			}
		}
	}
	d := quiet()
	d.Switch.TjMax = Num{}
	if list := foundAt(t, d, Point{48, 8, 124}, "junction", "switch"); len(list) != 1 || list[0].Limit != 150 {
		t.Errorf("without an entry the limit is the default: %+v", list)
	}
}

// TestThermalGain compares with the derivative of each part's items by hand.
func TestThermalGain(t *testing.T) {
	check := func(what string, got, want float64) {
		if !(math.Abs(got-want) <= 1e-6*math.Abs(want)) {
			t.Errorf("%s: gain %.9g, by hand %.9g", what, got, want)
		}
	}
	d := quietDiode()
	d.EnclosureTheta = N(0.7)
	d.Inductor.Core.CT0, d.Inductor.Core.CT1, d.Inductor.Core.CT2 = N(1.85), N(0.0185), N(0.0001)
	m, b := solved(t, d, easy)
	s := m.situationOf(b)
	gains, temp := m.gains(s), b.Temperatures
	exponent := math.Log(1.8) / math.Log(423.15/298.15)
	check("switch", gains[0], 3.7*item(t, b, "switch", "conduction")*exponent/(temp.Switch+273.15))
	leak := item(t, b, "rectifier", "leakage") * math.Ln2 / 10
	check("diode", gains[1], 3.7*(-1e-3*b.RectifierMean+5e-3*1e-3*b.RectifierRMS*b.RectifierRMS+leak))
	copper := (item(t, b, "inductor", "winding_dc") + item(t, b, "inductor", "winding_ac")) * 0.00393 / (1 + 0.00393*(temp.Inductor-20))
	ct := 1.85 - 0.0185*temp.Inductor + 0.0001*temp.Inductor*temp.Inductor
	core := item(t, b, "inductor", "core") / ct * (-0.0185 + 0.0002*temp.Inductor)
	check("inductor", gains[2], 5.7*(copper+core))
	for want, level := range map[float64]Level{0.5 - 1e-6: "", 0.5 + 1e-6: Caution, 1 - 1e-6: Caution, 1 + 1e-6: Exceeded} {
		m.theta[0], m.enclosure = want*3.7/gains[0], 0
		var list []Finding
		for _, o := range thermalGain(m, b, s) {
			if o.Part == "switch" {
				list = append(list, o.Finding)
			}
		}
		expect(t, "gain", list, level)
	}
}

// TestGainAtTheEnd asks for a finite gain where the probe meets the end of a model:
// copper's straight line ends at −234.45 °C.
func TestGainAtTheEnd(t *testing.T) {
	d := quiet()
	d.Inductor.Core, d.Inductor.ThetaJA = nil, N(0)
	end := 20 - 1/0.00393
	for _, above := range []float64{1e-12, 1e-6, 5e-4, 1e-3, 1} {
		m, b := solved(t, d, Point{48, 8, end + above})
		for part, g := range m.gains(m.situationOf(b)) {
			if !finite(g) {
				t.Errorf("%g K above the end: gain %d is %g", above, part, g)
			}
		}
	}
}

func TestDriveHeadroom(t *testing.T) {
	for _, part := range []string{"switch", "rectifier"} {
		for drive, level := range map[float64]Level{5.2 + 1e-9: "", 5.2 - 1e-9: Caution, 3.3: Caution} {
			d := quiet()
			d.Switch.VPlateauCurrent, d.SyncSwitch.VPlateauCurrent = Num{}, Num{}
			d.Drive.Voltage = N(drive)
			list := foundAt(t, d, easy, "drive_headroom", part)
			expect(t, part, list, level)
			if len(list) == 1 && math.Abs(list[0].Value-(drive-3.2)) > 1e-12 {
				t.Errorf("%s: %g V left, want %g", part, list[0].Value, drive-3.2)
			}
		}
	}
	d := quiet() // the plateau follows the current: 2 + 1.2·Imax/10; the rectifier's is as stated
	d.Drive.Voltage = N(5.2 - 1e-3)
	_, b := solved(t, d, easy)
	list := foundAt(t, d, easy, "drive_headroom", "switch")
	if left := d.Drive.Voltage.V - 2 - 0.12*b.Inductor.Max; left < 2 && (len(list) != 1 || math.Abs(list[0].Value-left) > 1e-12) || left >= 2 && len(list) != 0 {
		t.Errorf("%g V left at the peak, found %+v", left, list)
	}
	expect(t, "as stated", foundAt(t, d, easy, "drive_headroom", "rectifier"), Caution)
}

func TestRecoverySlope(t *testing.T) {
	build := func() *Design {
		d := quiet()
		d.Switch.ThetaJA, d.SyncSwitch.ThetaJA, d.Inductor.ThetaJA = N(0), N(0), N(0)
		return d
	}
	_, b := solved(t, build(), easy)
	i := b.Inductor.Min
	k := i * (8 - 2.6) / (2e-9*(2+1+1) + 2e-10*i)
	for ratio, level := range map[float64]Level{5 * (1 - 1e-9): "", 5 * (1 + 1e-9): Note, 50: Note} {
		d := build()
		d.SyncSwitch.QRRDidt = N(k / ratio)
		list := foundAt(t, d, easy, "recovery_slope", "rectifier")
		expect(t, "slope", list, level)
		if len(list) == 1 && (math.Abs(list[0].Value-ratio) > 1e-9*ratio || !strings.Contains(list[0].Message, "extrapolated")) {
			t.Errorf("%+v, want %g", list[0], ratio)
		}
	}
}

func TestHazardAndHeat(t *testing.T) {
	none := func(d *Design) { d.Switch.ThetaJA, d.SyncSwitch.ThetaJA, d.Inductor.ThetaJA = N(0), N(0), N(0) }
	d := quiet()
	none(d)
	expect(t, "60 V in", foundAt(t, d, Point{60, 8, 25}, "hazard_voltage", ""), "")
	expect(t, "a little more", foundAt(t, d, Point{math.Nextafter(60, 61), 8, 25}, "hazard_voltage", ""), Caution)
	for _, part := range partNames {
		expect(t, "60 °C", foundAt(t, d, Point{48, 8, 60}, "hot_surface", part), "")
		expect(t, "a little more", foundAt(t, d, Point{48, 8, math.Nextafter(60, 61)}, "hot_surface", part), Note)
	}
	d.Topology = "buck_boost" // blocks Vin + Vout
	expect(t, "48 and 12 V", foundAt(t, d, easy, "hazard_voltage", ""), "")
	expect(t, "49 and 12 V", foundAt(t, d, Point{49, 8, 25}, "hazard_voltage", ""), Caution)
}

func TestSupplyLow(t *testing.T) {
	for _, c := range []struct {
		feed  string
		off   float64
		vin   float64
		level Level
	}{{"output", -4, 48, ""}, {"output", -4.0001, 48, Caution}, {"rail", -40, 48, ""}, {"", -40, 48, ""}, {"input", -40, 48, ""}, {"input", -40, 47.99, Caution}} {
		d := quiet()
		d.Drive.FedFrom, d.Drive.VoltageOff = c.feed, N(c.off)
		expect(t, c.feed, foundAt(t, d, Point{c.vin, 8, 25}, "supply_low", "drive"), c.level)
	}
}
