package poly

import "testing"

func TestRounded(t *testing.T) {
	if New(1, 0.1).Rounded() || (Poly{}).Rounded() {
		t.Error("given coefficients are rounded")
	}
	// 0.1² has more than 53 bits.
	if !New(1, 0.1).Mul(New(1, 0.1)).Rounded() {
		t.Error("(s + 0.1)² is not rounded")
	}
	if New(1, 0.5).Mul(New(1, 0.5)).Rounded() {
		t.Error("(s + 1/2)² is rounded")
	}
}
