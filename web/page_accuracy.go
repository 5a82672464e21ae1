package web

import (
	"cmp"
	"fmt"
	"math"
	"net/http"
	"slices"
	"strconv"
	"strings"

	"lossbook/budget"
	"lossbook/budget/proof"
	"lossbook/web/view"
)

const accuracyAddress = "/accuracy"

// checkedAt is where it stands how far a figure of the ledger was checked.
func checkedAt(key string) string {
	switch kind, _, _ := strings.Cut(key, "."); kind {
	case subtotalKey, budgetKey, temperatureKey:
		return accuracyAddress
	case "layout":
		key = kind
	}
	return accuracyAddress + "#item-" + key
}

// accuracyPage shows every check with what is expected, what comes out and where it
// is from, and what no check is about.
func (s *Server) accuracyPage(w http.ResponseWriter, r *http.Request) error {
	e, err := s.evidence()
	if err != nil {
		return err
	}
	return show(w, r, http.StatusOK, view.AccuracyPage(e.model()))
}

func (e *evidence) model() view.Accuracy {
	a := view.Accuracy{Page: frame("How far the figures were checked"), Summary: e.summary(), Core: coreView(e.core), Cases: e.cases.words(), Bounds: boundsView(e.bounds)}
	for _, r := range e.results {
		if n := len(a.Groups); n == 0 || a.Groups[n-1].Title != r.Group {
			a.Groups = append(a.Groups, view.CheckGroup{ID: "group-" + strconv.Itoa(n+1), Title: r.Group})
		}
		group := &a.Groups[len(a.Groups)-1]
		group.Checks = append(group.Checks, checkView(r))
	}
	a.Items, a.Findings = e.covers()
	for _, o := range e.file.LeftOut {
		a.LeftOut = append(a.LeftOut, view.Method{What: o.What, How: o.Size})
	}
	return a
}

// summary counts: how many figures, how they are known, how many are missed.
func (e *evidence) summary() []string {
	figures, missed, unreached, checks := 0, 0, 0, 0
	known := map[proof.Knowledge]int{}
	for _, r := range e.results {
		unreached += len(r.Unreached)
		if len(r.Outcomes) > 0 {
			checks++
		}
		for _, o := range r.Outcomes {
			figures++
			known[r.Known]++
			if !o.Holds {
				missed++
			}
		}
	}
	verdict := "All are met within their tolerance."
	if missed > 0 {
		verdict = plural(missed, "is missed.", "are missed.")
	}
	return []string{
		fmt.Sprintf("%d figures of %d documents and forms are asked of the model, by the code that computes every budget: %d were read in the document named, %d read where another quotes it, %d worked out here from a published form. %s %s printed there can’t be asked for, and it is said why.",
			figures, checks, known[proof.Read], known[proof.SecondHand], known[proof.Derived], verdict, plural(unreached, "more", "more")),
		"No converter was measured for Lossbook, and no loss of a converter has been compared with a measured one: the documents compute theirs, most by the same equations. What they confirm is that no term is missing, wrong in size or counted twice. The core’s loss is the one that stands beside measurements of others.",
	}
}

func checkView(r proof.Result) view.Check {
	no := strconv.Itoa(r.ID)
	c := view.Check{ID: "check-" + no, No: no, Title: r.Title, Source: joined(", ", r.Document, r.Place), Known: string(r.Known), How: r.How, Slip: r.Slip, Inputs: pairs(r.Inputs)}
	last := ""
	for _, o := range r.Outcomes {
		f := figureView(o)
		if f.Note == last && last != "" {
			f.Note = "±" + o.Tolerance
		} else {
			last = f.Note
		}
		c.Figures = append(c.Figures, f)
	}
	for _, u := range r.Unreached {
		c.Unreached = append(c.Unreached, view.Method{What: joined(", ", u.Name, u.Printed), How: capital(u.Reason) + "."})
	}
	return c
}

