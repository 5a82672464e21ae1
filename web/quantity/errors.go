package quantity

import (
	"fmt"
	"regexp"
	"slices"
	"strings"
	"unicode/utf8"
)

// Error says why a text was not read as a value, and what would be right.
type Error struct {
	Message  string   // one sentence or two, for the person who typed
	Readings []string // what the text could have meant; each can be typed as it is
}

// Error returns the message.
func (e *Error) Error() string { return e.Message }

func refuse(format string, args ...any) *Error {
	return &Error{Message: fmt.Sprintf(format, args...)}
}

// ambiguous refuses a text that can be read in more than one way.
func ambiguous(text string, readings ...string) *Error {
	e := refuse("%q can be read as %s. Enter the one you mean.", text, strings.Join(readings, " or "))
	e.Readings = readings
	return e
}

// instead refuses a text that has one likely reading.
func instead(reading, format string, args ...any) *Error {
	e := refuse(format, args...)
	e.Readings = []string{reading}
	return e
}

// wanted names what the field takes: "a value in Ω, such as 11m or 4k7".
func (s spec) wanted() string {
	if s.unit == "" {
		return "a plain number, such as " + s.example
	}
	return fmt.Sprintf("a value in %s, such as %s", s.unit, s.example)
}

func (s spec) tooLong() *Error {
	return refuse("This is longer than %d characters. Enter %s.", maxLength, s.wanted())
}

func (s spec) noNumber(text string) *Error {
	return refuse("There is no number at the start of %q. Enter %s.", text, s.wanted())
}

func (s spec) twoPoints(text string) *Error {
	return refuse("%q has a letter between its digits besides a decimal point or an exponent. Enter %s.", text, s.wanted())
}

func (s spec) outOfRange(what, limits string) *Error {
	return refuse("This value is %s to compute with: its size must be %s. Enter %s.", what, limits, s.wanted())
}

// refuseForm turns away texts that are no decimal number in the form read
// here, before any of it is read.
func (s spec) refuseForm(text string) *Error {
	unsigned := strings.ToLower(strings.TrimLeft(text, "+- "))
	switch {
	case text == "":
		return refuse("Enter %s.", s.wanted())
	case slices.Contains([]string{"nan", "inf", "infinity", "∞"}, unsigned):
		return refuse("%q is not a finite number. Enter %s.", text, s.wanted())
	case strings.HasPrefix(unsigned, "0x"):
		return refuse("%q is hexadecimal; only decimal numbers are read. Enter %s.", text, s.wanted())
	case strings.Contains(text, "_"):
		return without(text, "_", "underscores")
	case strings.Contains(text, ","):
		return s.refuseComma(text)
	}
	return nil
}

func without(text, mark, name string) *Error {
	reading := strings.ReplaceAll(text, mark, "")
	return instead(reading, "Digits are not parted by %s here. Enter %s.", name, reading)
}

// Shapes of numbers with commas. A group of three digits behind a single
// comma may be thousands or decimals, unless a zero leads.
var (
	eitherComma   = regexp.MustCompile(`^[+-]? ?[1-9][0-9]{0,2},[0-9]{3}(?:[^0-9.,].*)?$`)
	thousandComma = regexp.MustCompile(`^[+-]? ?[1-9][0-9]{0,2}(?:,[0-9]{3})+(?:\.[0-9]+)?(?:[^0-9.,].*)?$`)
	decimalComma  = regexp.MustCompile(`^[+-]? ?[0-9]*,[0-9]+(?:[^0-9.,].*)?$`)
	pointGroups   = regexp.MustCompile(`^[+-]? ?[1-9][0-9]{0,2}(?:\.[0-9]{3})+,[0-9]+(?:[^0-9.,].*)?$`)
)

// clearComma reads a comma that can only be a decimal mark as a point: "0,5",
// "7,25 nC". One before a group of three digits may part thousands.
func clearComma(text string) string {
	if decimalComma.MatchString(text) && !eitherComma.MatchString(text) {
		return strings.Replace(text, ",", ".", 1)
	}
	return text
}

// refuseComma refuses a comma that is a decimal mark to some and parts
// thousands to others, and says how the number is written here.
func (s spec) refuseComma(text string) *Error {
	point := strings.Replace(text, ",", ".", 1)
	joined := strings.ReplaceAll(text, ",", "")
	switch {
	case eitherComma.MatchString(text):
		return ambiguous(text, point, joined)
	case thousandComma.MatchString(text):
		return without(text, ",", "commas")
	case pointGroups.MatchString(text):
		reading := strings.Replace(strings.ReplaceAll(text, ".", ""), ",", ".", 1)
		return instead(reading, "The decimal mark here is a point, and thousands are not parted. Enter %s.", reading)
	}
	return refuse("%q has a comma; the decimal mark here is a point. Enter %s.", text, s.wanted())
}

