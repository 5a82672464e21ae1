package web

import (
	"context"
	"fmt"
	"regexp"
	"strings"

	"lossbook/budget"
	"lossbook/web/quantity"
)

// profilePath heads the rows of the load profile. Like the ripple ratio they are
// entries that only a draft has: how a converter is used is no part of it.
const profilePath = "profile"

// profileColumns are the entries of a row.
var profileColumns = []struct{ key, name, head string }{
	{"load", "load", "Load, A or %"},
	{"vin", "input", "Input, V"},
	{"ambient", "ambient", "Ambient, °C"},
	{"hours", "hours a day", "Hours a day"},
}

const dayHours = 24

var profileEntry = regexp.MustCompile(`^profile\[\d{1,3}\]\.(load|vin|ambient|hours)$`)

func isProfileEntry(name string) bool { return profileEntry.MatchString(name) && withinRows(name) }

// profile reads the rows of the load profile: a load in A, or in per cent of full
// load; blank input and ambient are the design's. The errors stand at the entries
// as typed.
func (t Draft) profile(d *budget.Design) (list []duty, wrong []budget.FieldError) {
	sum := 0.0
	for n, i := range t.rows(profilePath) {
		at := rowPath(profilePath, i)
		if n == budget.MaxRows {
			return list, append(wrong, budget.FieldError{Path: at + ".load", Message: fmt.Sprintf("is one row more than the %d that are taken", n)})
		}
		r := profileReading{draft: t, at: at}
		use := r.row(d)
		use.row = i
		if sum += use.hours; len(r.wrong) == 0 && sum > dayHours*(1+1e-9) {
			r.refuse("hours", fmt.Sprintf("brings the hours to %s; a day has %d", quantity.Format(round(sum, 6), ""), dayHours))
		}
		list, wrong = append(list, use), append(wrong, r.wrong...)
	}
	return list, wrong
}

// profileReading is one row on its way to a point.
type profileReading struct {
	draft Draft
	at    string
	wrong []budget.FieldError
}

func (r *profileReading) refuse(key, message string) {
	r.wrong = append(r.wrong, budget.FieldError{Path: below(r.at, key), Message: message})
}

// number reads an entry; a blank one is what stands behind it, or missing.
func (r *profileReading) number(key string, unit quantity.Unit, assumed *float64) float64 {
	text := r.draft[below(r.at, key)]
	if blank(text) {
		if assumed != nil {
			return *assumed
		}
		r.wrong = append(r.wrong, budget.FieldError{Path: below(r.at, key), Message: "is empty", Missing: true})
		return 0
	}
	v, err := quantity.Parse(text, unit)
	if err != nil {
		r.refuse(key, err.Error())
	}
	return v
}

func (r *profileReading) row(d *budget.Design) duty {
	ambient := d.AmbientTemperature()
	use := duty{hours: r.number("hours", "h", nil)}
	use.Vin, use.Ambient = r.number("vin", "V", &d.Input.Nominal.V), r.number("ambient", "°C", &ambient)
	if strings.Contains(r.draft[below(r.at, "load")], "%") {
		use.Iout = r.number("load", "", nil) * d.Output.Current.V
	} else {
		use.Iout = r.number("load", "A", nil)
	}
	if len(r.wrong) > 0 || !d.Input.Nominal.Stated {
		return use
	}
	if use.hours <= 0 || use.hours > dayHours {
		r.refuse("hours", "must be above 0 and at most 24")
	}
	for _, e := range budget.ValidatePoints([]budget.Point{use.Point}) {
		r.refuse(map[string]string{"points[0].vin": "vin", "points[0].iout": "load", "points[0].ambient": "ambient"}[e.Path], e.Message)
	}
	return use
}

// energy computes the points of the profile, exactly those, and adds up their
// day; nil where no profile is entered.
func (t Draft) energy(ctx context.Context, d *budget.Design) (*Energy, error) {
	profile, wrong := t.profile(d)
	switch {
	case len(wrong) > 0:
		return &Energy{Rows: []EnergyRow{}, Reason: labelOf(wrong[0].Path) + " " + wrong[0].Message}, nil
	case len(profile) == 0:
		return nil, nil
	}
	asked := make([]budget.Point, len(profile))
	for i, use := range profile {
		asked[i] = use.Point
	}
	found, refused, err := compute(ctx, d, asked)
	if err != nil {
		return nil, err
	}
	if len(refused) > 0 {
		return &Energy{Rows: []EnergyRow{}, Reason: "model " + budget.ModelVersion + ", which runs now, no longer takes this design"}, nil
	}
	e := energyOf(profile, found.Points)
	return &e, nil
}