func figureView(o proof.Outcome) view.CheckFigure {
	number, unit, _ := strings.Cut(o.Expected(), " ")
	f := view.CheckFigure{Name: o.Name, At: pairs(untold(o.At, o.Name)), Expected: together(o.Expected()), Got: together(joined(" ", beside(o.Got, number), unit)),
		Digits: correctDigits(o.Digits), Missed: !o.Holds}
	if o.Reprinted() {
		f.Printed = together(o.Printed)
	}
	if o.Tolerance != "" {
		f.Note = "±" + o.Tolerance + ": " + o.Why
	}
	return f
}

// beside writes a figure to two digits more than the one it is held against.
func beside(v float64, expected string) string {
	digits := len(strings.TrimLeft(strings.ReplaceAll(expected, ".", ""), "0"))
	return strings.Replace(strconv.FormatFloat(v, 'g', max(digits+2, 4), 64), "-", minus, 1)
}

// correctDigits never claims more than there are: it cuts off.
func correctDigits(digits float64) string {
	if digits >= 15 {
		return "≥" + thin + "15"
	}
	return decimals(math.Max(0, math.Floor(digits*10)/10), 1)
}

// together keeps number and unit on one line.
func together(text string) string { return strings.ReplaceAll(text, " ", "\u00a0") }

func joined(by string, parts ...string) string {
	return strings.Join(slices.DeleteFunc(parts, func(s string) bool { return s == "" }), by)
}

// untold are the inputs whose values a figure's name doesn't hold.
func untold(list [][2]string, name string) (rest [][2]string) {
	for _, p := range list {
		if number, _, _ := strings.Cut(p[1], " "); !strings.Contains(name, number) {
			rest = append(rest, p)
		}
	}
	return rest
}

func pairs(list [][2]string) string {
	words := make([]string, len(list))
	for i, p := range list {
		words[i] = p[0] + " " + together(p[1])
	}
	return strings.Join(words, ", ")
}

func coreView(c proof.CoreLoss) view.CoreLoss {
	points := 0
	v := view.CoreLoss{Fitted: fmt.Sprintf("Fitted: k %s, α %s, β %s in W/m³, Hz and T.", decimals(c.K, 3), decimals(c.Alpha, 4), decimals(c.Beta, 4))}
	for _, d := range c.Duties {
		points += d.Points
		note := quantityOf(d.Low, "Hz", 3) + " to " + quantityOf(d.High, "Hz", 3)
		if d.Fitted {
			note += "; fitted to these"
		}
		v.Lines = append(v.Lines, view.CoreLine{Duty: decimals(d.Duty, 1), Points: strconv.Itoa(d.Points),
			Mean: signed(100*d.Mean, oneDecimal), Worst: signed(100*d.Worst, oneDecimal), Note: note})
	}
	v.What = fmt.Sprintf("%d measured points of the ferrite %s at %s °C, under triangular flux without direct current (a selection of the open MagNet measurements, from the public repository otvam/magnet_webinar_eqn_models). Steinmetz’s k, α and β are fitted to the points of duty 0.5, and the improved generalised equation is asked for the rest. It is too low where the flux rises or falls fast; a budget at such a duty has too little core loss, by as much.",
		points, c.Material, degrees(c.Temperature))
	return v
}

func oneDecimal(v float64) string { return decimals(v, 1) }

func (a agreement) words() string {
	return fmt.Sprintf("A separate implementation of the same physics, in another language and with other numerical methods, gives %s figures of %d designs; those of Lossbook agree within %s of each figure. That is agreement in arithmetic: both follow the same equations.",
		grouped(strconv.Itoa(a.Figures)), a.Files, strconv.FormatFloat(a.Worst, 'g', 2, 64))
}

