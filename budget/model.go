package budget

// Prepare checks the design and works out, once, everything that does not
// depend on the operating point. The error holds every FieldError.
func Prepare(d *Design) (*Model, error) { return nil, nil }

// Model is a design made ready; it is safe for concurrent use.
type Model struct{}

// At fills b with what flows, what is lost and how hot the parts become at p.
// A Budget used again costs no allocation.
func (m *Model) At(p Point, b *Budget) {}

// Findings returns what is to be said of one point, worst first.
func (m *Model) Findings(b *Budget) []Finding { return nil }

// Review returns what is to be said of the design: the worst of each rule over
// the points given, and what holds at every point.
func (m *Model) Review(points []Budget) []Finding { return nil }
