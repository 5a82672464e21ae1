package quantity

import (
	"errors"
	"slices"
	"strings"
	"testing"
)

// refused is a text that must not be read, with words that the message must
// hold and all the readings it must offer.
type refused struct {
	text     string
	unit     Unit
	words    string
	readings []string
}

var rejected = []refused{
	{"", "Ω", "Enter a value in Ω, such as 11m or 4k7.", nil},
	{" \u2009 ", "", "Enter a plain number", nil},
	{strings.Repeat("1", 65), "V", "longer than 64 characters", nil},
	{strings.Repeat("Ω", 65), "Ω", "longer than 64 characters", nil},

	// What strconv would take.
	{"NaN", "V", "not a finite number", nil},
	{"inf", "V", "not a finite number", nil},
	{"-Infinity", "V", "not a finite number", nil},
	{"∞", "V", "not a finite number", nil},
	{"0x1p-2", "V", "hexadecimal", nil},
	{"-0X10", "V", "hexadecimal", nil},
	{"1_000", "V", "underscores", []string{"1000"}},

	// Commas.
	{"1,234", "V", `"1,234" can be read as 1.234 or 1234. Enter the one you mean.`, []string{"1.234", "1234"}},
	{"-12,345 mV", "V", "can be read as", []string{"-12.345 mV", "-12345 mV"}},
	{"8 F", "Ω", `"8 F" is in F.`, nil},
	{"1,234,567", "V", "parted by commas", []string{"1234567"}},
	{"1,234.5", "V", "parted by commas", []string{"1234.5"}},
	{"1.234,5", "V", "thousands are not parted", []string{"1234.5"}},
	{"1,2,3", "V", "has a comma", nil},
	{"3,", "V", "has a comma", nil},

	// Letter codes out of place.
	{"2p5", "V", `"2p5" can be read as 2.5 V or 2.5 pV.`, []string{"2.5 V", "2.5 pV"}},
	{"2p5", "A", "can be read as", []string{"2.5 A", "2.5 pA"}},
	{"2p5", "", "decimal mark", []string{"2.5"}},
	{"2p5", "°C", "decimal mark", []string{"2.5 °C"}},
	{"4k7", "V", "not read in this unit", []string{"4.7 kV"}},
	{"4k7", "", "A plain number takes no prefix", []string{"4.7e3"}},
	{"4k7", "°C", `The prefix "k" is not read`, nil},
	{"2p5", "Ω", "can be read as", []string{"2.5 Ω", "2.5 pΩ"}},
	{"2R2", "V", "R stands for ohms", nil},
	{"R47", "H", "R stands for ohms", nil},
	{"10R", "V", "is in Ω", nil},
	{"4.7k3", "Ω", "besides a decimal point", nil},
	{"1e3k3", "Ω", "besides a decimal point", nil},
	{"4k7k", "Ω", "two prefixes", nil},
	{"4k7 mΩ", "Ω", "two prefixes", nil},
	{"4k7V", "Ω", "is in V", nil},
	{"4x7", "Ω", "can't be read", nil},
	{"V3", "V", "no number", nil},
	{"5m2", "m", "is in m²", nil},

	// Wrong units.
	{"5 A", "V", `"5 A" is in A. Enter a value in V, such as`, nil},
	{"5 mA", "V", "is in A", nil},
	{"5 V", "", "is in V", nil},
	{"30 %", "V", "is in %", nil},
	{"298 K", "°C", "is in K", nil},
	{"77 F", "°C", "is in F", nil},
	{"5 mm", "m²", "is in m", nil},
	{"5 mm²", "m³", "is in m²", nil},
	{"100 A", "A/s", "is in A", nil},
	{"2 mV", "V/K", "is in V", nil},
	{"2 K", "K/W", "is in K", nil},

	// Letter case.
	{"250 khz", "Hz", "Capital and small letters differ", []string{"250 kHz"}},
	{"250 mhz", "Hz", "can be read as", []string{"250 mHz", "250 MHz"}},
	{"100U", "F", "Capital and small", []string{"100 u"}},
	{"100N", "F", "Capital and small", []string{"100 n"}},
	{"12 v", "V", "Capital and small", []string{"12 V"}},

	// Prefixes out of place.
	{"25 m°C", "°C", `The prefix "m" is not read in a field in °C`, nil},
	{"25k", "K", "Capital and small", []string{"25 K"}},
	{"25K", "°C", "is in K", nil},
	{"5K", "K/W", "is in K", nil},
	{"4.7k", "", "A plain number takes no prefix", []string{"4.7e3"}},
	{"30 k%", "", "can't be read", nil},
	{"1T", "V", "is in T", nil},
	{"5G", "T", "is not read in a field in T", nil},
	{"5 mkΩ", "Ω", "two prefixes", nil},
	{"5kk", "Ω", "two prefixes", nil},
	{"5µ", "m²", "needs its unit", nil},
	{"5K", "V/K", "is in K", nil},
	{"4e3k", "", "A plain number takes no prefix", nil},
	{"5 MCM", "m", "can't be read", nil},
	{"0.5m", "m", "can be read as 0.5 m or 0.5 mm", []string{"0.5 m", "0.5 mm"}},

	// Leftovers.
	{"4.7 kΩ max", "Ω", "can't be read", nil},
	{"4.7;", "Ω", "can't be read", nil},
	{"5 7", "V", "space inside the number", nil},
	{"1234 567", "V", "space inside the number", nil},
	{"12 0000", "V", "space inside the number", nil},
	{"1\t234", "V", "can't be read", nil},
	{"1.2.3", "V", "can't be read", nil},
	{"5-6", "V", "can't be read", nil},
	{"4e", "V", "can't be read", nil},
	{"5²", "V", "can't be read", nil},
	{"--5", "V", "no number", nil},
	{"+-5", "V", "no number", nil},
	{"-", "V", "no number", nil},
	{".", "V", "no number", nil},
	{"k", "Ω", "no number", nil},
	{"V", "V", "no number", nil},
	{"abc", "V", "no number", nil},
	{"５", "V", "no number", nil}, // full width
	{"\xff", "V", "no number", nil},
	{"5\x00", "V", "can't be read", nil},
	{"—", "V", "no number", nil}, // what Format writes for no figure

	// Range.
	{"1e309", "V", "too large", nil},
	{"-1e309", "V", "too large", nil},
	{"1e306 k", "V", "too large", nil},
	{"1e999999999999999999999", "V", "too large", nil},
	{"1e-400", "V", "too close to zero", nil},
	{"1e-320 p", "V", "too close to zero", nil},
	{"1e-99999999999999999999", "V", "too close to zero", nil},
}

func TestParseRefuses(t *testing.T) {
	for _, row := range rejected {
		got, err := Parse(row.text, row.unit)
		var refusal *Error
		if !errors.As(err, &refusal) {
			t.Errorf("Parse(%q, %q) = %v, %v; want an *Error", row.text, row.unit, got, err)
			continue
		}
		if !strings.Contains(refusal.Error(), row.words) {
			t.Errorf("Parse(%q, %q) says %q; want in it %q", row.text, row.unit, refusal, row.words)
		}
		if !slices.Equal(refusal.Readings, row.readings) {
			t.Errorf("Parse(%q, %q) offers %q; want %q", row.text, row.unit, refusal.Readings, row.readings)
		}
	}
}
