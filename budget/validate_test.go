package budget

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
)

// set puts a number at a path.
func set(path string, v float64) func(*Design) {
	return func(d *Design) { *slot(d, path).(*Num) = N(v) }
}

// unset takes an entry away.
func unset(path string) func(*Design) {
	return func(d *Design) {
		switch entry := slot(d, path).(type) {
		case *Num:
			*entry = Num{}
		case *string:
			*entry = ""
		}
	}
}

func write(path, text string) func(*Design) {
	return func(d *Design) { *slot(d, path).(*string) = text }
}

func rows(path string, c Curve) func(*Design) {
	return func(d *Design) { *slot(d, path).(*Curve) = c }
}

func slot(d *Design, path string) any {
	entry, there := d.Slot(path, true)
	if !there {
		panic("no entry " + path)
	}
	return entry
}

// all makes several changes.
func all(changes ...func(*Design)) func(*Design) {
	return func(d *Design) {
		for _, change := range changes {
			change(d)
		}
	}
}

// verdictOn judges the full design, or its diode's sibling, after a change.
func verdictOn(withDiode bool, change func(*Design)) []FieldError {
	d := full()
	if withDiode {
		diode(d)
	}
	change(d)
	return Validate(d)
}

// paths lists where errors lie, once each, those that lack something with a "?".
func paths(errors []FieldError) (list []string) {
	for _, e := range errors {
		path := e.Path
		if e.Missing {
			path += "?"
		}
		if !slices.Contains(list, path) {
			list = append(list, path)
		}
	}
	return list
}

// judge asks that the errors lie at the paths wanted, separated by spaces, and that
// each says what would be right.
func judge(t *testing.T, what string, errors []FieldError, want string) {
	t.Helper()
	if got := strings.Join(paths(errors), " "); got != want {
		t.Errorf("%s: wrong at %q, want %q (%v)", what, got, want, errors)
	}
	for _, e := range errors {
		if !strings.Contains(e.Message, "must") && !strings.Contains(e.Message, "is needed") && !strings.Contains(e.Message, "twice") && !strings.Contains(e.Message, "can't be more") {
			t.Errorf("%s: %q doesn't say what would be right", what, e.Error())
		}
		if strings.Contains(e.Message, "%!") || strings.Contains(e.Message, "NaN") {
			t.Errorf("%s: garbled message %q", what, e.Error())
		}
	}
}

// What each number may be, written out apart from the table that Validate reads.
var (
	positive = strings.Fields(`frequency input.min input.nominal input.max output.voltage output.current
		switch.vds_rating switch.rds_on switch.rds_on_hot_ratio switch.v_threshold switch.v_plateau switch.softness
		sync_switch.vds_rating sync_switch.rds_on sync_switch.rds_on_hot_ratio sync_switch.v_threshold sync_switch.v_plateau sync_switch.softness
		diode.v_rrm diode.i_leak_doubling diode.softness
		inductor.inductance inductor.dcr inductor.winding.diameter inductor.winding.layers inductor.winding.porosity
		inductor.core.volume inductor.core.area inductor.core.turns inductor.core.alpha inductor.core.beta
		input_capacitor.capacitance output_capacitor.capacitance snubber.capacitance
		drive.voltage drive.r_source drive.r_sink controller.duty_max`)
	notNegative = strings.Fields(`enclosure_theta
		switch.id_rating switch.theta_ja switch.v_plateau_current switch.q_gs2 switch.q_gd switch.q_g switch.r_gate switch.l_source
		switch.q_oss switch.e_oss switch.q_oss_at switch.c_oss switch.c_oss_at switch.v_sd switch.r_sd
		switch.q_rr switch.q_rr_current switch.q_rr_didt switch.q_rr_voltage switch.q_rr_tau switch.q_rr_current_exponent switch.q_rr_didt_exponent
		sync_switch.id_rating sync_switch.theta_ja sync_switch.q_gs2 sync_switch.q_gd sync_switch.q_g sync_switch.r_gate sync_switch.l_source
		sync_switch.v_sd sync_switch.r_sd sync_switch.q_rr sync_switch.q_rr_voltage sync_switch.q_rr_tau sync_switch.q_rr_didt_exponent
		diode.i_f_rating diode.theta_ja diode.v_f0 diode.r_d diode.q_c diode.e_c diode.q_c_at diode.c_j diode.c_j_at
		diode.i_leak diode.i_leak_voltage diode.q_rr diode.q_rr_tau diode.q_rr_current_exponent
		inductor.i_sat inductor.sat_drop inductor.i_rms_rating inductor.theta_ja inductor.core.k
		input_capacitor.esr input_capacitor.voltage_rating input_capacitor.ripple_rating
		output_capacitor.esr output_capacitor.voltage_rating output_capacitor.ripple_rating
		drive.r_gate_on drive.r_gate_off drive.dead_time_on drive.dead_time_off
		controller.current controller.fixed_loss controller.on_time_min series_resistances[1].resistance`)
	required = strings.Fields(`format name topology rectifier frequency input.min input.nominal input.max output.voltage output.current
		switch.vds_rating switch.rds_on switch.v_threshold switch.v_plateau switch.q_gs2 switch.q_gd switch.q_g
		sync_switch.vds_rating sync_switch.rds_on sync_switch.v_threshold sync_switch.v_plateau sync_switch.q_gs2 sync_switch.q_gd sync_switch.q_g
		diode.v_rrm diode.v_f0 inductor.inductance inductor.dcr inductor.winding.conductor inductor.winding.layers
		inductor.core.alpha inductor.core.beta input_capacitor.capacitance output_capacitor.capacitance snubber.capacitance
		drive.voltage drive.r_source drive.r_sink
		series_resistances[0].name series_resistances[0].location series_resistances[1].resistance`)
	atMost = map[string]float64{"inductor.core.alpha": 10, "inductor.core.beta": 10, "inductor.winding.porosity": 1, "controller.duty_max": 1,
		"switch.q_rr_current_exponent": 3, "switch.q_rr_didt_exponent": 3, "sync_switch.q_rr_didt_exponent": 3, "diode.q_rr_current_exponent": 3}
)

