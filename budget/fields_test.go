package budget

import (
	"bytes"
	"encoding/json"
	"fmt"
	"reflect"
	"strings"
	"testing"
)

// The design file as it is promised: a part in a row, its entries with their unit
// in brackets, "!" where required, "=" and a default where it is not zero.
const (
	mosfetFile = `part vds_rating[V]! id_rating[A] tj_max[°C]=150 theta_ja[K/W]
		rds_on[Ω]! rds_on_hot_ratio=1 rds_on_curve{°C,}
		v_threshold[V]! v_plateau[V]! v_plateau_current[A]
		q_gs2[C]! q_gd[C]! q_g[C]! r_gate[Ω] l_source[H]
		q_oss[C] e_oss[J] q_oss_at[V] c_oss[F] c_oss_at[V] v_sd[V]=0.8 r_sd[Ω] ` + recoveryFile
	diodeFile = `part v_rrm[V]! i_f_rating[A] tj_max[°C]=150 theta_ja[K/W]
		v_f0[V]! v_f0_slope[V/K] r_d[Ω] r_d_slope[1/K]
		q_c[C] e_c[J] q_c_at[V] c_j[F] c_j_at[V]
		i_leak[A] i_leak_voltage[V] i_leak_temperature[°C]=25 i_leak_doubling[K]=10 ` + recoveryFile
	recoveryFile = `q_rr[C] q_rr_current[A] q_rr_didt[A/s] q_rr_voltage[V] q_rr_tau[s]
		q_rr_current_exponent=0.5 q_rr_didt_exponent=0.5 softness=0.5`
	capacitorFile = `part capacitance[F]! esr[Ω] voltage_rating[V] ripple_rating[A]`
)

var designFile = map[string]string{
	"": `name! note topology! rectifier! light_load frequency[Hz]! input.min[V]! input.nominal[V]! input.max[V]!
		output.voltage[V]! output.current[A]! ambient[°C]=25 enclosure_theta[K/W]`,
	"switch": mosfetFile, "sync_switch": mosfetFile, "diode": diodeFile,
	"inductor": `part inductance[H]! i_sat[A] sat_drop l_curve{A,H} i_rms_rating[A] t_max[°C]=125 theta_ja[K/W]
		dcr[Ω]! ac_curve{Hz,}`,
	"inductor.winding": `conductor! diameter[m] thickness[m] layers! porosity=1`,
	"inductor.core": `volume[m³] area[m²] turns k alpha! beta! reference_power[W] reference_frequency[Hz] reference_ripple[A]
		ct0 ct1[1/K] ct2[1/K²]`,
	"input_capacitor": capacitorFile, "output_capacitor": capacitorFile,
	"snubber": `capacitance[F]!`,
	"drive": `voltage[V]! voltage_off[V] r_source[Ω]! r_sink[Ω]! r_gate_on[Ω] r_gate_off[Ω]
		dead_time_on[s] dead_time_off[s] fed_from`,
	"controller":         `current[A] fed_from fixed_loss[W] duty_max=1 on_time_min[s]`,
	"series_resistances": `name! location! resistance[Ω]!`,
}

// entryOf writes a row of the table as the file's description does.
func entryOf(f Field) string {
	text := f.Key
	switch {
	case f.Kind == Rows:
		text += "{" + f.XUnit + "," + f.Unit + "}"
	case f.Unit != "":
		text += "[" + f.Unit + "]"
	}
	if f.Required {
		text += "!"
	}
	if f.Default != 0 {
		text += fmt.Sprintf("=%g", f.Default)
	}
	return text
}

// TestFieldsAsPromised compares the table with the description of the file above.
func TestFieldsAsPromised(t *testing.T) {
	seen, compared := map[string]bool{}, 0
	for _, part := range Parts() {
		seen[part.Path] = true
		promised := map[string]bool{}
		for _, entry := range strings.Fields(designFile[part.Path]) {
			promised[entry] = true
		}
		for _, f := range part.Fields {
			if entry := entryOf(f); !promised[entry] {
				t.Errorf("%s: the table has %s", part.Path, entry)
			} else {
				delete(promised, entry)
				compared++
			}
		}
		for entry := range promised {
			t.Errorf("%s: the table lacks %s", part.Path, entry)
		}
	}
	for path := range designFile {
		if !seen[path] {
			t.Errorf("no part %s in the table", path)
		}
	}
	if compared < 130 {
		t.Errorf("only %d entries compared", compared)
	}
}

