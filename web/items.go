package web

import "lossbook/budget"

// fixedItems is the losses every design has, in the order of the contract; the
// series resistances follow.
var fixedItems = []Item{
	{Part: "switch", Kind: "conduction"}, {Part: "switch", Kind: "turn_on"}, {Part: "switch", Kind: "turn_off"},
	{Part: "switch", Kind: "output_charge"}, {Part: "switch", Kind: "recovery"},
	{Part: "rectifier", Kind: "conduction"}, {Part: "rectifier", Kind: "dead_time"}, {Part: "rectifier", Kind: "recovery"}, {Part: "rectifier", Kind: "leakage"},
	{Part: "inductor", Kind: "winding_dc"}, {Part: "inductor", Kind: "winding_ac"}, {Part: "inductor", Kind: "core"},
	{Part: "input_capacitor", Kind: "esr"}, {Part: "output_capacitor", Kind: "esr"}, {Part: "snubber", Kind: "rc"},
	{Part: "drive", Kind: "gate"}, {Part: "drive", Kind: "regulator"}, {Part: "controller", Kind: "supply"}, {Part: "controller", Kind: "fixed"},
}

// itemsOf names the losses of a table's columns: those of its figures, and of
// the design where no point has any.
func itemsOf(d *budget.Design, points []Point) []Item {
	for i := range points {
		if points[i].Settled() {
			return points[i].Items
		}
	}
	items := append([]Item{}, fixedItems...)
	for _, r := range d.Series {
		items = append(items, Item{Part: "layout", Kind: r.Name})
	}
	return items
}
