package format

import "testing"

func TestPPM(t *testing.T) {
	for share, want := range map[float64]string{
		0: "0", 1: "1\u00a0000\u00a0000", 0.5: "500\u00a0000", 1e-6: "1.00", 12.34e-6: "12.3", 0.1234e-6: "0.123", 0.01234e-6: "0.012",
		123.4e-6: "123", 999.4e-6: "999", 999.6e-6: "1\u00a0000", 12345e-6: "12\u00a0300", 1e-12: "< 0.001", 99.96e-6: "100",
	} {
		if got := PPM(share); got != want {
			t.Errorf("%v: %q, expected %q", share, got, want)
		}
	}
}
