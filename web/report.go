package web

import (
	"context"
	"net/http"
	"strconv"
	"time"

	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// reportPage is a revision on paper: all that a review asks for, in one column.
func (s *Server) reportPage(w http.ResponseWriter, r *http.Request) error {
	saved, design, err := s.savedDesign(r)
	if err != nil {
		return err
	}
	page, err := reportModel(r.Context(), saved, design)
	if err != nil {
		return err
	}
	return show(w, r, http.StatusOK, view.ReportPage(page))
}

func reportModel(ctx context.Context, saved store.Revision, d *budget.Design) (view.Report, error) {
	n, base := strconv.Itoa(saved.Number), revisionAddress(saved.Design, saved.Number)
	v := view.Report{Page: frame("Report on " + nameOf(d.Name) + ", revision " + n), Name: nameOf(d.Name), Number: n,
		Note: saved.Note, About: d.Note, When: moment(saved.CreatedAt), Stamp: saved.CreatedAt.Format(time.RFC3339),
		Model: saved.Model, Hash: saved.Hash, Back: view.Link{Text: "revision " + n, Href: base}, Methods: methods}
	points, findings, err := savedResults(saved)
	if err != nil {
		return v, err
	}
	same := false
	if v.Banner, same, err = banner(ctx, saved, d, points); err != nil {
		return v, err
	}
	p := remembered(d, points, findings, sight{})
	if p.energy, p.worked, err = savedEnergy(ctx, saved, d); err != nil {
		return v, err
	}
	if err := p.retrace(ctx, same); err != nil {
		return v, err
	}
	a, err := p.answers(base, false, nil)
	if err != nil {
		return v, err
	}
	v.Head, v.HeadAt, v.Flow, v.Charts, v.Weights, v.Warnings, v.Notes = a.Head, a.Views.At, a.Flow, a.Charts, a.Weights, a.Warnings, a.Notes
	if v.Flow != nil {
		v.Flow.Column = view.Link{} // the ledgers follow
	}
	for i := range v.Charts {
		v.Charts[i].Scales = nil // a choice, and paper has none
	}
	parts := givenParts(d)
	v.Conditions, v.Parts = parts[0], parts[1:]
	v.Ledgers = ledgersOf(d, points)
	v.Margins, v.Unrated = marginLines(marginsOf(d, points))
	return v, nil
}

// ledgersOf draws the ledger at every input voltage that was kept.
func ledgersOf(d *budget.Design, points []Point) (list []view.Ledger) {
	for _, row := range byVoltage(points) {
		p := remembered(d, points, nil, sight{vin: quantity.Format(row[0].Vin, "V")})
		p.paper = true
		list = append(list, *p.ledger("", nil))
	}
	return list
}

func marginLines(margins []margin, unrated []string) ([]view.MarginLine, []string) {
	lines := make([]view.MarginLine, len(margins))
	for i, m := range margins {
		lines[i] = view.MarginLine{Part: partWords[m.part], What: m.what, Value: quantityOf(m.value, quantity.Unit(m.unit), 3),
			Limit: quantityOf(m.limit, quantity.Unit(m.unit), 4), Used: decimals(100*m.used, 0), Over: m.used > 1, At: "over the input range"}
		if m.unit == "°C" {
			lines[i].Value = degrees(m.value) + " °C"
		}
		if m.at != nil {
			lines[i].At = quantityOf(m.at.Vin, "V", 4) + " in, " + quantityOf(m.at.Iout, "A", 3)
		}
	}
	return lines, unrated
}

// methods name what the figures are worked out by, with the source of each.
var methods = []view.Method{
	{What: "Currents", How: "balances of charge, power and flux; straight segments, so that commutation takes no time in them", Source: "Erickson & Maksimović, Fundamentals of Power Electronics, chapters 2, 3 and 5 (formulas from memory)"},
	{What: "Switch transitions", How: "gate charge against the drive’s resistances, each transition a straight line", Source: "L. Balogh, SLUA618 (from memory)"},
	{What: "Capacitances", How: "charge and energy that follow the root of the voltage; what is stored while the switch turns off is lost when it turns on", Source: "balance of energy; the root law is common practice"},
	{What: "Recovery", How: "charge scaled by current and slope from where it is stated", Source: "softness as in JEDEC JESD282; the exponents are common practice"},
	{What: "Diode", How: "threshold and slope resistance; leakage proportional to voltage, exponential in temperature", Source: "ST AN869; proportionality to the voltage is common practice"},
	{What: "Winding", How: "direct-current resistance with the temperature of copper; alternating current by layers", Source: "IEC 60028; P. L. Dowell, 1966 (formula from memory)"},
	{What: "Core", How: "generalised Steinmetz equation over the flux’s segments", Source: "K. Venkatachalam et al., 2002 (formula from memory)"},
	{What: "Temperatures", How: "each part’s loss times its thermal resistance above ambient, solved together with the losses that depend on them", Source: "balance of heat"},
}
