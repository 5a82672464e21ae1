// Package quantity reads and writes values the way engineers do: with SI
// prefixes ("4.7 kΩ", "22u") and with the letter codes of schematics ("4k7").
//
// It is the only place where text becomes a number. Parse rounds once, so a
// value is the float64 nearest to what was typed, and Format writes text from
// which Parse gives the same float64 back. Show and Scale round for display.
package quantity

import (
	"slices"
	"strings"
)

// Unit is the unit a field is in: an SI unit without prefix ("V", "Ω", "m²",
// "K/W", "A/s" …), "°C", "%" (30 means 30 %), or "" for a plain number.
type Unit string

// spelling is one way to write a unit.
type spelling struct {
	text  string
	power int  // of ten, over the unit itself: 6 for "A/µs" in A/s
	whole bool // takes no prefix in front
	word  bool // "ohm": letter case does not matter
}

// step is one size in which a unit is written: "mΩ" with power -3.
type step struct {
	prefix, text string
	power        int
}

// spec is all there is to know about writing one unit.
type spec struct {
	unit      Unit
	spellings []spelling
	prefixes  string // those that may be typed, in canonical letters
	dimension int    // 2 for m²: a prefix counts squared
	codes     string // letters that may stand for the decimal point
	steps     []step // sizes for writing, ascending
	example   string
}

// prefixPower gives the power of ten of each prefix letter.
var prefixPower = map[rune]int{
	'f': -15, 'p': -12, 'n': -9, 'µ': -6, 'm': -3, 'k': 3, 'M': 6, 'G': 9, 'T': 12,
}

// canonical maps the letters people type to the prefix they mean.
func canonical(letter rune) rune {
	switch letter {
	case 'u':
		return 'µ'
	case 'K':
		return 'k'
	}
	return letter
}

const (
	common = "fpnµmkMG"
	small  = "fpnµm" // with a kelvin near by, where "K" must not be kilo
)

// specs holds every unit, in the order in which a foreign unit is recognised.
//
// The letter codes for Ω and F follow IEC 60062 (from memory); the same for other
// units and "3V3" are common practice on schematics.
var specs = []spec{
	si("V", common, "12 or 3.3", "volt", "volts").coded("V"),
	si("A", common, "10 or 250m", "amp", "amps", "ampere", "amperes").coded("µmk"),
	si("Ω", common+"T", "11m or 4k7", "ohm", "ohms").also(symbol("R")).coded("RµmkMGT"),
	si("F", common, "100n or 22u", "farad", "farads").coded("Ffpnµm"),
	si("H", common, "22u or 4u7", "henry", "henrys", "henries").coded("fpnµm"),
	si("C", common, "15n", "coulomb", "coulombs").coded("nµm"),
	si("s", common, "50n or 2u", "sec", "second", "seconds").coded("nµm"),
	si("Hz", common+"T", "250k or 1.2M", "hertz").coded("kMG"),
	si("W", common, "150m or 2.5", "watt", "watts").coded("µmk"),
	si("J", common, "1.5u", "joule", "joules").coded("nµm"),
	si("V·s", small, "30u", "volt-seconds").also(symbol("Vs"), symbol("Wb")),
	si("T", "fpnµmk", "200m", "tesla", "teslas"),
	si("m", "fpnµmk", "0.5 mm or 70 µm", "metre", "metres", "meter", "meters").
		also(whole("cm", -2), whole("dm", -1)),
	metric("m²", 2, "120 mm² or 1.2e-4", "m2", "m^2").
		also(whole("cm²", -4), whole("cm2", -4), whole("cm^2", -4)).sized("µ", "m"),
	metric("m³", 3, "4500 mm³ or 4.5 cm³", "m3", "m^3").
		also(whole("cm³", -6), whole("cm3", -6), whole("cm^3", -6)).sized("µ", "m", "c"),
	plain("K", "25").also(word("kelvin")).accepting("nµm"),
	plain("K/W", "1.5 or 40").accepting("m").
		also(symbol("°C/W"), symbol("C/W"), symbol("degC/W")),
	si("V/K", small, "-1.8m").also(symbol("V/°C"), symbol("V/C"), symbol("V/degC")),
	plain("1/K", "0.004 or 0.4 %/K").also(perKelvin("K", "°C", "C", "degC")...),
	slope(),
	plain("°C", "25 or -40").
		also(symbol("C"), word("degC"), word("celsius")),
	plain("%", "30").also(word("percent")),
	plain("", "1.75 or 30 %").
		also(whole("%", -2), spelling{text: "percent", power: -2, whole: true, word: true}, whole("ppm", -6)),
}