// refuseCode explains why a letter can't stand for the decimal point here.
func (s spec) refuseCode(n number, letter rune, fraction string) *Error {
	typed := n.text + string(letter) + fraction
	point := n.text + "." + fraction
	inUnit := strings.TrimSpace(point + " " + string(s.unit))
	scaled := point + " " + string(letter) + string(s.unit)
	power, known := prefixPower[canonical(letter)]
	accepted := strings.ContainsRune(s.prefixes, canonical(letter))
	switch {
	case letter == 'R':
		return refuse("R stands for ohms, and this field is in another unit. Instead of %q enter %s.", typed, s.wanted())
	case !known || strings.HasPrefix(string(s.unit), "m"): // "5m2" is an area
		return s.refuseSuffix(n, string(letter)+fraction)
	case letter == 'p' && accepted:
		return ambiguous(typed, inUnit, scaled)
	case letter == 'p':
		return instead(inUnit, "The decimal mark here is a point. Enter %s for %q.", inUnit, typed)
	case !accepted:
		return s.noPrefix(point, string(letter), power)
	}
	return instead(scaled, "A letter for the decimal point, as in %q, is not read in this unit. Enter %s.", typed, scaled)
}

// refuseSuffix explains what is wrong with the text behind a number.
func (s spec) refuseSuffix(n number, suffix string) *Error {
	typed := n.text + " " + suffix
	if other, ok := foreign(suffix); ok && other != s.unit {
		return refuse("%q is in %s. Enter %s.", typed, other, s.wanted())
	}
	if found := s.otherCase(suffix); len(found) > 0 {
		for i := range found {
			found[i] = n.text + " " + found[i]
		}
		return ambiguousCase(typed, found)
	}
	if s.doublePrefix(suffix) {
		return s.twoPrefixes(typed)
	}
	if prefix, power, ok := s.lonePrefix(suffix); ok {
		return s.noPrefix(n.text, prefix, power)
	}
	if strings.Trim(suffix, "0123456789") == "" {
		return refuse("%q has a space inside the number. Enter %s.", typed, s.wanted())
	}
	return refuse("%q behind %s can't be read. Enter %s.", suffix, n.text, s.wanted())
}

func (s spec) twoPrefixes(typed string) *Error {
	return refuse("%q has two prefixes. Enter %s.", typed, s.wanted())
}

// noPrefix refuses a prefix that the unit doesn't take, or not on its own.
// Behind a plain number its meaning is clear, so it is offered as an exponent.
func (s spec) noPrefix(value, prefix string, power int) *Error {
	switch {
	case s.unit == "" && !strings.ContainsAny(value, "eE"):
		reading := fmt.Sprintf("%se%d", value, power)
		return instead(reading, "A plain number takes no prefix. Enter %s for %q.", reading, value+prefix)
	case !s.bare():
		return refuse("The prefix %q needs its unit beside it here. Enter %s.", prefix, s.wanted())
	case s.unit == "":
		return refuse("A plain number takes no prefix. Enter %s.", s.wanted())
	}
	return refuse("The prefix %q is not read in a field in %s. Enter %s.", prefix, s.unit, s.wanted())
}

func ambiguousCase(text string, found []string) *Error {
	if len(found) > 1 {
		return ambiguous(text, found...)
	}
	return instead(found[0], "Capital and small letters differ in units. Enter %s for %q.", found[0], text)
}

// otherCase finds what would be read if some letters were capital or small.
func (s spec) otherCase(suffix string) []string {
	var found []string
	for _, candidate := range s.writings() {
		if strings.EqualFold(candidate, suffix) && !slices.Contains(found, candidate) {
			found = append(found, candidate)
		}
	}
	return found
}

// writings lists what may stand behind a number, words left out.
func (s spec) writings() []string {
	var all []string
	prefixes := append([]string{""}, strings.Split(s.prefixes, "")...)
	if strings.Contains(s.prefixes, "µ") {
		prefixes = append(prefixes, "u")
	}
	for _, p := range prefixes {
		if s.bare() && p != "" {
			all = append(all, p)
		}
		for _, sp := range s.spellings {
			if !sp.word && !(sp.whole && p != "") {
				all = append(all, p+sp.text)
			}
		}
	}
	return all
}

// foreign names the unit that a text is in, whichever it is.
func foreign(suffix string) (Unit, bool) {
	for _, s := range specs {
		if s.spelled(suffix) {
			return s.unit, true
		}
	}
	for _, s := range specs {
		if _, rest, ok := s.cutPrefix(suffix); ok && s.prefixable(rest) {
			return s.unit, true
		}
	}
	return "", false
}

// doublePrefix recognises "mk" and "mkΩ".
func (s spec) doublePrefix(suffix string) bool {
	_, rest, ok := s.cutPrefix(suffix)
	if !ok {
		return false
	}
	_, unit, ok := s.cutPrefix(rest)
	return ok && (unit == "" || s.prefixable(unit))
}

// lonePrefix recognises a prefix of any kind, alone or before the unit.
func (s spec) lonePrefix(suffix string) (prefix string, power int, ok bool) {
	letter, size := utf8.DecodeRuneInString(suffix)
	power, ok = prefixPower[canonical(letter)]
	rest := suffix[size:]
	return suffix[:size], power, ok && (rest == "" || s.prefixable(rest))
}
