package web

import "lossbook/budget"

// itemsOf names the losses of a table's columns: those of its figures, and of
// the design where no point has any.
func itemsOf(d *budget.Design, points []Point) []Item {
	for i := range points {
		if points[i].Settled() {
			return points[i].Items
		}
	}
	var items []Item
	for _, row := range budget.Ledger(d) {
		items = append(items, Item{Part: row.Part, Kind: row.Kind})
	}
	return items
}
