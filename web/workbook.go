package web

import (
	"bytes"
	"context"
	"fmt"
	"net/http"
	"regexp"
	"time"

	"github.com/xuri/excelize/v2"

	"lossbook/budget"
	"lossbook/store"
)

const workbookKind = "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet"

// workbook is what the .xlsx file of a design is made of.
type workbook struct {
	design     *budget.Design
	points     []Point
	findings   []Finding
	energy     *Energy     // of the load profile; nil where there is none
	provenance [][2]string // what it is of, and where that comes from
}

// savedXLSX gives the workbook of a revision as it was saved.
func savedXLSX(find finder) handler {
	return func(w http.ResponseWriter, r *http.Request) error {
		saved, design, err := find(r)
		if err != nil {
			return err
		}
		return writeSavedWorkbook(r.Context(), w, saved, design)
	}
}

func writeSavedWorkbook(ctx context.Context, w http.ResponseWriter, saved store.Revision, design *budget.Design) error {
	points, findings, err := savedResults(saved)
	if err != nil {
		return err
	}
	book := workbook{design: design, points: points, findings: findings, provenance: [][2]string{
		{"Revision", fmt.Sprint(saved.Number)}, {"Kept", saved.CreatedAt.Format(time.RFC3339)}, {"Note", saved.Note},
		{"Figures", "as they were kept with the revision"}, {"Model version", saved.Model}, {"Content, SHA-256", saved.Hash}}}
	var worked string
	if book.energy, worked, err = savedEnergy(ctx, saved, design); err != nil {
		return err
	}
	if worked != "" {
		book.provenance = append(book.provenance, [2]string{"Load profile", worked})
	}
	return book.write(w, fileName(design.Name, saved.Number, "efficiency.xlsx"))
}

// draftXLSX computes the workbook of the design as it stands on its sheet.
func (s *Server) draftXLSX(w http.ResponseWriter, r *http.Request) error {
	kept, err := s.design(r)
	if err != nil {
		return err
	}
	draft, err := readDraft(kept.Draft)
	if err != nil {
		return err
	}
	design, err := draft.complete()
	if err != nil {
		return err
	}
	found, wrong, err := compute(r.Context(), design, nil)
	if err != nil {
		return err
	}
	if len(wrong) > 0 {
		return invalid(wrong)
	}
	book := workbook{design: design, points: found.Points, findings: found.Findings, provenance: [][2]string{
		{"Revision", "none: a draft"}, {"Last changed", kept.UpdatedAt.Format(time.RFC3339)},
		{"Figures", "computed for this file"}, {"Model version", budget.ModelVersion}}}
	if book.energy, err = draft.energy(r.Context(), design); err != nil {
		return err
	}
	return book.write(w, fileName(design.Name, 0, "efficiency.xlsx"))
}

// write sends the workbook, made whole before the first header.
func (b *workbook) write(w http.ResponseWriter, name string) error {
	body, err := b.bytes()
	if err != nil {
		return err
	}
	attach(w, name, workbookKind, body)
	return nil
}

func (b *workbook) bytes() ([]byte, error) {
	file := excelize.NewFile()
	defer file.Close()
	if err := file.SetDocProps(&excelize.DocProperties{Creator: "Lossbook", LastModifiedBy: "Lossbook", Title: textCell(b.design.Name)}); err != nil {
		return nil, err
	}
	for i, sheet := range b.sheets() {
		l, err := newTabSheet(file, i, sheet.name)
		if err != nil {
			return nil, err
		}
		if sheet.fill(l); l.err != nil {
			return nil, fmt.Errorf("sheet %s: %w", sheet.name, l.err)
		}
	}
	var body bytes.Buffer
	_, err := file.WriteTo(&body)
	return body.Bytes(), err
}

// namedSheet is a sheet and what fills it.
type namedSheet struct {
	name string
	fill func(*tabSheet)
}

func (b *workbook) sheets() []namedSheet {
	list := []namedSheet{{"Inputs", b.inputs}, {"Ledger", b.ledger}, {"Efficiency", b.efficiency}, {"Weighted", b.weighted}}
	if b.energy != nil {
		list = append(list, namedSheet{"Load profile", b.day})
	}
	return append(list, namedSheet{"Findings", b.reported}, namedSheet{"Provenance", b.origin})
}

// tabSheet is one sheet of a workbook, filled line by line. Its first error stays, and
// makes the rest do nothing.
type tabSheet struct {
	file *excelize.File
	name string
	row  int // the last one filled
	err  error
}

