package blend

import "math"

// result is a solved state per mole, from the zero points of the component files.
type result struct {
	point            // of a single phase; in two phases only T, p, rho, h and s are set
	quality float64  // by mass; NaN for a single phase
	split   *outcome // of two phases
	edge    *saturated
}

func singlePhase(q point) result { return result{point: q, quality: math.NaN()} }

func (a *saturated) result() result {
	r := result{point: a.bulk, quality: 1, edge: a}
	if a.bulkIsLiquid() {
		r.quality = 0
	}
	return r
}

func (o *outcome) result() result {
	return result{point: point{T: o.T, p: o.p, rho: 1 / o.v, h: o.h, s: o.s, dpdT: o.dpdT}, quality: o.quality, split: o}
}

// value returns a property of a point; Density stands for the molar volume, in which a point is linear.
func (q *point) value(of Property) float64 {
	switch of {
	case Temperature:
		return q.T
	case Pressure:
		return q.p
	case Density:
		return 1 / q.rho
	case Enthalpy:
		return q.h
	case Entropy:
		return q.s
	case InternalEnergy:
		return q.u()
	}
	return math.NaN()
}

// slopes returns the derivatives of enthalpy, entropy or internal energy in temperature at constant density and in density
// at constant temperature.
func (q *point) slopes(of Property) (inT, inRho float64) {
	v := q.dpdT / q.rho
	switch of {
	case Enthalpy:
		return q.cv + v, (q.dpdrho - q.T*v) / q.rho
	case Entropy:
		return q.cv / q.T, -v / q.rho
	default:
		return q.cv, (q.p/q.rho - q.T*v) / q.rho
	}
}
