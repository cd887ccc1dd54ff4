package machine

import (
	"math"

	"dewmark/service/cycle"
)

const (
	// optimumScan is the number of pressures that are tried before the search closes in around the best.
	optimumScan = 7
	// optimumWidth is the width of the last bracket over the pressure: around a smooth optimum the COP is lost by its square.
	optimumWidth = 1e-4
	goldenShare  = 0.381966011250105 // the smaller part of a golden section

	demandWidth = 1e-10 // how closely a demand is met, as a share of it
	speedStride = 1.3   // by which a search for a speed goes up
)

// atSpeed settles the machine at a speed.
func (t *trial) atSpeed(n float64, start *unknowns) (settled, error) {
	t.speedNow = n
	if t.gasCooled && t.highSide.optimise {
		return t.atBestPressure(start)
	}
	return t.settle(start)
}

// atBestPressure settles the machine at the high-side pressure of its best COP.
func (t *trial) atBestPressure(start *unknowns) (settled, error) {
	var first error
	try := func(p float64) (cop float64, err error) {
		t.highPressure = p
		s, err := t.settle(start)
		switch {
		case interrupted(err):
			return 0, err
		case err != nil:
			if first == nil {
				first = err
			}
			return math.Inf(-1), nil
		}
		start = &s.x
		if t.purpose == cycle.Cooling {
			return s.solution.Performance.COPCooling, nil
		}
		return s.solution.Performance.COPHeating, nil
	}
	low, high := math.Log(t.highSide.min), math.Log(t.highSide.max)
	best, cop := low, math.Inf(-1)
	step := (high - low) / (optimumScan - 1)
	for i := range optimumScan {
		u := low + step*float64(i)
		v, err := try(math.Exp(u))
		if err != nil {
			return settled{}, err
		}
		if v > cop {
			best, cop = u, v
		}
	}
	if math.IsInf(cop, -1) {
		return settled{}, first
	}
	u, err := golden(math.Max(low, best-step), math.Min(high, best+step), func(u float64) (float64, error) { return try(math.Exp(u)) })
	if err != nil {
		return settled{}, err
	}
	for _, end := range []float64{low, high} { // an optimum at the end of the range
		if math.Abs(u-end) < optimumWidth {
			u = end
		}
	}
	t.highPressure = math.Exp(u)
	return t.settle(start)
}

// golden returns where f is highest between a and b, by golden sections.
func golden(a, b float64, f func(float64) (float64, error)) (float64, error) {
	x, y := a+goldenShare*(b-a), b-goldenShare*(b-a)
	fx, err := f(x)
	if err != nil {
		return x, err
	}
	fy, err := f(y)
	for err == nil && b-a > optimumWidth {
		if fx >= fy {
			b, y, fy = y, x, fx
			x = a + goldenShare*(b-a)
			fx, err = f(x)
		} else {
			a, x, fx = x, y, fy
			y = b - goldenShare*(b-a)
			fy, err = f(y)
		}
	}
	return (a + b) / 2, err
}

// forDemand settles the machine at the speed that delivers the demand, or at the end of its speeds that comes closest.
// Capacity rises with speed. The caution says so where the demand lies outside.
func (t *trial) forDemand() (settled, *Caution, error) {
	d := &t.compressor
	capacity := func(s *settled) float64 {
		if t.demandCools {
			return s.solution.Performance.CoolingCapacity
		}
		return s.solution.Performance.HeatingCapacity
	}
	clamped := func(s *settled, n float64, end string) *Caution {
		return &Caution{Code: SpeedClamped, Field: t.demandField(), Message: message(
			"the machine delivers %s at its "+end+" speed, %s 1/s: the demand, %s, is out of reach", heat(capacity(s)), plain(n), heat(t.demand))}
	}
	slow, err := t.atSpeed(d.slowest, nil)
	if err != nil {
		return slow, nil, err
	}
	if capacity(&slow) >= t.demand {
		return slow, clamped(&slow, d.slowest, "lowest"), nil
	}
	n, now := d.slowest, slow
	for {
		next := math.Min(n*speedStride, d.fastest)
		s, err := t.atSpeed(next, &now.x)
		if err != nil {
			return s, nil, err
		}
		if capacity(&s) >= t.demand {
			start := s.x
			var last settled
			speed, _, err := narrowed(n, capacity(&now)/t.demand-1, next, capacity(&s)/t.demand-1, demandWidth, func(n float64) (float64, error) {
				var err error
				if last, err = t.atSpeed(n, &start); err != nil {
					return 0, err
				}
				return capacity(&last)/t.demand - 1, nil
			})
			if err != nil {
				return last, nil, err
			}
			last, err = t.atSpeed(speed, &start)
			return last, nil, err
		}
		if next == d.fastest {
			return s, clamped(&s, next, "highest"), nil
		}
		n, now = next, s
	}
}

func (t *trial) demandField() string {
	if t.demandCools {
		return "condition.demand.cooling"
	}
	return "condition.demand.heating"
}
