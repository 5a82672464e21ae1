package budget

import (
	"math"
	"slices"
	"strings"
	"testing"
)

// half of the stated charge; a variable, so that products round as they do in use.
var half = 15e-9

// halves are the rules between entries: each row changes the full design and says
// where it is wrong then; "" where it must still be right.
var halves = []struct {
	name   string
	change func(*Design)
	want   string
}{
	{"as it is", all(), ""},
	{"as it is, diode", diode, ""},
	{"another format", func(d *Design) { d.Format = "lossbook/2" }, "format"},
	{"a blank name", write("name", " \t"), "name?"},
	{"an unknown topology", write("topology", "Boost"), "topology"},
	{"an unknown rectifier", write("rectifier", "bridge"), "rectifier"},
	{"an unknown light load", write("light_load", "skip"), "light_load"},
	{"no light load", write("light_load", ""), ""},
	{"an unknown feed of the drive", write("drive.fed_from", "battery"), "drive.fed_from"},
	{"no feed of the drive", write("drive.fed_from", ""), ""},
	{"an unknown feed of the controller", write("controller.fed_from", "rail"), "controller.fed_from"},
	{"an unknown conductor", write("inductor.winding.conductor", "litz"), "inductor.winding.conductor"},
	{"an unknown place", write("series_resistances[1].location", "drain"), "series_resistances[1].location"},

	{"lowest above nominal", set("input.min", math.Nextafter(48, 50)), "input.nominal"},
	{"lowest at nominal", set("input.min", 48), ""},
	{"highest below nominal", set("input.max", math.Nextafter(48, 0)), "input.max"},
	{"highest at nominal", set("input.max", 48), ""},
	{"highest below lowest, nominal missing", all(unset("input.nominal"), set("input.max", 39)), "input.nominal? input.max"},

	{"plateau at the threshold", set("switch.v_plateau", 2), "switch.v_plateau"},
	{"plateau just above it", set("switch.v_plateau", math.Nextafter(2, 3)), ""},
	{"plateau at the drive", set("switch.v_plateau", 8), "switch.v_plateau"},
	{"plateau just below it", set("switch.v_plateau", math.Nextafter(8, 0)), ""},
	{"rectifier's plateau at the threshold", set("sync_switch.v_plateau", 2), "sync_switch.v_plateau"},
	{"rectifier's plateau at the drive", set("sync_switch.v_plateau", 8), "sync_switch.v_plateau"},
	{"rectifier's plateau just below", set("sync_switch.v_plateau", math.Nextafter(8, 0)), ""},
	{"a drive below both plateaus", set("drive.voltage", 3), "switch.v_plateau sync_switch.v_plateau"},

	{"dead times of half a period", all(set("frequency", 250e3), set("drive.dead_time_on", 1e-6), set("drive.dead_time_off", 1e-6)), ""},
	{"a little more, before", all(set("frequency", 250e3), set("drive.dead_time_on", 1.0001e-6), set("drive.dead_time_off", 1e-6)), "drive.dead_time_on"},
	{"a little more, after", all(set("frequency", 250e3), set("drive.dead_time_on", 1e-6), set("drive.dead_time_off", 1.0001e-6)), "drive.dead_time_off"},

	{"a little more, both alike", all(set("frequency", 250e3), set("drive.dead_time_on", 1.0001e-6), set("drive.dead_time_off", 1.0001e-6)), "drive.dead_time_on"},

	{"recovery without its current", unset("sync_switch.q_rr_current"), "sync_switch.q_rr_current?"},
	{"recovery at no current", set("sync_switch.q_rr_current", 0), "sync_switch.q_rr_current"},
	{"recovery without its slope", unset("sync_switch.q_rr_didt"), "sync_switch.q_rr_didt?"},
	{"recovery at no slope", set("sync_switch.q_rr_didt", 0), "sync_switch.q_rr_didt"},
	{"the switch's own recovery isn't used", all(unset("switch.q_rr_current"), unset("switch.q_rr_didt")), ""},
	{"no recovery needs neither", all(set("sync_switch.q_rr", 0), unset("sync_switch.q_rr_current"), unset("sync_switch.q_rr_didt")), ""},
	{"a diode's recovery without either", all(diode, set("diode.q_rr", 1e-9)), "diode.q_rr_current? diode.q_rr_didt?"},
	{"recovery with nothing to set its slope", all(set("switch.q_gs2", 0), set("switch.l_source", 0)), "switch.q_gs2"},
	{"the same, inductance absent", all(set("switch.q_gs2", 0), unset("switch.l_source")), "switch.q_gs2"},
	{"an inductance sets it", set("switch.q_gs2", 0), ""},
	{"nothing to set it, and no recovery", all(set("switch.q_gs2", 0), set("switch.l_source", 0), set("sync_switch.q_rr", 0)), ""},

	{"leakage without its voltage", all(diode, unset("diode.i_leak_voltage")), "diode.i_leak_voltage?"},
	{"leakage at no voltage", all(diode, set("diode.i_leak_voltage", 0)), "diode.i_leak_voltage"},
	{"no leakage needs none", all(diode, unset("diode.i_leak"), unset("diode.i_leak_voltage")), ""},
	{"charge without its voltage", unset("switch.q_oss_at"), "switch.q_oss_at?"},
	{"charge at no voltage", set("switch.q_oss_at", 0), "switch.q_oss_at"},
	{"rectifier's charge without its voltage", unset("sync_switch.q_oss_at"), "sync_switch.q_oss_at?"},
	{"capacitance without its voltage", set("switch.c_oss", 1e-9), "switch.c_oss_at?"},
	{"capacitance at no voltage", all(set("switch.c_oss", 1e-9), set("switch.c_oss_at", 0)), "switch.c_oss_at"},
	{"both ways of stating it", all(set("switch.c_oss", 1e-9), set("switch.c_oss_at", 25)), ""},
	{"energy without its charge", all(unset("switch.q_oss"), unset("switch.q_oss_at")), "switch.q_oss?"},
	{"energy beside no charge", set("switch.q_oss", 0), "switch.q_oss"},
	{"energy of charge times voltage", set("switch.e_oss", half*2*50), ""},
	{"energy above it", set("switch.e_oss", math.Nextafter(half*2*50, 1)), "switch.e_oss"},
	{"a diode's charge without its voltage", all(diode, set("diode.q_c", 1e-9)), "diode.q_c_at?"},
	{"a diode's capacitance without its voltage", all(diode, unset("diode.c_j_at")), "diode.c_j_at?"},
	{"a diode's energy without its charge", all(diode, set("diode.e_c", 1e-9)), "diode.q_c?"},
	{"a diode's energy above charge times voltage", all(diode, set("diode.q_c", 1e-9), set("diode.q_c_at", 10), set("diode.e_c", 1.1e-8)), "diode.e_c"},

	{"a drop of everything", set("inductor.sat_drop", 1), "inductor.sat_drop"},
	{"a drop of nearly everything", set("inductor.sat_drop", math.Nextafter(1, 0)), ""},
	{"a drop without its current", unset("inductor.i_sat"), "inductor.i_sat?"},
	{"a drop at no current", set("inductor.i_sat", 0), "inductor.i_sat"},
	{"no drop needs none", all(set("inductor.sat_drop", 0), unset("inductor.i_sat")), ""},
	{"a current without a drop", unset("inductor.sat_drop"), ""},

	{"less than a layer", set("inductor.winding.layers", math.Nextafter(1, 0)), "inductor.winding.layers"},
	{"one layer", set("inductor.winding.layers", 1), ""},
	{"round without diameter", unset("inductor.winding.diameter"), "inductor.winding.diameter?"},
	{"round with thickness", set("inductor.winding.thickness", 1e-4), "inductor.winding.thickness"},
	{"foil with diameter", write("inductor.winding.conductor", "foil"), "inductor.winding.diameter inductor.winding.thickness?"},
	{"foil", all(write("inductor.winding.conductor", "foil"), unset("inductor.winding.diameter"), set("inductor.winding.thickness", 1e-4)), ""},

	{"a core without volume", unset("inductor.core.volume"), "inductor.core.volume?"},
	{"a core of exponents alone", all(unset("inductor.core.volume"), unset("inductor.core.area"), unset("inductor.core.turns"), unset("inductor.core.k")),
		"inductor.core.reference_power? inductor.core.reference_frequency? inductor.core.reference_ripple?"},
	{"half a reference loss", catalogue("reference_ripple"), "inductor.core.reference_ripple?"},
	{"a reference loss of no frequency", all(catalogue(""), set("inductor.core.reference_frequency", 0)), "inductor.core.reference_frequency"},
	{"a reference loss of no ripple", all(catalogue(""), set("inductor.core.reference_ripple", 0)), "inductor.core.reference_ripple"},
	{"a reference loss", catalogue(""), ""},
	{"a stated reference loss of nothing", all(catalogue(""), set("inductor.core.reference_power", 0)), ""},
	{"one entry of the other kind of core", all(catalogue(""), set("inductor.core.volume", 1e-6)), "inductor.core.volume"},
	{"both kinds of core", set("inductor.core.reference_power", 1), "inductor.core.volume inductor.core.area inductor.core.turns inductor.core.k"},
	{"two factors of temperature", unset("inductor.core.ct1"), "inductor.core.ct1?"},
	{"one factor", all(unset("inductor.core.ct0"), unset("inductor.core.ct2")), "inductor.core.ct0? inductor.core.ct2?"},
	{"no factor", all(unset("inductor.core.ct0"), unset("inductor.core.ct1"), unset("inductor.core.ct2")), ""},

	{"a name used twice", write("series_resistances[1].name", "shunt"), "series_resistances[1].name"},
	{"curve that stands still", rows("inductor.l_curve", Curve{{0, 1}, {2, 1}, {2, 1}}), "inductor.l_curve[2][0]"},
	{"curve that goes back", rows("switch.rds_on_curve", Curve{{25, 1}, {24, 2}}), "switch.rds_on_curve[1][0]"},
	{"curve that just goes on", rows("switch.rds_on_curve", Curve{{-40, 1}, {25, 1.5}, {25.001, 2}}), ""},
	{"inductance below no current", rows("inductor.l_curve", Curve{{-1e-9, 1}, {2, 1}}), "inductor.l_curve[0][0]"},
	{"inductance from no current", rows("inductor.l_curve", Curve{{0, 1}, {2, 1}}), ""},
	{"a factor at 0 Hz", rows("inductor.ac_curve", Curve{{0, 1}, {2, 1}}), "inductor.ac_curve[0][0]"},
	{"a value of 0", rows("inductor.l_curve", Curve{{0, 1}, {2, 0}}), "inductor.l_curve[1][1]"},
	{"a value below 0", rows("inductor.ac_curve", Curve{{1, -1}}), "inductor.ac_curve[0][1]"},
	{"a multiplier of 0", rows("sync_switch.rds_on_curve", Curve{{1, 0}}), "sync_switch.rds_on_curve[0][1]"},
	{"too many rows", rows("inductor.ac_curve", long(MaxRows+1)), "inductor.ac_curve"},
	{"as many as may be", rows("inductor.ac_curve", long(MaxRows)), ""},
	{"x beyond any number a converter holds", rows("switch.rds_on_curve", Curve{{-1e300, 1}, {1e300, 2}}), "switch.rds_on_curve[0][0] switch.rds_on_curve[1][0]"},
	{"too many series resistances", many(MaxRows + 1), "series_resistances"},
	{"as many as may be", many(MaxRows), ""},

	{"the unused diode is kept and not judged", set("diode.v_rrm", -5), ""},
	{"the unused MOSFET is kept and not judged", all(diode, set("sync_switch.rds_on", -5), set("sync_switch.v_plateau", 99)), ""},
}

