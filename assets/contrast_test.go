package assets

import (
	"fmt"
	"io/fs"
	"math"
	"regexp"
	"strconv"
	"testing"
)

// A colour has red, green and blue from 0 to 1, as written (gamma-encoded sRGB).
type colour [3]float64

// luminance is the relative luminance of WCAG 2.2, "Dfn. relative luminance".
func (c colour) luminance() float64 {
	linear := func(v float64) float64 {
		if v <= 0.04045 {
			return v / 12.92
		}
		return math.Pow((v+0.055)/1.055, 2.4)
	}
	return 0.2126*linear(c[0]) + 0.7152*linear(c[1]) + 0.0722*linear(c[2])
}

// contrast is the ratio of WCAG 2.2, "Dfn. contrast ratio", from 1 to 21.
func contrast(a, b colour) float64 {
	high, low := a.luminance(), b.luminance()
	return (math.Max(high, low) + 0.05) / (math.Min(high, low) + 0.05)
}

// over lays c with the given opacity on the ground, as a browser composites.
func (c colour) over(ground colour, opacity float64) colour {
	for i := range c {
		c[i] = opacity*c[i] + (1-opacity)*ground[i]
	}
	return c
}

func parseColour(t *testing.T, hex string) colour {
	t.Helper()
	n, err := strconv.ParseUint(hex, 16, 32)
	if err != nil || len(hex) != 6 {
		t.Fatalf("#%s is no colour of six digits", hex)
	}
	return colour{float64(n>>16) / 255, float64(n>>8&255) / 255, float64(n&255) / 255}
}

// tokens returns the colours of the stylesheet by scheme and name.
func tokens(t *testing.T) map[string]map[string]colour {
	t.Helper()
	text, err := files.ReadFile("tokens.css")
	if err != nil {
		t.Fatal(err)
	}
	schemes := map[string]map[string]colour{"light": {}, "dark": {}}
	token := regexp.MustCompile(`--(\w+): light-dark\(#(\w+), #(\w+)\);`)
	for _, m := range token.FindAllStringSubmatch(string(text), -1) {
		schemes["light"][m[1]] = parseColour(t, m[2])
		schemes["dark"][m[1]] = parseColour(t, m[3])
	}
	if len(schemes["light"]) != 24 {
		t.Errorf("%d colours read, want 24: has the way they are written changed?", len(schemes["light"]))
	}
	return schemes
}

func TestContrastKnown(t *testing.T) {
	// Black on white is 21 by definition; #767676 is the well-known lightest grey
	// that reaches 4.5 on white (computed by the formula: 4.54).
	if got := contrast(colour{}, colour{1, 1, 1}); math.Abs(got-21) > 1e-9 {
		t.Errorf("black on white %v, want 21", got)
	}
	if got := contrast(parseColour(t, "767676"), colour{1, 1, 1}); math.Abs(got-4.54) > 0.005 {
		t.Errorf("#767676 on white %v, want 4.54", got)
	}
}

func TestContrasts(t *testing.T) {
	text := []string{"ink", "dim", "mark"} // WCAG 2.2, 1.4.3: text 4.5
	drawn := []string{"edge", "c1", "c2", "c3", "c4", "c5", "c6"}
	for scheme, colours := range tokens(t) {
		need := func(name, ground string, least float64) {
			if got := contrast(colours[name], colours[ground]); got < least {
				t.Errorf("%s: %s on %s has %.2f, want %v", scheme, name, ground, got, least)
			}
		}
		for _, name := range text {
			need(name, "bg", 4.5)
			need(name, "card", 4.5)
			need(name, "wash", 4.5)
		}
		for _, name := range drawn { // 1.4.11: what must be seen 3
			need(name, "bg", 3)
			need(name, "card", 3)
		}
		for _, name := range drawn[1:] {
			need("bg", name, 4.5) // the names within the watt flow
		}
		need("bg", "dim", 4.5) // the label of a hovered button
	}
}

// The deepest shade of the ledger lies under figures and under the dagger.
func TestContrastOnShades(t *testing.T) {
	sheet, err := files.ReadFile("sheet.css")
	if err != nil {
		t.Fatal(err)
	}
	shades := regexp.MustCompile(`\.s(\d+) \{ --share: ([\d.]+)%; \}`).FindAllSubmatch(sheet, -1)
	if len(shades) != 11 {
		t.Fatalf("%d shades read, want s0 to s10", len(shades))
	}
	deepest, err := strconv.ParseFloat(string(shades[10][2]), 64)
	if err != nil {
		t.Fatal(err)
	}
	for scheme, colours := range tokens(t) {
		for part := range 6 {
			name := fmt.Sprintf("c%d", part+1)
			ground := colours[name].over(colours["bg"], deepest/100)
			if got := contrast(colours["ink"], ground); got < 4.5 {
				t.Errorf("%s: ink on s10 of %s has %.2f, want 4.5", scheme, name, got)
			}
		}
	}
}

// What is drawn and written on the map's shades is seen on each of them, and the
// shades step away from the ground by their lightness alone.
func TestContrastOnTheMap(t *testing.T) {
	for scheme, colours := range tokens(t) {
		before := contrast(colours["m0"], colours["bg"])
		for i := range 10 {
			name := fmt.Sprintf("m%d", i)
			for on, least := range map[string]float64{"ink": 4.5, "mark": 3} {
				if got := contrast(colours[on], colours[name]); got < least {
					t.Errorf("%s: %s on %s has %.2f, want %v", scheme, on, name, got, least)
				}
			}
			if i == 0 {
				continue
			}
			step := contrast(colours[name], colours[fmt.Sprintf("m%d", i-1)])
			if away := contrast(colours[name], colours["bg"]); step < 1.04 || i > 1 && away < before {
				t.Errorf("%s: %s steps by %.3f from the one before, to %.2f off the ground", scheme, name, step, away)
			} else {
				before = away
			}
		}
	}
}

// Outside the tokens no stylesheet and no script names a colour of its own.
func TestColoursAreTokens(t *testing.T) {
	literal := regexp.MustCompile(`#[0-9a-fA-F]{3,8}\b|\b(rgb|hsl|oklch)a?\(`)
	names, err := fs.Glob(files, "*.[cj]s*")
	if err != nil || len(names) < 7 {
		t.Fatalf("%v, %v: want all stylesheets and scripts", names, err)
	}
	for _, name := range names {
		text, err := files.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		if found := literal.Find(text); found != nil && name != "tokens.css" {
			t.Errorf("%s names the colour %s", name, found)
		}
	}
}
