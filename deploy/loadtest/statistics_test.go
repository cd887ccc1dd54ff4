package main

import "testing"

func TestQuantile(t *testing.T) {
	for _, tt := range []struct {
		values []float64
		q      float64
		want   float64
	}{
		{nil, 0.5, 0},
		{[]float64{3}, 0.99, 3},
		{[]float64{3, 1, 2}, 0.5, 2},
		{[]float64{4, 3, 2, 1}, 0.5, 2},
		{[]float64{1, 2, 3, 4, 5, 6, 7, 8, 9, 10}, 0.9, 9},
		{[]float64{1, 2, 3, 4, 5, 6, 7, 8, 9, 10}, 0.99, 10},
		{[]float64{1, 2}, 0, 1},
	} {
		if got := quantile(tt.values, tt.q); got != tt.want {
			t.Errorf("quantile(%v, %g) = %g, want %g", tt.values, tt.q, got, tt.want)
		}
	}
}