// catalogue states the core by a reference loss, but for one entry.
func catalogue(without string) func(*Design) {
	return func(d *Design) {
		d.Inductor.Core = &Core{ReferencePower: N(0.1), ReferenceFrequency: N(1e5), ReferenceRipple: N(2), Alpha: N(1.4), Beta: N(2.4)}
		if without != "" {
			unset("inductor.core." + without)(d)
		}
	}
}

func long(n int) (c Curve) {
	for i := range n {
		c = append(c, [2]float64{float64(i + 1), 1})
	}
	return c
}

func many(n int) func(*Design) {
	return func(d *Design) {
		d.Series = nil
		for i := range n {
			d.Series = append(d.Series, SeriesResistance{strings.Repeat("x", i+1), "output", N(1e-6)})
		}
	}
}

func TestBetweenFields(t *testing.T) {
	for _, row := range halves {
		judge(t, row.name, verdictOn(false, row.change), row.want)
	}
	if len(halves) < 80 {
		t.Errorf("only %d rows", len(halves))
	}
}

// TestAllAtOnce asks for every error of a spoilt design, in the order of the table.
func TestAllAtOnce(t *testing.T) {
	errors := verdictOn(false, all(unset("name"), set("frequency", -1), set("drive.r_sink", 0), set("switch.v_plateau", 9), unset("inductor.dcr"),
		write("series_resistances[1].name", "shunt"), set("snubber.capacitance", math.NaN()), set("sync_switch.q_rr_current", 0)))
	judge(t, "eight at once", errors, "name? frequency switch.v_plateau sync_switch.q_rr_current inductor.dcr? snubber.capacitance drive.r_sink series_resistances[1].name")
	if empty := Validate(&Design{}); len(paths(empty)) < 20 || slices.ContainsFunc(empty, func(e FieldError) bool { return !e.Missing }) {
		t.Errorf("an empty design only lacks entries: %v", empty)
	}
	_, err := Prepare(&Design{Format: Format})
	if err == nil || !strings.Contains(err.Error(), "frequency: is needed") {
		t.Errorf("Prepare says %v", err)
	}
}

func TestValidatePoints(t *testing.T) {
	good := Point{12, 0, -273.15}
	nan, inf := math.NaN(), math.Inf(1)
	errors := ValidatePoints([]Point{good, {0, 1, 25}, {12, -1e-300, 25}, {12, 1, math.Nextafter(-273.15, -300)},
		{nan, nan, nan}, {inf, inf, inf}, {-inf, -inf, -inf}, {1e-30, 0, 25}, {-1, -1, -300}})
	judge(t, "points", errors, strings.Join([]string{"points[1].vin", "points[2].iout", "points[3].ambient",
		"points[4].vin", "points[4].iout", "points[4].ambient", "points[5].vin", "points[5].iout", "points[5].ambient",
		"points[6].vin", "points[6].iout", "points[6].ambient", "points[8].vin", "points[8].iout", "points[8].ambient"}, " "))
	if errors := ValidatePoints(nil); errors != nil {
		t.Errorf("no points: %v", errors)
	}
}
