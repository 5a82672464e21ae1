package web

import (
	"context"
	"encoding/json"
	"errors"
	"strings"
	"time"

	"lossbook/assets"
	"lossbook/budget"
	"lossbook/store"
)

// Texts that a page must neither run nor be torn apart by.
const hostileText = `"'><img src=x onerror="__pwned=1"><script>__pwned=1</script>{{7*7}}`

var (
	longText   = "A name that goes on " + strings.Repeat("and on ", 24) + "to its end"
	solidText  = strings.Repeat("Unbroken", 24)
	galleryDay = time.Date(2026, 2, 28, 23, 59, 0, 0, time.UTC)
)

// plainDesign is the sample with a diode, to be made awkward.
func plainDesign() (*budget.Design, error) {
	for _, sample := range assets.Samples() {
		d, wrong, err := decodeDesign(sample.JSON)
		if err == nil && len(wrong) == 0 && d.Rectifier == "diode" && d.Topology == "boost" {
			return d, nil
		}
	}
	return nil, errors.New("there is no sample of a boost stage with a diode")
}

// hostileDesign has texts that would be markup, or run, in every place for text.
func hostileDesign() (*budget.Design, error) {
	d, err := plainDesign()
	if err != nil {
		return nil, err
	}
	d.Name, d.Note = hostileText, hostileText
	t := draftOf(d)
	for _, p := range budget.Parts() {
		for _, f := range p.Fields {
			switch {
			case p.List && f.Kind == budget.Text:
				t[below(rowPath(p.Path, 0), f.Key)] = hostileText
				t[below(rowPath(p.Path, 1), f.Key)] = solidText
				t[below(rowPath(p.Path, 2), f.Key)] = longText
			case f.Kind == budget.Text && p.Path != "sync_switch":
				t[f.Path] = hostileText
			case f.Kind == budget.Number && t[f.Path] != "":
				t[sources+f.Path] = hostileText
			}
		}
	}
	return completed(t)
}

// extremeDesign has magnitudes far from those of any other, and texts without end.
func extremeDesign() (*budget.Design, error) {
	d, err := plainDesign()
	if err != nil {
		return nil, err
	}
	t := draftOf(d)
	for path, text := range map[string]string{
		"name": solidText, "note": longText, "switch.part": solidText, "diode.part": longText, "frequency": "1.234567 Hz", "inductor.inductance": "12.34567 kH",
		"input.min": "1.0000001 kV", "input.nominal": "1.0000002 kV", "input.max": "1.0000003 kV", "output.voltage": "1234.567", "output.current": "1.234567 nA",
		"switch.vds_rating": "1", "diode.v_rrm": "1", "ambient": "-54.321",
	} {
		t[path] = text
	}
	return completed(t)
}

// hotDesign is over most of its ratings.
func hotDesign() (*budget.Design, error) {
	d, err := plainDesign()
	if err != nil {
		return nil, err
	}
	t := draftOf(d)
	for path, text := range map[string]string{"switch.theta_ja": "190", "diode.theta_ja": "90", "inductor.theta_ja": "120", "switch.rds_on": "45m", "switch.rds_on_hot_ratio": "2.4",
		"input_capacitor.ripple_rating": "10m", "output_capacitor.ripple_rating": "10m", "switch.vds_rating": "20", "diode.v_rrm": "20", "diode.i_f_rating": "100m"} {
		t[path] = text
	}
	return completed(t)
}

func completed(t Draft) (*budget.Design, error) {
	d, wrong := t.design()
	if len(wrong) > 0 {
		return nil, invalid(wrong)
	}
	return d, nil
}

// savedNow is a design as a revision that was saved just now.
func savedNow(ctx context.Context, d *budget.Design, number int, note string) (store.Revision, error) {
	found, wrong, err := compute(ctx, d, nil)
	if err != nil {
		return store.Revision{}, err
	}
	if len(wrong) > 0 {
		return store.Revision{}, invalid(wrong)
	}
	typed, err := json.Marshal(draftOf(d))
	if err != nil {
		return store.Revision{}, err
	}
	kept, err := newRevision(note, typed, d, found)
	return store.Revision{Design: 1, Number: number, Note: note, CreatedAt: galleryDay, Model: kept.Model, Hash: strings.Repeat("0f", 32),
		DesignJSON: kept.DesignJSON, Draft: kept.Draft, Points: kept.Points, Findings: kept.Findings}, err
}
