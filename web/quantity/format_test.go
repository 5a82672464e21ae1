package quantity

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestFormat(t *testing.T) {
	for _, row := range []struct {
		v    float64
		unit Unit
		want string
	}{
		{11e-3, "Ω", "11 mΩ"},
		{250e3, "Hz", "250 kHz"},
		{22e-6, "H", "22 µH"},
		{1.75, "", "1.75"},
		{0.3, "", "0.3"},
		{-40, "°C", "-40 °C"},
		{4700, "Ω", "4.7 kΩ"},
		{1e8, "A/s", "100 A/µs"},
		{2.5e9, "A/s", "2500 A/µs"},
		{5e3, "A/s", "5 A/ms"},
		{12, "A/s", "12 A/s"},
		{-1.8e-3, "V/K", "-1.8 mV/K"},
		{0.00393, "1/K", "0.00393 1/K"},
		{0.5, "K/W", "0.5 K/W"},
		{0.0005, "m", "500 µm"},
		{2, "m", "2 m"},
		{120e-6, "m²", "120 mm²"},
		{450e-9, "m³", "450 mm³"},
		{4.5e-6, "m³", "4.5 cm³"},
		{30, "%", "30 %"},
		{7, "W/m³", "7 W/m³"},
		{0, "V", "0 V"},
		{math.Copysign(0, -1), "V", "0 V"},
		{math.Nextafter(0.3, 1), "V", "300.00000000000004 mV"},
		{1000, "V", "1 kV"},
		{math.Nextafter(1000, 0), "V", "999.9999999999999 V"},
		{5e-324, "V", "5e-324 V"},
		{math.MaxFloat64, "V", "1.7976931348623157e308 V"},
		{1e-21, "V", "0.000001 fV"},
		{9e-22, "V", "9e-22 V"},
		{1e9, "", "1000000000"},
		{1e10, "", "1e10"},
		{1e-7, "", "1e-7"},
		{math.NaN(), "V", "—"},
		{math.Inf(-1), "", "—"},
	} {
		if got := Format(row.v, row.unit); got != row.want {
			t.Errorf("Format(%v, %q) = %q, want %q", row.v, row.unit, got, row.want)
		}
	}
}

func TestSplit(t *testing.T) {
	if number, unit := Split(0.011, "Ω"); number != "11" || unit != "mΩ" {
		t.Errorf("got %q, %q", number, unit)
	}
}

// anyFinite draws a value by its bits, so subnormal and huge ones come up as
// often as their share of all floats, or by decade, as engineers meet them.
func anyFinite() *rapid.Generator[float64] {
	bits := rapid.Map(rapid.Uint64(), math.Float64frombits).Filter(finite)
	subnormal := rapid.Map(rapid.Uint64Range(1, 1<<52-1), math.Float64frombits)
	decade := rapid.Custom(func(t *rapid.T) float64 {
		v := rapid.Float64Range(1, 10).Draw(t, "digits") * math.Pow10(rapid.IntRange(-18, 15).Draw(t, "power"))
		return math.Copysign(v, rapid.SampledFrom([]float64{1, -1}).Draw(t, "sign"))
	})
	return rapid.OneOf(bits, subnormal, decade)
}

// Each check of rapid draws a hundred; a thousand values in all units follow
// from each of them, so 1e5 and more are tried.
func TestFormatThenParseIsTheSameFloat(t *testing.T) {
	tried := 0
	rapid.Check(t, func(t *rapid.T) {
		for range 1000 {
			v := anyFinite().Draw(t, "v")
			u := rapid.SampledFrom(specs).Draw(t, "unit").unit
			roundTrip(t, v, u)
			tried++
		}
	})
	if tried < 1e5 {
		t.Errorf("only %d values were tried", tried)
	}
}

func roundTrip(t interface{ Errorf(string, ...any) }, v float64, u Unit) {
	text := Format(v, u)
	got, err := Parse(text, u)
	if v += 0; err != nil || math.Float64bits(got) != math.Float64bits(v) { // -0 + 0 is 0
		t.Errorf("%v in %q is written %q and read as %v, %v", v, u, text, got, err)
	}
}

// The neighbours of every place where the writing changes.
func TestFormatThenParseAtBoundaries(t *testing.T) {
	for _, s := range specs {
		for power := -24; power <= 24; power++ {
			v := math.Pow10(power)
			for _, near := range []float64{v, math.Nextafter(v, 0), math.Nextafter(v, math.Inf(1))} {
				roundTrip(t, near, s.unit)
				roundTrip(t, -near, s.unit)
			}
		}
		for _, v := range []float64{math.SmallestNonzeroFloat64, 0x1p-1022, math.MaxFloat64} {
			roundTrip(t, v, s.unit)
			roundTrip(t, math.Nextafter(v, 0), s.unit)
		}
	}
}

func TestFormatFitsTheLongestTextRead(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		u := rapid.SampledFrom(specs).Draw(t, "unit").unit
		if text := Format(anyFinite().Draw(t, "v"), u); len([]rune(text)) >= 40 {
			t.Errorf("%q is long", text)
		}
	})
}