func newTabSheet(file *excelize.File, i int, name string) (*tabSheet, error) {
	if i == 0 {
		return &tabSheet{file: file, name: name}, file.SetSheetName(file.GetSheetName(0), name)
	}
	_, err := file.NewSheet(name)
	return &tabSheet{file: file, name: name}, err
}

// head fills the first row and keeps it in view; the widths are in characters.
func (l *tabSheet) head(widths []float64, cells ...string) {
	line := make([]any, len(cells))
	for i, c := range cells {
		line[i] = c
	}
	l.line(line...)
	bold, err := l.file.NewStyle(&excelize.Style{Font: &excelize.Font{Bold: true}})
	l.keep(err)
	l.keep(l.file.SetRowStyle(l.name, 1, 1, bold))
	l.keep(l.file.SetPanes(l.name, &excelize.Panes{Freeze: true, YSplit: 1, TopLeftCell: "A2", ActivePane: "bottomLeft"}))
	for i := range cells {
		column, err := excelize.ColumnNumberToName(i + 1)
		l.keep(err)
		l.keep(l.file.SetColWidth(l.name, column, column, widths[min(i, len(widths)-1)]))
	}
}

// line fills the next row: a number as a number, a text guarded, nil not at all.
func (l *tabSheet) line(cells ...any) {
	l.row++
	for i, c := range cells {
		at, err := excelize.CoordinatesToCellName(i+1, l.row)
		l.keep(err)
		switch v := c.(type) {
		case float64:
			l.number(at, numberCell(v))
		case string:
			l.text(at, textCell(v))
		}
	}
}

// number writes digits as they are: given a float the library would keep 15 of the
// 17 that it takes.
func (l *tabSheet) number(at, digits string) { l.keep(l.file.SetCellDefault(l.name, at, digits)) }

// coded is how the format writes a character by its number: what looks like it in
// a name must not turn into one.
var coded = regexp.MustCompile(`_(x[0-9a-fA-F]{4}_)`)

func (l *tabSheet) text(at, text string) {
	if text != "" {
		l.keep(l.file.SetCellStr(l.name, at, coded.ReplaceAllString(text, "_x005F_$1")))
	}
}

func (l *tabSheet) keep(err error) {
	if l.err == nil {
		l.err = err
	}
}

// efficiency is the table of efficiency.csv, the same digits, and its curves.
func (b *workbook) efficiency(l *tabSheet) {
	items := itemsOf(b.design, b.points)
	header := csvHeader(items)
	l.head([]float64{11}, header...)
	for i := range b.points {
		l.row++
		for column, cell := range csvRow(&b.points[i], len(items)) {
			at, err := excelize.CoordinatesToCellName(column+1, l.row)
			l.keep(err)
			switch header[column] {
			case "state", "mode", "marks":
				l.text(at, cell)
			default:
				l.number(at, cell)
			}
		}
	}
	if chart := b.curves(); len(chart.Series) > 0 {
		l.keep(l.file.AddChart(l.name, fmt.Sprintf("A%d", l.row+3), chart))
		numbersAcross(l.file)
	}
}

// reported is the findings.
func (b *workbook) reported(l *tabSheet) {
	l.head([]float64{10, 16, 18, 90, 12, 12, 8, 34, 10}, "level", "part", "rule", "message", "value", "limit", "unit", "source", "worst_at_vin_V", "worst_at_iout_A", "worst_at_ambient_C")
	for _, f := range b.findings {
		cells := []any{f.Level, partWords[f.Part], f.Rule, f.Message, f.Value, f.Limit, f.Unit, f.Source}
		if f.Point != nil {
			cells = append(cells, f.Point.Vin, f.Point.Iout, f.Point.Ambient)
		}
		l.line(cells...)
	}
}

// origin says what the workbook is of, with which program and model.
func (b *workbook) origin(l *tabSheet) {
	l.head([]float64{20, 90}, "what", "is")
	l.line("Design", b.design.Name)
	l.line("About", b.design.Note)
	for _, row := range b.provenance {
		l.line(row[0], row[1])
	}
	l.line("Program", "Lossbook")
	l.line("Units", "SI base units and °C, as the headers say; efficiency 0 to 1")
	l.line("Caution", "A budget is an estimate: it does not replace measurement, local codes or the judgement of a qualified person.")
}
