package readings

import (
	"testing"
	"time"
)

// However often a machine is read, the window remembers no more.
func TestWindowIsBounded(t *testing.T) {
	w := window{span: defaultWindow, deviation: defaultDeviation, slope: defaultSlope}
	var m moment
	begin := time.Date(2026, 1, 1, 0, 0, 0, 0, time.UTC)
	most := 0
	for i := range 50_000 {
		m.at = begin.Add(time.Duration(i) * 10 * time.Millisecond)
		w.judge(&m)
		most = max(most, cap(w.moments))
	}
	if most > 2*mostMoments+2*leastMoments {
		t.Errorf("room for %d moments", most)
	}
}
