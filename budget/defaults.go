package budget

// filled returns a deep copy of the design in which every absent number of a part
// that is there holds its default. Stated keeps saying what was entered.
func (d *Design) filled() *Design {
	full := d.clone()
	for _, f := range fieldIndex {
		if f.Kind != Number || f.Default == 0 {
			continue
		}
		if slot, ok := full.Slot(f.Path, false); ok {
			if n := slot.(*Num); !n.Stated {
				n.V = f.Default
			}
		}
	}
	return full
}

// clone copies the design and every part of it that filled writes to. Curves,
// series resistances and sources are read only and shared.
func (d *Design) clone() *Design {
	c := *d
	c.Switch, c.Diode, c.SyncSwitch = copied(d.Switch), copied(d.Diode), copied(d.SyncSwitch)
	c.InputCapacitor, c.OutputCapacitor = copied(d.InputCapacitor), copied(d.OutputCapacitor)
	c.Snubber, c.Drive, c.Controller = copied(d.Snubber), copied(d.Drive), copied(d.Controller)
	c.Inductor = copied(d.Inductor)
	if c.Inductor != nil {
		c.Inductor.Winding, c.Inductor.Core = copied(c.Inductor.Winding), copied(c.Inductor.Core)
	}
	return &c
}

func copied[T any](p *T) *T {
	if p == nil {
		return nil
	}
	c := *p
	return &c
}

// orZero returns the part, or an empty one where it is absent, so that what it
// would lose is 0 without a case of its own.
func orZero[T any](p *T) T {
	if p == nil {
		var zero T
		return zero
	}
	return *p
}