// leaves calls f with the JSON path and type of every entry of the design.
func leaves(typ reflect.Type, prefix string, f func(path string, typ reflect.Type)) {
	for i := range typ.NumField() {
		field := typ.Field(i)
		kind, path := field.Type, join(prefix, jsonName(field))
		if field.Anonymous {
			path = prefix
		}
		if kind.Kind() == reflect.Pointer || kind == reflect.TypeFor[[]SeriesResistance]() {
			kind = kind.Elem()
		}
		if kind.Kind() == reflect.Struct && kind != reflect.TypeFor[Num]() {
			leaves(kind, path, f)
		} else {
			f(path, kind)
		}
	}
}

// TestFieldsAreMembers holds the table against the members of Design, both ways.
func TestFieldsAreMembers(t *testing.T) {
	rows := map[string]Field{}
	for _, part := range Parts() {
		for _, f := range part.Fields {
			if _, twice := rows[f.Path]; twice {
				t.Errorf("%s stands twice in the table", f.Path)
			}
			rows[f.Path] = f
		}
	}
	kinds := map[Kind]reflect.Type{Number: reflect.TypeFor[Num](), Text: reflect.TypeFor[string](), Choice: reflect.TypeFor[string](), Rows: reflect.TypeFor[Curve]()}
	members := 0
	leaves(reflect.TypeFor[Design](), "", func(path string, typ reflect.Type) {
		if path == "format" || path == "sources" {
			return // not entries of a part
		}
		members++
		f, there := rows[path]
		if !there {
			t.Errorf("%s of Design stands in no row", path)
		} else if kinds[f.Kind] != typ {
			t.Errorf("%s is a %v in the table and a %v in Design", path, kinds[f.Kind], typ)
		}
		delete(rows, path)
	})
	for path := range rows {
		t.Errorf("%s of the table is no member of Design", path)
	}
	if members < 130 {
		t.Errorf("only %d members seen", members)
	}
}

// TestFieldsReadWell asks of every row for what a form and a reader need.
func TestFieldsReadWell(t *testing.T) {
	for _, part := range Parts() {
		if part.Name == "" || (part.Of == "") != (part.Path == "") || part.List != (part.Path == "series_resistances") {
			t.Errorf("part %q: %q of %q, list %v", part.Path, part.Name, part.Of, part.List)
		}
		for _, f := range part.Fields {
			if f.Name == "" || f.Where == "" {
				t.Errorf("%s has no name or no place where it is found", f.Path)
			}
			if (f.Kind == Number || f.Kind == Rows) && f.Symbol == "" {
				t.Errorf("%s has no symbol", f.Path)
			}
			if (f.Kind == Choice) != (len(f.Options) > 1) || (f.Kind == Rows) != (f.XName != "" && f.YName != "") {
				t.Errorf("%s has options %v, columns %q and %q", f.Path, f.Options, f.XName, f.YName)
			}
			if got, there := FieldAt(f.Path); !there || got.Name != f.Name {
				t.Errorf("%s isn't found by its path", f.Path)
			}
		}
	}
	if f, there := FieldAt("series_resistances[7].resistance"); !there || f.Unit != "Ω" {
		t.Error("a row of a list isn't found by its path")
	}
	if _, there := FieldAt("switch"); there {
		t.Error("a part is no field")
	}
}

// TestDefaults asks Prepare's copy of a design for every default, and for every stated
// 0 to be kept; the caller's design stays as it was.
func TestDefaults(t *testing.T) {
	d := lean()
	before, _ := json.Marshal(d)
	m, err := Prepare(d)
	if err != nil {
		t.Fatal(err)
	}
	checked := 0
	for _, part := range Parts() {
		for _, f := range part.Fields {
			slot, there := m.design.Slot(f.Path, false)
			n, number := slot.(*Num)
			if !there || !number || n.Stated {
				continue
			}
			checked++
			if n.V != f.Default {
				t.Errorf("%s holds %g, want %g", f.Path, n.V, f.Default)
			}
		}
	}
	if checked < 60 {
		t.Errorf("only %d defaults seen", checked)
	}
	if after, _ := json.Marshal(d); !bytes.Equal(before, after) {
		t.Error("Prepare wrote into the caller's design")
	}
	d.SyncSwitch.VSD = N(0)
	if m, err = Prepare(d); err != nil || m.design.SyncSwitch.VSD.V != 0 {
		t.Errorf("a stated 0 became %v (%v)", m.design.SyncSwitch.VSD, err)
	}
}