// at keeps the errors that lie at one path.
func at(errors []FieldError, path string) (list []FieldError) {
	for _, e := range errors {
		if e.Path == path {
			list = append(list, e)
		}
	}
	return list
}

func ofDiode(path string) bool { return strings.HasPrefix(path, "diode.") }

// TestDomains tries the numbers at and beside the ends of every domain.
func TestDomains(t *testing.T) {
	tried := 0
	try := func(path string, v float64, want string) {
		tried++
		judge(t, fmt.Sprintf("%s = %g", path, v), at(verdictOn(ofDiode(path), set(path, v)), path), want)
	}
	for _, path := range positive {
		try(path, 0, path)
		try(path, -1, path)
		if !slices.Contains([]string{"input.nominal", "input.max", "inductor.winding.layers", "drive.voltage", "switch.v_plateau", "sync_switch.v_plateau"}, path) {
			try(path, 1e-15, "")
		}
	}
	for _, path := range notNegative {
		try(path, -1e-300, path)
		if !slices.Contains([]string{"switch.q_oss_at", "sync_switch.q_rr_current", "sync_switch.q_rr_didt", "switch.q_oss", "diode.i_leak_voltage", "diode.c_j_at", "inductor.i_sat"}, path) {
			try(path, 0, "")
		}
	}
	for path, limit := range atMost {
		try(path, limit, "")
		try(path, math.Nextafter(limit, 99), path)
	}
	try("drive.voltage_off", 1e-300, "drive.voltage_off")
	try("drive.voltage_off", 0, "")
	try("drive.voltage_off", -5, "")
	try("ambient", -273.15, "")
	try("ambient", math.Nextafter(-273.15, -300), "ambient")
	for _, path := range []string{"switch.tj_max", "inductor.t_max", "diode.v_f0_slope", "diode.r_d_slope", "diode.i_leak_temperature", "inductor.core.ct0", "inductor.core.ct1", "inductor.core.ct2"} {
		try(path, -3, "")
	}
	if tried < 260 {
		t.Errorf("only %d numbers tried", tried)
	}
}

// TestRequired takes away what must be there, one entry and one part at a time.
func TestRequired(t *testing.T) {
	for _, path := range required {
		change := func(d *Design) {
			if path == "format" {
				d.Format = ""
				return
			}
			unset(path)(d)
		}
		judge(t, "without "+path, at(verdictOn(ofDiode(path), change), path), path+"?")
	}
	for part, cut := range map[string]func(*Design){
		"switch": func(d *Design) { d.Switch = nil }, "sync_switch": func(d *Design) { d.SyncSwitch = nil },
		"diode": func(d *Design) { d.Diode = nil }, "inductor": func(d *Design) { d.Inductor = nil }, "drive": func(d *Design) { d.Drive = nil },
	} {
		var want []string
		for _, path := range required {
			if strings.HasPrefix(path, part+".") && strings.Count(path, ".") == 1 {
				want = append(want, path+"?")
			}
		}
		got := paths(verdictOn(part == "diode", cut))
		slices.Sort(got)
		if slices.Sort(want); !slices.Equal(got, want) {
			t.Errorf("without %s: %v, want %v", part, got, want)
		}
	}
	if d := full(); true {
		d.InputCapacitor, d.OutputCapacitor, d.Snubber, d.Controller, d.Series, d.Inductor.Core, d.Inductor.Winding, d.Diode = nil, nil, nil, nil, nil, nil, nil, nil
		judge(t, "without all that may be absent", Validate(d), "")
	}
}

// TestNotFinite puts what no file can hold, but a program can, into every number.
func TestNotFinite(t *testing.T) {
	tried := 0
	for _, part := range Parts() {
		for _, f := range part.Fields {
			path := f.Path
			if part.List {
				path = strings.Replace(path, part.Path, part.Path+"[1]", 1)
			}
			if f.Kind != Number || path == "inductor.winding.thickness" || strings.Contains(path, "core.reference") {
				continue // these last stand in no full design
			}
			for _, v := range []float64{math.NaN(), math.Inf(1), math.Inf(-1), math.Nextafter(1e15, 2e15), -1.1e15, math.Nextafter(1e-30, 0)} {
				tried++
				if errors := at(verdictOn(ofDiode(path), set(path, v)), path); len(errors) == 0 || errors[0].Missing {
					t.Errorf("%s = %g: %v", path, v, errors)
				}
			}
		}
	}
	for _, path := range []string{"switch.rds_on_curve", "inductor.l_curve", "inductor.ac_curve"} {
		for _, v := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
			tried++
			judge(t, path, verdictOn(false, rows(path, Curve{{1, 1}, {v, 2}})), path+"[1][0]")
			judge(t, path, verdictOn(false, rows(path, Curve{{1, v}, {2, 2}})), path+"[0][1]")
		}
	}
	if tried < 500 {
		t.Errorf("only %d tried", tried)
	}
}