func TestShow(t *testing.T) {
	for _, row := range []struct {
		v      float64
		unit   Unit
		digits int
		want   string
	}{
		{0.0234, "W", 3, "23.4 mW"},
		{1.5, "W", 3, "1.50 W"},
		{12345, "", 3, "12300"},
		{85.04, "°C", 3, "85.0 °C"},
		{-1.234, "V", 2, "-1.2 V"},
		{0, "W", 3, "0 W"},
		{math.Copysign(0, -1), "W", 3, "0 W"},
		{0, "", 3, "0"},
		{999.4, "W", 3, "999 W"},
		{999.9999, "W", 3, "1.00 kW"},
		{999.5, "W", 3, "1.00 kW"}, // a tie, to even
		{math.Nextafter(999.5, 0), "W", 3, "999 W"},
		{math.Nextafter(999.5, 1000), "W", 3, "1.00 kW"},
		{math.Nextafter(1000, 0), "W", 4, "1.000 kW"},
		{math.Nextafter(1000, 2000), "W", 4, "1.000 kW"},
		{0.9996, "W", 3, "1.00 W"},
		{math.Nextafter(1e-3, 0), "W", 3, "1.00 mW"},
		{-999.9999, "W", 3, "-1.00 kW"},
		{1234.5, "W", 0, "1 kW"},
		{0.1, "W", 99, "100.00000000000001 mW"},
		{1e8, "A/s", 3, "100 A/µs"},
		{0.0000123, "1/K", 3, "0.0000123 1/K"},
		{1e-30, "W", 3, "< 0.000000000001 fW"},
		{-1e-30, "W", 3, "> -0.000000000001 fW"},
		{1e300, "W", 3, "> 1000000000000000 GW"},
		{-1e300, "W", 3, "< -1000000000000000 GW"},
		{math.NaN(), "W", 3, "—"},
		{math.Inf(1), "W", 3, "—"},
	} {
		if got := Show(row.v, row.unit, row.digits); got != row.want {
			t.Errorf("Show(%v, %q, %d) = %q, want %q", row.v, row.unit, row.digits, got, row.want)
		}
	}
}

// What is shown is near the value, never "-0" and never in exponents.
func TestShowIsNear(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := math.Pow(10, rapid.Float64Range(-20, 15).Draw(t, "log"))
		u := rapid.SampledFrom([]Unit{"W", "V", "Hz", "H", "s"}).Draw(t, "unit")
		text := Show(-v, u, 4)
		got, err := Parse(text, u)
		if err != nil || math.Abs(got+v) > 0.5001e-3*v || strings.Contains(text, "e-") {
			t.Errorf("%v is shown as %q, read as %v, %v", -v, text, got, err)
		}
	})
}

func TestScale(t *testing.T) {
	s := ScaleFor(0.0234, "W")
	if s.Prefix != "m" || s.Unit != "mW" || s.Factor != 1e-3 {
		t.Errorf("got %+v", s)
	}
	if s := ScaleFor(1e8, "A/s"); s.Prefix != "M" || s.Unit != "A/µs" || s.Factor != 1e6 {
		t.Errorf("got %+v", s)
	}
}

func TestScaleNumber(t *testing.T) {
	for _, row := range []struct {
		largest, v float64
		unit       Unit
		digits     int
		want       string
	}{
		{0.0234, 0.0234, "W", 3, "23.4"},
		{0.0234, 0.00119, "W", 3, "1.2"},
		{0.0234, 0.00005, "W", 3, "0.1"}, // a tie, away from zero
		{0.0234, 0.0000499, "W", 3, "0.0"},
		{0.0234, -0.0000499, "W", 3, "0.0"},
		{0.0234, -0.00005001, "W", 3, "-0.1"},
		{0.0234, 0, "W", 3, "0"},
		{0.0234, math.Copysign(0, -1), "W", 3, "0"},
		{0.0234, 5, "W", 3, "5000.0"},
		{1.5, 0.0996, "W", 3, "0.10"},
		{1.5, 0.996, "W", 3, "1.00"},
		{1.5, 1.005, "W", 3, "1.00"}, // the float lies below 1.005
		{999.6, 999.6, "W", 3, "1.00"},
		{999.4, 999.4, "W", 3, "999"},
		{999.4, 0.4, "W", 3, "0"},
		{999.4, 0.6, "W", 3, "1"},
		{123456, 123456, "", 3, "123456"},
		{0.0123, 0.0123, "1/K", 3, "0.0123"},
		{0.0123, 0.001, "1/K", 3, "0.0010"},
		{0, 1, "W", 3, "1.00"},
		{math.Inf(1), 1, "W", 3, "1.00"},
		{1, math.NaN(), "W", 3, "—"},
		{1e-300, 1e-300, "", 3, "0.000000000000"},
		{4.5e-6, 450e-9, "m³", 3, "0.45"},
	} {
		s := ScaleFor(row.largest, row.unit)
		if got := s.Number(row.v, row.digits); got != row.want {
			t.Errorf("ScaleFor(%v, %q).Number(%v, %d) = %q, want %q", row.largest, row.unit, row.v, row.digits, got, row.want)
		}
	}
}

// A Scale made by hand without ScaleFor counts in the unit itself.
func TestZeroScale(t *testing.T) {
	if got := (Scale{}).Number(2.345, 3); got != "2.35" && got != "2.34" {
		t.Errorf("got %q", got)
	}
}
