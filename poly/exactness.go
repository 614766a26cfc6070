package poly

// Rounded reports whether some exact coefficient is no float64, so that [Poly.Coefficient]
// rounds it. A polynomial made by [New] is never rounded.
func (p Poly) Rounded() bool { return p.exact != nil || p.rest != nil }
