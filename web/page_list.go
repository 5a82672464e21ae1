package web

import (
	"context"
	"fmt"
	"net/http"
	"strconv"
	"time"

	"lossbook/assets"
	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/view"
)

// listPage shows all designs, the last changed first.
func (s *Server) listPage(w http.ResponseWriter, r *http.Request) error {
	return s.showList(w, r, http.StatusOK, specification{}, nil)
}

// showList draws the list; a specification that came back with errors keeps
// what was typed.
func (s *Server) showList(w http.ResponseWriter, r *http.Request, status int, spec specification, problems []view.Problem) error {
	kept, err := s.store.Designs(r.Context())
	if err != nil {
		return err
	}
	list := view.List{Page: frame("Designs"), Samples: sampleOptions(), Spec: spec.fields(), Problems: problems}
	list.Page.Failed = len(problems) > 0
	if list.Hint, err = s.hintFor(r.Context(), "list", "/"); err != nil {
		return err
	}
	for _, d := range kept {
		entry, err := listEntry(r.Context(), d)
		if err != nil {
			return err
		}
		list.Designs = append(list.Designs, entry)
		list.Starts = append(list.Starts, view.Option{Value: entry.ID, Label: entry.Name})
	}
	if list.Page.Notice, err = s.binNotice(r); err != nil {
		return err
	}
	return show(w, r, status, view.Designs(list))
}

// binNotice says what was just deleted, with the way to take it back, or what
// was just taken back.
func (s *Server) binNotice(r *http.Request) (view.Notice, error) {
	id, err := strconv.ParseInt(r.URL.Query().Get("deleted"), 10, 64)
	if err != nil {
		return view.Notice{}, nil
	}
	bin, err := s.store.Bin(r.Context())
	for _, d := range bin {
		if d.ID == id {
			return view.Notice{Text: "Removed “" + nameOf(d.Name) + "”.", Undo: sheetAddress(id) + "/restore"}, nil
		}
	}
	return view.Notice{}, err
}

// listEntry draws up one line: what the converter is for, and how it fares at
// full load and nominal input.
func listEntry(ctx context.Context, d store.Design) (view.Entry, error) {
	draft, err := readDraft(d.Draft)
	if err != nil {
		return view.Entry{}, err
	}
	design, wrong := draft.design()
	entry := view.Entry{
		ID: strconv.FormatInt(d.ID, 10), Name: nameOf(d.Name), Sample: d.Sample, What: stageWords(design),
		Kept: keptWords(d.Revisions), Updated: moment(d.UpdatedAt), Stamp: d.UpdatedAt.Format(time.RFC3339),
	}
	if len(wrong) > 0 {
		entry.Missing = unfinished(wrong)
		return entry, nil
	}
	found, _, err := compute(ctx, design, nil)
	if err != nil {
		return view.Entry{}, err
	}
	entry.Budget = efficiencyAt(fullLoad(design, found.Points))
	if len(found.Findings) > 0 {
		worst := findingLines(found.Findings[:1])[0]
		entry.Level, entry.Finding = worst.Level, worst.Message
		if worst.Part != "" {
			entry.Finding = worst.Part + ": " + worst.Message
		}
	}
	return entry, nil
}

// unfinished says why a design has no budget yet.
func unfinished(wrong []budget.FieldError) string {
	for _, e := range wrong {
		if !e.Missing {
			return "entries to correct"
		}
	}
	return "parts missing"
}

// stageWords names topology, rectifier, voltages and load, as far as they are
// known: "boost, diode · 12 → 24 V, 2 A".
func stageWords(d *budget.Design) string {
	words := optionLabel("topology", d.Topology)
	if d.Rectifier != "" {
		words += ", " + d.Rectifier
	}
	if d.Input.Nominal.Stated && d.Output.Voltage.Stated {
		out := quantityOf(d.Output.Voltage.V, "V", 3)
		if d.Inverting() {
			out = "−" + out
		}
		words += fmt.Sprintf(" · %s → %s", quantityOf(d.Input.Nominal.V, "V", 3), out)
	}
	if d.Output.Current.Stated {
		words += ", " + quantityOf(d.Output.Current.V, "A", 3)
	}
	return words
}

// optionLabel returns how a person reads the value of a choice.
func optionLabel(path, value string) string {
	f, _ := budget.FieldAt(path)
	for _, o := range f.Options {
		if o.Value == value {
			return o.Label
		}
	}
	return value
}

func sampleOptions() []view.Option {
	var options []view.Option
	for _, sample := range assets.Samples() {
		d, _, err := decodeDesign(sample.JSON)
		if err == nil {
			options = append(options, view.Option{Value: sample.Name, Label: d.Name})
		}
	}
	return options
}

// fullLoad finds the point at nominal input and full load; nil if there is none.
func fullLoad(d *budget.Design, points []Point) *Point {
	for i, p := range points {
		if p.Vin == d.Input.Nominal.V && p.Iout == d.Output.Current.V {
			return &points[i]
		}
	}
	return nil
}

func efficiencyAt(p *Point) string {
	if p == nil || !p.Settled() {
		return "no figure"
	}
	return percent(p.Efficiency)
}

func keptWords(revisions int) string {
	if revisions == 0 {
		return "not yet"
	}
	return plural(revisions, "revision", "revisions")
}
