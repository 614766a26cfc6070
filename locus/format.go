package locus

import "strconv"

// formatPoint writes s for an error message.
func formatPoint(s complex128) string {
	text := strconv.FormatFloat(real(s), 'g', 6, 64)
	switch {
	case imag(s) > 0:
		return text + "+j" + strconv.FormatFloat(imag(s), 'g', 6, 64)
	case imag(s) < 0:
		return text + "-j" + strconv.FormatFloat(-imag(s), 'g', 6, 64)
	}
	return text
}
