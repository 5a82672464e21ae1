package quantity

import (
	"math"
	"strings"
)

// NoFigure is written for a value that is not finite.
const NoFigure = "—"

// Places of the first digit, counted from the decimal point, between which a
// number is written out once the prefixes have run out: narrow in Format, which
// can take an exponent, wide in Show, which can't.
const (
	lowest, highest           = -6, 9
	lowestShown, highestShown = -12, 15
)

// Format writes v in unit u as it stands in a field: in the fewest digits from
// which Parse gives the same float64 back, scaled with a prefix where the unit
// takes one, and a space before the unit ("11 mΩ", "100 A/µs", "1.75"). Only
// where the prefixes run out it takes an exponent. Negative zero is written 0.
func Format(v float64, u Unit) string { return join(Split(v, u)) }

// Split is Format in two parts, the number and the unit with its prefix, for
// where they stand apart: "11" and "mΩ".
func Split(v float64, u Unit) (number, prefixedUnit string) {
	if !finite(v) {
		return NoFigure, ""
	}
	d, s := shortest(v), specOf(u)
	size := s.size(d)
	if place := d.exponent - size.power; place < lowest || place > highest {
		return d.scientific(), string(u)
	}
	return d.at(size.power), size.text
}

// Show writes v for display only, rounded to the significant digits given and
// scaled after the rounding: Show(999.99, "W", 3) is "1.00 kW". Zero is "0",
// never "-0", and there is no exponent: a size beyond all prefixes is shown as
// a bound, "< 0.000000000001 fW".
func Show(v float64, u Unit, digits int) string {
	if !finite(v) {
		return NoFigure
	}
	s := specOf(u)
	d := rounded(v, max(1, min(digits, maxDigits)))
	size := s.size(d)
	switch place := d.exponent - size.power; {
	case place < lowestShown:
		return join(d.bound("<", lowestShown), size.text)
	case place > highestShown:
		return join(d.bound(">", highestShown), size.text)
	}
	return join(d.at(size.power), size.text)
}

// maxDigits is the most significant digits that any float64 needs.
const maxDigits = 17

// bound says on which side of 10^place the decimal lies.
func (d decimal) bound(side string, place int) string {
	switch {
	case d.negative && side == "<":
		side = ">"
	case d.negative:
		side = "<"
	}
	return side + " " + decimal{d.negative, "1", place}.at(0)
}

// size picks the largest size that leaves at least one digit before the point.
// Zero, with exponent 0, gets the unit itself.
func (s spec) size(d decimal) step {
	best := s.steps[0]
	for _, st := range s.steps {
		if st.power <= d.exponent {
			best = st
		}
	}
	return best
}

func join(number, unit string) string { return strings.TrimSuffix(number+" "+unit, " ") }

// Scale is one size for a whole column, so that its numbers compare by eye.
// ScaleFor makes it.
type Scale struct {
	Prefix string  // of the unit: "m"
	Unit   string  // with the prefix, for the column's head: "mW"
	Factor float64 // the value of 1 in this scale: 1e-3

	power   int // Factor = 10^power
	leading int // place of the first digit of the largest value, in this scale
}

// scaleDigits is how finely the largest value is looked at when its scale is
// chosen: 999.6 W are 1.00 kW.
const scaleDigits = 3

// ScaleFor chooses the scale in which the largest size in a column has one to
// three digits before the point. A largest value of 0, or one that is not
// finite, gives the unit itself.
func ScaleFor(largest float64, u Unit) Scale {
	s := specOf(u)
	if !finite(largest) {
		largest = 0
	}
	d := rounded(largest, scaleDigits)
	size := s.size(d)
	return Scale{
		Prefix:  size.prefix,
		Unit:    size.text,
		Factor:  math.Pow10(size.power),
		power:   size.power,
		leading: d.exponent - size.power,
	}
}

// Number writes v in this scale, without the unit. All numbers of a column
// have the same decimals, so many that its largest value has the significant
// digits given. A value that rounds to nothing is "0.00", zero itself "0".
func (s Scale) Number(v float64, digits int) string {
	switch {
	case !finite(v):
		return NoFigure
	case v == 0:
		return "0"
	}
	decimals := digits - 1 - s.leading
	return fixed(v, s.power, max(0, min(decimals, -lowestShown)))
}

// fixed writes v in units of 10^power with so many decimals, rounded once.
func fixed(v float64, power, decimals int) string {
	d := shortest(v)
	last := power - decimals // the power of ten of the last digit written
	digits := d.exponent - last + 1
	switch {
	case digits > 0:
		d = rounded(v, min(digits, maxDigits))
	case digits == 0 && d.digits >= "5":
		d = decimal{d.negative, "1", last}
	default:
		d = decimal{digits: "0", exponent: last}
	}
	return padDecimals(d.at(power), decimals)
}

// padDecimals adds the zeros that a rounding to 17 digits left out.
func padDecimals(number string, decimals int) string {
	whole, fraction, _ := strings.Cut(number, ".")
	if decimals == 0 {
		return whole
	}
	return whole + "." + fraction + strings.Repeat("0", max(0, decimals-len(fraction)))
}
