package web

import (
	"fmt"
	"net/http"
	"net/url"
	"regexp"
	"slices"
	"strconv"

	"lossbook/budget"
	"lossbook/web/quantity"
)

// The number of revisions that a comparison holds.
const leastSides, mostSides = 2, 5

// pin names a revision for good: its design and its number in it.
type pin struct {
	design int64
	number int
}

func (p pin) String() string { return fmt.Sprintf("%d.%d", p.design, p.number) }

// lineup is what the address of a comparison says. Numbers of sides count from 1,
// in the order of the address.
type lineup struct {
	pins  []pin
	base  int    // the side that the others are compared with
	under int    // the side whose conditions hold for all; 0: each its own
	vin   string // "lowest", "nominal", "highest", or a value; "" is nominal
	load  string // share of full load, in %; "" is the last of the grid
	all   bool   // unchanged entries are shown too
	scale string // of the charts' load axis
}

var pinned = regexp.MustCompile(`^([1-9][0-9]{0,17})\.([1-9][0-9]{0,8})$`)

// readPin reads "{id}.{n}".
func readPin(text string) (pin, bool) {
	parts := pinned.FindStringSubmatch(text)
	if parts == nil {
		return pin{}, false
	}
	id, _ := strconv.ParseInt(parts[1], 10, 64)
	n, _ := strconv.Atoi(parts[2])
	return pin{id, n}, true
}

// readLineup reads an address; what can't be meant comes back as a list.
func readLineup(q url.Values) (lineup, []budget.FieldError) {
	a := lineup{vin: q.Get("vin"), load: q.Get("load"), all: q.Get("all") == "1", scale: q.Get("scale"), base: 1}
	var wrong []budget.FieldError
	refuse := func(path, message string) { wrong = append(wrong, budget.FieldError{Path: path, Message: message}) }
	for _, text := range q["r"] {
		p, ok := readPin(text)
		if !ok {
			refuse("r", fmt.Sprintf("“%s” names no revision: write the design’s number, a point and the revision’s, as in 1.2", clipped(text)))
		}
		a.pins = append(a.pins, p)
	}
	if n := len(a.pins); n < leastSides || n > mostSides {
		refuse("r", fmt.Sprintf("names %s: a comparison holds %d to %d", plural(n, "revision", "revisions"), leastSides, mostSides))
	}
	if text := q.Get("base"); text != "" {
		if a.base = sideNumber(text, len(a.pins)); a.base == 0 {
			refuse("base", fmt.Sprintf("must be the place of a revision in this address, 1 to %d", len(a.pins)))
		}
	}
	if text := q.Get("under"); text != "" {
		if a.under = sideNumber(text, len(a.pins)); a.under == 0 {
			refuse("under", fmt.Sprintf("must be the place of a revision in this address, 1 to %d", len(a.pins)))
		}
	}
	if _, err := a.input(); err != nil {
		refuse("vin", err.Error()+", or lowest, nominal or highest")
	}
	if a.loadIndex() < 0 {
		refuse("load", "is not one of the loads of the table")
	}
	return a, wrong
}

func clipped(text string) string {
	if r := []rune(text); len(r) > 40 {
		return string(r[:40]) + "…"
	}
	return text
}

// sideNumber reads a place in the address; 0 if it is none.
func sideNumber(text string, sides int) int {
	n, err := strconv.Atoi(text)
	if err != nil || n < 1 || n > sides {
		return 0
	}
	return n
}

func (a lineup) input() (inputAt, error) {
	switch a.vin {
	case "":
		return inputAt{end: "nominal"}, nil
	case "lowest", "nominal", "highest":
		return inputAt{end: a.vin}, nil
	}
	v, err := quantity.Parse(a.vin, "V")
	if err == nil && v <= 0 {
		err = fmt.Errorf("must be above 0")
	}
	return inputAt{volts: v}, err
}

// loadIndex is the place of the load in the grid; -1 if it is not there.
func (a lineup) loadIndex() int {
	grid := budget.LoadGrid()
	if blank(a.load) {
		return len(grid) - 1
	}
	return slices.IndexFunc(grid, func(part float64) bool { return loadShare(part) == a.load })
}

// carried lists the keys and values of an address that says this, always in the
// same order.
func (a lineup) carried() [][2]string {
	var list [][2]string
	for _, p := range a.pins {
		list = append(list, [2]string{"r", p.String()})
	}
	number := func(n int, usual bool) string {
		if usual {
			return ""
		}
		return strconv.Itoa(n)
	}
	all := ""
	if a.all {
		all = "1"
	}
	for _, o := range [][2]string{{"base", number(a.base, a.base < 2)}, {"under", number(a.under, a.under == 0)},
		{"vin", a.vin}, {"load", a.load}, {"all", all}, {"scale", a.scale}} {
		if o[1] != "" {
			list = append(list, o)
		}
	}
	return list
}

// query is the part of an address that says this.
func (a lineup) query() string {
	text, mark := "", "?"
	for _, o := range a.carried() {
		text += mark + o[0] + "=" + url.QueryEscape(o[1])
		mark = "&"
	}
	return text
}

func (a lineup) address() string { return "/compare" + a.query() }

// with returns the address after a change.
func (a lineup) with(change func(*lineup)) string {
	a.pins = slices.Clone(a.pins)
	change(&a)
	return a.address()
}

// without leaves a side out; what was said of it goes with it.
func (a lineup) without(i int) string {
	return a.with(func(b *lineup) {
		b.pins = slices.Delete(b.pins, i, i+1)
		b.base, b.under = shifted(b.base, i), shifted(b.under, i)
		b.base = max(b.base, 1)
	})
}

// shifted is a side's number after the side at index i has gone; 0 if it was it.
func shifted(number, i int) int {
	switch {
	case number == i+1:
		return 0
	case number > i+1:
		return number - 1
	}
	return number
}

// noRevision says which of the revisions asked for is not there.
func noRevision(p pin, err error) *Failure {
	return &Failure{Status: http.StatusNotFound, Title: "Not found", cause: err,
		Detail: fmt.Sprintf("There is no revision %d of design %d; the design may have been deleted. The others of this comparison are still there.", p.number, p.design)}
}
