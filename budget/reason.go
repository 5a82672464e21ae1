package budget

type reason struct{ text string }

// Reason says in words why the point has no budget; "" when it settled.
func (b *Budget) Reason() string { return b.reason.text }
