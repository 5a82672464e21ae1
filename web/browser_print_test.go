package web

import (
	"fmt"
	"regexp"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"

	"lossbook/budget"
)

// TestLongPagesPrint prints a sheet, a revision and a comparison whose tables are longer
// than a page: each page says what it is of, each with rows of a table has its head, the
// last rows are there, and nothing is that is only for a screen.
func TestLongPagesPrint(t *testing.T) {
	h := serve(t)
	d := sample(t, "frost")
	for i := range 60 {
		d.Series = append(d.Series, budget.SeriesResistance{Name: fmt.Sprintf("joint %02d", i+1), Location: "output", Resistance: budget.N(2e-3)})
	}
	h.call(201, "POST", "/designs", designRequest{d})
	h.call(201, "POST", "/designs/4/revisions", map[string]string{"note": "long"})
	first := int64(1)
	d.Frequency = budget.N(240e3)
	h.call(200, "PUT", "/designs/4", changeRequest{d, &first})
	h.call(201, "POST", "/designs/4/revisions", map[string]string{"note": "slower"})
	dated := regexp.MustCompile(` · \d{1,2} [A-Z][a-z]{2} \d{4}, \d\d:\d\d`)
	b := h.tab()
	for path, c := range map[string]struct{ mark, last string }{
		"/designs/4":             {"revision 2 · ", "Inductor, °C"},
		"/designs/4/revisions/1": {"revision 1 · ", "Inductor, °C"},
		"/compare?r=4.1&r=4.2":   {"revisions 1 and 2 · ", "Inductor, °C"},
	} {
		b.open(path)
		pdf, err := chromedp.Run(b.ctx, chromedp.PrintToPDF(chromedp.PDFPreferCSSPageSize()))
		if err != nil {
			t.Fatal(err)
		}
		pages := readPDF(t, pdf)
		withRows := 0
		for i, page := range pages {
			if !strings.Contains(page, c.mark) || !dated.MatchString(page) || !strings.Contains(page, "Night-frost") {
				t.Errorf("%s: page %d does not say of what and when it is:\n%s", path, i+1, page)
			}
			if regexp.MustCompile(`joint \d\d +[\d<]`).MatchString(page) {
				if withRows++; !strings.Contains(page, "Load, %") && !strings.Contains(page, "difference") {
					t.Errorf("%s: page %d has rows of a table and not its head:\n%s", path, i+1, page)
				}
			}
			for _, only := range []string{"Skip to content", "Reopen as the draft", "Keep as revision", "lay beside", "make it the baseline", "take along", "another point", "linear"} {
				if strings.Contains(page, only) {
					t.Errorf("%s: page %d has %q, which is for a screen", path, i+1, only)
				}
			}
		}
		whole := strings.Join(pages, "\n")
		if len(pages) < 3 || withRows < 2 || !strings.Contains(whole, c.last) || strings.Count(whole, "joint 60") < 1 || !strings.Contains(pages[len(pages)-1], "qualified person") {
			t.Errorf("%s: %d pages, %d with rows; the last rows, or the last line, are missing", path, len(pages), withRows)
		}
	}
}
