package quantity

import (
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// maxLength is the longest text read, in characters. The longest that Format
// writes has under 40.
const maxLength = 64

// Parse reads what a person typed for a field in unit u and returns the value
// in that unit, rounded once to the nearest float64.
//
// It takes an SI prefix with or without the unit ("22u", "22 µH"), the unit in
// symbols or words, decimal exponents, digits in groups of three set apart by
// spaces, a decimal comma that can be nothing else ("0,5"), and in most units a
// prefix in place of the decimal point ("4k7", "3n3").
// Letter case counts: "1M" is mega, "1m" is milli. What could be read in two
// ways is refused with both readings. The error is always an *Error; zero is
// always positive.
func Parse(text string, u Unit) (float64, error) {
	s := specOf(u)
	if utf8.RuneCountInString(text) > maxLength {
		return 0, s.tooLong()
	}
	text = clearComma(normalise(text))
	if err := s.refuseForm(text); err != nil {
		return 0, err
	}
	n, rest := scan(text)
	power, err := s.suffix(&n, rest)
	if err != nil {
		return 0, err
	}
	return n.value(power, s)
}

// sameMeaning replaces characters that look alike or mean the same.
var sameMeaning = strings.NewReplacer(
	"\u2212", "-", // minus sign
	"\u03bc", "µ", // Greek mu for the micro sign
	"\u2126", "Ω", // ohm sign for Greek omega
	"\u2103", "°C", // one character for degree Celsius
)

// normalise trims the text and leaves one kind each of space, minus, µ and Ω.
// Tabs and line breaks inside stay: they part two values, not one.
func normalise(text string) string {
	text = strings.Map(func(r rune) rune {
		switch {
		case r == '\u200b' || r == '\u2060' || r == '\ufeff': // of no width, from copied documents
			return ' '
		case unicode.Is(unicode.Zs, r):
			return ' '
		}
		return r
	}, text)
	return strings.TrimSpace(sameMeaning.Replace(text))
}

// number is a decimal as typed: digits × 10^exponent.
type number struct {
	text     string // as typed, for messages
	negative bool
	digits   string
	exponent int
	pure     bool // neither point nor exponent: a letter code may follow
}

// scan reads the number at the start of text, which may be empty, and returns
// what follows it.
func scan(text string) (n number, rest string) {
	rest = text
	if rest != "" && (rest[0] == '+' || rest[0] == '-') {
		n.negative = rest[0] == '-'
		rest = strings.TrimLeft(rest[1:], " ")
	}
	n.digits, rest = cutGroups(rest)
	n.pure = true
	if strings.HasPrefix(rest, ".") {
		var fraction string
		fraction, rest = cutDigits(rest[1:])
		n.digits += fraction
		n.exponent = -len(fraction)
		n.pure = false
	}
	if n.digits != "" {
		rest = n.cutExponent(rest)
	}
	n.text = text[:len(text)-len(rest)]
	return n, rest
}

func cutDigits(text string) (digits, rest string) {
	rest = strings.TrimLeft(text, "0123456789")
	return text[:len(text)-len(rest)], rest
}

// cutGroups reads whole digits, also in groups of exactly three as in
// "10 000". Any other space ends the number.
func cutGroups(text string) (digits, rest string) {
	digits, rest = cutDigits(text)
	if digits == "" || len(digits) > 3 {
		return digits, rest
	}
	for strings.HasPrefix(rest, " ") {
		group, after := cutDigits(rest[1:])
		if len(group) != 3 {
			break
		}
		digits, rest = digits+group, after
	}
	return digits, rest
}

// cutExponent reads "e3", "E-3"; a lone "e" is left where it stands.
func (n *number) cutExponent(text string) (rest string) {
	if text == "" || text[0] != 'e' && text[0] != 'E' {
		return text
	}
	signed := text[1:]
	unsigned := signed
	if unsigned != "" && (unsigned[0] == '+' || unsigned[0] == '-') {
		unsigned = unsigned[1:]
	}
	digits, rest := cutDigits(unsigned)
	if digits == "" {
		return text
	}
	n.exponent += clampedInt(signed[:len(signed)-len(rest)])
	n.pure = false
	return rest
}

// clampedInt reads an integer; beyond ±100000 it doesn't matter which.
func clampedInt(text string) int {
	const limit = 100_000
	i, err := strconv.Atoi(text)
	if err == nil {
		return max(-limit, min(i, limit))
	}
	if strings.HasPrefix(text, "-") {
		return -limit
	}
	return limit
}

// suffix reads what follows the number: nothing, a prefix, a unit, both, or
// the rest of a letter code. It returns the power of ten that it stands for.
func (s spec) suffix(n *number, rest string) (power int, err error) {
	glued := rest != "" && rest[0] != ' '
	unit := strings.ReplaceAll(rest, " ", "")
	power, ok := s.match(unit)
	switch {
	case ok && n.digits != "" && s.unit == "m" && unit == "m" && glued:
		return 0, ambiguous(n.text+rest, n.text+" m", n.text+" mm")
	case ok && n.digits != "":
		return power, nil
	}
	if letter, fraction, after, ok := cutCode(rest); ok {
		return s.code(n, letter, fraction, after)
	}
	if n.digits == "" {
		return 0, s.noNumber(n.text + rest)
	}
	return 0, s.refuseSuffix(*n, unit)
}

// cutCode parts "k7 Ω" into the letter, the digits behind it and the rest.
func cutCode(text string) (letter rune, fraction, rest string, ok bool) {
	letter, size := utf8.DecodeRuneInString(text)
	if !unicode.IsLetter(letter) {
		return 0, "", text, false
	}
	fraction, rest = cutDigits(text[size:])
	return letter, fraction, rest, fraction != ""
}

// code reads a number whose decimal point is a letter: "4k7", "R47", "3V3".
func (s spec) code(n *number, letter rune, fraction, after string) (power int, err error) {
	typed := n.text + string(letter) + fraction
	p, scales := prefixPower[canonical(letter)]
	switch {
	case !n.pure:
		return 0, s.twoPoints(typed)
	case !strings.ContainsRune(s.codes, canonical(letter)):
		return 0, s.refuseCode(*n, letter, fraction)
	case n.digits == "" && !scales && letter != 'R': // "V3" names a part, not 0.3 V
		return 0, s.noNumber(typed)
	}
	unit := strings.ReplaceAll(after, " ", "")
	if _, ok := s.match(unit); !ok {
		return 0, s.refuseSuffix(number{text: typed}, unit)
	}
	if unit != "" && !s.spelled(unit) {
		return 0, s.twoPrefixes(typed + after)
	}
	n.digits += fraction
	n.exponent -= len(fraction)
	return p, nil
}

// value rounds the decimal to the nearest float64, once: the prefix only
// moves the exponent. A value that is not zero and would become zero is
// refused, as one beyond the largest is.
func (n number) value(power int, s spec) (float64, error) {
	digits := strings.TrimLeft(n.digits, "0")
	if digits == "" {
		return 0, nil
	}
	v, err := strconv.ParseFloat(digits+"e"+strconv.Itoa(n.exponent+power), 64)
	switch {
	case err != nil:
		return 0, s.outOfRange("too large", "at most 1.8e308")
	case v == 0:
		return 0, s.outOfRange("too close to zero", "at least 5e-324, or 0")
	case n.negative:
		v = -v
	}
	return v, nil
}
