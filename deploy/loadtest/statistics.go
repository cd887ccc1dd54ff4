package main

import (
	"fmt"
	"math"
	"slices"
	"time"
)

// quantile returns the value that a share q of the values does not exceed.
func quantile[T float64 | time.Duration](values []T, q float64) T {
	if len(values) == 0 {
		return 0
	}
	sorted := slices.Sorted(slices.Values(values))
	return sorted[max(0, int(math.Ceil(q*float64(len(sorted))))-1)]
}

// spread writes the median with the smallest and the largest value.
func spread(values []float64, format string) string {
	return fmt.Sprintf(format+" ["+format+"–"+format+"]", quantile(values, 0.5), slices.Min(values), slices.Max(values))
}

// micro returns a duration in microseconds.
func micro(d time.Duration) float64 { return float64(d) / float64(time.Microsecond) }
