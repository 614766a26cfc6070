package locus

type Branch struct{}

func (b Branch) Len() int                        { return 0 }
func (b Branch) XY(i int) (re, im float64)       { return 0, 0 }
func (b Branch) GainAt(i int) float64            { return 0 }
func (b Branch) At(k float64) (complex128, bool) { return 0, false }
