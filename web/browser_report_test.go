package web

import (
	"bytes"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"

	"lossbook/budget"
)

// TestReportPrints prints a report whose ledgers are longer than a page.
func TestReportPrints(t *testing.T) {
	h := serve(t)
	d := sample(t, "frost")
	for i := range 60 {
		d.Series = append(d.Series, budget.SeriesResistance{Name: fmt.Sprintf("joint %02d", i+1), Location: "output", Resistance: budget.N(2e-3)})
	}
	h.call(201, "POST", "/designs", designRequest{d})
	h.call(201, "POST", "/designs/4/revisions", map[string]string{"note": "long"})
	b := h.visit("/designs/4/revisions/1/report")
	b.picture("report")
	pdf, err := chromedp.Run(b.ctx, chromedp.PrintToPDF(chromedp.PDFPreferCSSPageSize()))
	if err != nil {
		t.Fatal(err)
	}
	if n := len(regexp.MustCompile(`/Type /Page\b`).FindAll(pdf, -1)); n < 5 || !bytes.Contains(pdf, []byte("594.9")) && !bytes.Contains(pdf, []byte("595")) {
		t.Errorf("%d pages, or none of them A4", n)
	}
	pages := readPDF(t, pdf)
	ledgers := 0
	for i, page := range pages {
		if !strings.Contains(page, "revision 1 · ") || !strings.Contains(page, fmt.Sprintf("%d / %d", i+1, len(pages))) {
			t.Errorf("page %d does not say which revision and page it is:\n%s", i+1, page)
		}
		if strings.Contains(page, "joint ") && regexp.MustCompile(`joint \d\d +\d`).MatchString(page) {
			if ledgers++; !strings.Contains(page, "Load, %") {
				t.Errorf("page %d has rows of a ledger and not its head:\n%s", i+1, page)
			}
		}
		for _, only := range []string{"Skip to content", "The numbers of"} {
			if strings.Contains(page, only) {
				t.Errorf("page %d has %q, which is for a screen", i+1, only)
			}
		}
	}
	whole := strings.Join(pages, "\n")
	if ledgers < 4 || strings.Count(whole, "Loss, mW") < 3 || !strings.Contains(pages[len(pages)-1], "qualified person") {
		t.Errorf("%d pages with rows of ledgers; their last rows, or the last line, are missing", ledgers)
	}
}

// readPDF returns what stands on each page.
func readPDF(t *testing.T, pdf []byte) []string {
	t.Helper()
	if _, err := exec.LookPath("pdftotext"); err != nil {
		if os.Getenv("CI") == "true" {
			t.Fatal("no pdftotext on the path, and CI needs it")
		}
		t.Skip("no pdftotext on the path: install poppler-utils to run this test")
	}
	file := filepath.Join(t.TempDir(), "report.pdf")
	if err := os.WriteFile(file, pdf, 0o600); err != nil {
		t.Fatal(err)
	}
	text, err := exec.Command("pdftotext", "-layout", "-enc", "UTF-8", file, "-").Output()
	if err != nil {
		t.Fatal(err)
	}
	return strings.Split(strings.TrimSuffix(string(text), "\f"), "\f")
}