// boundsView gathers the bounds of all topologies and modes by quantity and domain, in
// the order in which both come.
func boundsView(list []bound) (v view.BoundTable) {
	var quantities, domains []string
	for _, b := range list {
		quantities, domains = including(quantities, b.Quantity), including(domains, b.Domain)
	}
	for _, d := range domains {
		_, _, stages := worstOf(list, quantities[0], d)
		v.Heads = append(v.Heads, view.BoundHead{Domain: d, Stages: plural(stages, "stage", "stages")})
	}
	for _, q := range quantities {
		line := view.BoundLine{Quantity: q}
		for _, d := range domains {
			worst, half, _ := worstOf(list, q, d)
			line.Cells = append(line.Cells, view.BoundCell{Worst: twoDigits(100 * worst), Half: twoDigits(100 * half)})
		}
		v.Lines = append(v.Lines, line)
	}
	return v
}

func including(list []string, s string) []string {
	if slices.Contains(list, s) {
		return list
	}
	return append(list, s)
}

func worstOf(list []bound, quantity, domain string) (worst, half float64, stages int) {
	for _, b := range list {
		if b.Quantity == quantity && b.Domain == domain {
			worst, half, stages = max(worst, b.Worst), max(half, b.Median), stages+b.N
		}
	}
	return worst, half, stages
}

// twoDigits rounds up: a bound must hold.
func twoDigits(v float64) string {
	if v == 0 {
		return "0"
	}
	unit := math.Pow10(int(math.Floor(math.Log10(v))) - 1)
	return strconv.FormatFloat(round(math.Ceil(v/unit-1e-9)*unit, 2), 'f', -1, 64)
}

// covers lists every item and every finding that the data knows, with the checks
// that are about it or the reason why none is. That none is left out is a test's task.
func (e *evidence) covers() (items, findings []view.Cover) {
	checks := map[string][]view.Link{}
	for _, r := range e.results {
		link := view.Link{Text: strconv.Itoa(r.ID), Href: "#check-" + strconv.Itoa(r.ID)}
		for _, o := range r.Outcomes {
			for _, what := range o.Covers {
				if !slices.Contains(checks[what], link) {
					checks[what] = append(checks[what], link)
				}
			}
		}
	}
	reasons := map[string]string{}
	for _, g := range e.file.Unchecked {
		reasons[g.What] = g.Reason
	}
	for _, links := range checks {
		slices.SortFunc(links, func(a, b view.Link) int {
			return cmp.Or(cmp.Compare(len(a.Text), len(b.Text)), cmp.Compare(a.Text, b.Text))
		})
	}
	checks["inductor.core"] = append(checks["inductor.core"], view.Link{Text: "measured", Href: "#core"})
	cover := func(what, name string) view.Cover {
		return view.Cover{Name: name, ID: "item-" + what, Checks: checks[what], Reason: reasons[what]}
	}
	for _, row := range budget.Ledger(&budget.Design{}) {
		part, words := partWords[row.Part], itemWords(Item{Part: row.Part, Kind: row.Kind})
		if !strings.HasPrefix(words, part) {
			words = part + ", " + words
		}
		items = append(items, cover(row.Part+"."+row.Kind, words))
	}
	items = append(items, cover("layout", "copper and other series resistances"))
	for _, rule := range rulesAmong(checks, reasons) {
		findings = append(findings, cover(rule, strings.ReplaceAll(strings.TrimPrefix(rule, findingPrefix), "_", " ")))
	}
	return items, findings
}

const findingPrefix = "finding."

// rulesAmong are the findings among the keys of both, in the order of the alphabet.
func rulesAmong(checks map[string][]view.Link, reasons map[string]string) (rules []string) {
	for what := range checks {
		rules = append(rules, what)
	}
	for what := range reasons {
		rules = append(rules, what)
	}
	rules = slices.DeleteFunc(rules, func(what string) bool { return !strings.HasPrefix(what, findingPrefix) })
	slices.Sort(rules)
	return slices.Compact(rules)
}