// specOf finds a unit; one that is not listed is written without prefixes.
func specOf(u Unit) spec {
	if i := slices.IndexFunc(specs, func(s spec) bool { return s.unit == u }); i >= 0 {
		return specs[i]
	}
	return plain(u, "1.5")
}

func symbol(text string) spelling           { return spelling{text: text} }
func word(text string) spelling             { return spelling{text: text, word: true} }
func whole(text string, power int) spelling { return spelling{text: text, power: power, whole: true} }

// plain is a unit written without prefix.
func plain(u Unit, example string) spec {
	return spec{
		unit: u, dimension: 1, example: example,
		spellings: []spelling{symbol(string(u))},
		steps:     []step{{text: string(u)}},
	}
}

// si is a unit typed and written with the prefixes given.
func si(u Unit, prefixes, example string, words ...string) spec {
	s := plain(u, example).accepting(prefixes)
	for _, w := range words {
		s.spellings = append(s.spellings, word(w))
	}
	return s.sized(strings.Split(prefixes, "")...)
}

// metric is a power of the metre: its prefixes count squared or cubed.
func metric(u Unit, dimension int, example string, spellings ...string) spec {
	s := plain(u, example).accepting("nµmk")
	s.dimension = dimension
	for _, text := range spellings {
		s.spellings = append(s.spellings, symbol(text))
	}
	return s
}

// slope is A/s, typed and written as data sheets give di/dt: "100 A/µs".
func slope() spec {
	s := plain("A/s", "100 A/µs or 1e8").accepting(common)
	s.spellings = append(s.spellings,
		spelling{text: "A/ms", power: 3},
		spelling{text: "A/µs", power: 6},
		spelling{text: "A/us", power: 6},
		spelling{text: "A/ns", power: 9})
	s.steps = append(s.steps, step{"k", "A/ms", 3}, step{"M", "A/µs", 6})
	return s
}

// perKelvin lists the spellings of 1/K over each spelling of the kelvin.
func perKelvin(kelvins ...string) []spelling {
	var all []spelling
	for _, k := range kelvins {
		all = append(all, whole("1/"+k, 0), whole("/"+k, 0), whole("%/"+k, -2), whole("ppm/"+k, -6))
	}
	return all
}

func (s spec) also(more ...spelling) spec {
	s.spellings = append(s.spellings, more...)
	return s
}

func (s spec) accepting(prefixes string) spec {
	s.prefixes = prefixes
	return s
}

func (s spec) coded(letters string) spec {
	s.codes = letters
	return s
}

// sized adds the sizes in which the unit is written.
func (s spec) sized(prefixes ...string) spec {
	for _, p := range prefixes {
		power := -2 // centi, the only one outside the steps of a thousand
		if p != "c" {
			power = prefixPower[[]rune(p)[0]]
		}
		s.steps = append(s.steps, step{p, p + string(s.unit), power * s.dimension})
	}
	slices.SortFunc(s.steps, func(a, b step) int { return a.power - b.power })
	return s
}

// bare says whether a prefix may stand without its unit: "22u", but not for
// an area, where "5µ" could be meant squared or not.
func (s spec) bare() bool { return s.dimension == 1 }

// is says whether text is this spelling.
func (sp spelling) is(text string) bool {
	return sp.text == text || sp.word && strings.EqualFold(sp.text, text)
}

// match reads what stands behind the number, without spaces, and gives the
// power of ten it stands for.
func (s spec) match(suffix string) (power int, ok bool) {
	if suffix == "" {
		return 0, true
	}
	for _, sp := range s.spellings {
		if sp.is(suffix) {
			return sp.power, true
		}
	}
	power, rest, ok := s.cutPrefix(suffix)
	if !ok || rest == "" {
		return power, ok && s.bare()
	}
	for _, sp := range s.spellings {
		if !sp.whole && sp.is(rest) {
			return power + sp.power, true
		}
	}
	return 0, false
}

// spelled says whether text names the unit without a prefix.
func (s spec) spelled(text string) bool {
	return slices.ContainsFunc(s.spellings, func(sp spelling) bool { return sp.is(text) })
}

// prefixable says whether text names the unit in a way that takes a prefix.
func (s spec) prefixable(text string) bool {
	return slices.ContainsFunc(s.spellings, func(sp spelling) bool { return !sp.whole && sp.is(text) })
}

// cutPrefix takes one prefix that the unit accepts off the front.
func (s spec) cutPrefix(suffix string) (power int, rest string, ok bool) {
	for i, letter := range suffix {
		if i > 0 {
			return power, suffix[i:], ok
		}
		p := canonical(letter)
		power, ok = prefixPower[p]*s.dimension, strings.ContainsRune(s.prefixes, p)
	}
	return power, "", ok
}
