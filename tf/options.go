package tf

// An Option adjusts a call of this package; the zero number of options is the tested default.
type Option func(*settings)

type settings struct {
	upTo      float64 // rad/s, of CrossoversUpTo
	upToGiven bool

	matches         bool
	matchFrequency  float64 // rad/s
	zerosAtInfinity int
}
