package locus

// An Option adjusts a call of this package; the zero number of options is the tested default.
type Option func(*settings)

type settings struct{ trace traceSettings }
