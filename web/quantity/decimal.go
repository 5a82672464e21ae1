package quantity

import (
	"math"
	"strconv"
	"strings"
)

// decimal is a finite value as digits, d.ddd × 10^exponent; zero has none.
type decimal struct {
	negative bool
	digits   string
	exponent int
}

// shortest gives the fewest digits that still mean v.
func shortest(v float64) decimal { return split(v, -1) }

// rounded gives v in so many significant digits, rounded once.
func rounded(v float64, digits int) decimal { return split(v, digits-1) }

func split(v float64, precision int) decimal {
	if v == 0 {
		return decimal{}
	}
	mantissa, exponent, _ := strings.Cut(strconv.FormatFloat(math.Abs(v), 'e', precision, 64), "e")
	e, err := strconv.Atoi(exponent)
	if err != nil {
		panic("quantity: " + err.Error()) // only for NaN and infinity, which no caller lets through
	}
	return decimal{v < 0, strings.Replace(mantissa, ".", "", 1), e}
}

// at writes the decimal in units of 10^power, without exponent.
func (d decimal) at(power int) string {
	if d.digits == "" {
		return "0"
	}
	return d.sign() + placePoint(d.digits, d.exponent-power+1)
}

// scientific writes the decimal with an exponent, as Parse reads it.
func (d decimal) scientific() string {
	return d.sign() + placePoint(d.digits, 1) + "e" + strconv.Itoa(d.exponent)
}

func (d decimal) sign() string {
	if d.negative {
		return "-"
	}
	return ""
}

// placePoint sets a decimal point behind the first whole digits, with zeros
// where there are none.
func placePoint(digits string, whole int) string {
	switch {
	case whole <= 0:
		return "0." + strings.Repeat("0", -whole) + digits
	case whole >= len(digits):
		return digits + strings.Repeat("0", whole-len(digits))
	}
	return digits[:whole] + "." + digits[whole:]
}

func finite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }
