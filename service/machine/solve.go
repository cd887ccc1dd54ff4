package machine

import (
	"context"
	"math"
)

// Solve finds where m settles at condition k. It returns a [*RefusedError] when m or k cannot be or there is no such point,
// and the cause of ctx when that ends first.
func Solve(ctx context.Context, m *Machine, k *Condition) (*OperatingPoint, error) {
	return newUnit(m).solve(ctx, k)
}

func (u *unit) solve(ctx context.Context, k *Condition) (*OperatingPoint, error) {
	p, err := newPlan(u, k)
	if err != nil {
		return nil, err
	}
	t := newTrial(ctx, p)
	var s settled
	var clamped *Caution
	if math.IsNaN(p.demand) {
		s, err = t.atSpeed(p.speed, nil)
	} else {
		s, clamped, err = t.forDemand()
	}
	if err == nil {
		var point *OperatingPoint
		if point, err = t.report(&s, clamped); err == nil {
			return point, nil
		}
	}
	if e, ok := err.(*stopped); ok { //nolint:errorlint // made in this package and never wrapped
		return nil, e.cause
	}
	return nil, err
}
