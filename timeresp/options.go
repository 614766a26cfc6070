package timeresp

// An Option adjusts a call of this package; the zero number of options is the tested default.
type Option func(*settings)

type settings struct{ run runSettings }

func settingsOf(opt []Option) (s settings) {
	for _, o := range opt {
		if o != nil {
			o(&s)
		}
	}
	return s
}
