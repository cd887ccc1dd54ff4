package uncertainty

import "math"

// Linear is a number with its partial derivatives by the inputs. The zero value is 0. A number that is not known is NaN
// and has no derivatives.
type Linear struct {
	Value  float64
	slopes []float64 // nil: none differs from zero
}

// Constant returns a number that depends on no input.
func Constant(v float64) Linear { return Linear{Value: v} }

// Unknown is a number that is not known.
var Unknown = Linear{Value: math.NaN()}

// Known reports whether the number is known.
func (y Linear) Known() bool { return !math.IsNaN(y.Value) }

// Slope returns the partial derivative by input i.
func (y Linear) Slope(i int) float64 {
	if y.slopes == nil {
		return 0
	}
	return y.slopes[i]
}

// Calculus makes [Linear] numbers. They are valid until it is reset, and it serves one goroutine at a time.
type Calculus struct {
	inputs int
	arena  []float64
	used   int
}

// Reset forgets all numbers and starts a calculation with so many inputs; with none, derivatives cost nothing.
func (c *Calculus) Reset(inputs int) { c.inputs, c.used = inputs, 0 }

// Differentiates reports whether derivatives are kept.
func (c *Calculus) Differentiates() bool { return c.inputs > 0 }

// blank returns room for the derivatives of one number, with whatever was there.
func (c *Calculus) blank() []float64 {
	const numbers = 64
	if c.used+c.inputs > len(c.arena) {
		// Numbers made before keep the old arena.
		c.arena, c.used = make([]float64, max(2*len(c.arena), numbers*c.inputs)), 0
	}
	s := c.arena[c.used : c.used+c.inputs : c.used+c.inputs]
	c.used += c.inputs
	return s
}

// Input returns input i with value v. A negative i means that the number has no uncertainty and is a constant.
func (c *Calculus) Input(i int, v float64) Linear {
	if i < 0 || c.inputs == 0 {
		return Constant(v)
	}
	s := c.blank()
	clear(s)
	s[i] = 1
	return Linear{v, s}
}

// Of returns a function of a: its value, and its derivative by a.
func (c *Calculus) Of(v float64, a Linear, byA float64) Linear {
	if c.inputs == 0 || a.slopes == nil || math.IsNaN(v) {
		return Constant(v)
	}
	s := c.blank()
	for i, d := range a.slopes {
		s[i] = byA * d
	}
	return Linear{v, s}
}

// OfTwo returns a function of a and b: its value, and its derivatives by both.
func (c *Calculus) OfTwo(v float64, a Linear, byA float64, b Linear, byB float64) Linear {
	switch {
	case b.slopes == nil:
		return c.Of(v, a, byA)
	case a.slopes == nil:
		return c.Of(v, b, byB)
	case c.inputs == 0 || math.IsNaN(v):
		return Constant(v)
	}
	s := c.blank()
	for i, d := range a.slopes {
		s[i] = byA*d + byB*b.slopes[i]
	}
	return Linear{v, s}
}

// Sum returns a + b.
func (c *Calculus) Sum(a, b Linear) Linear { return c.OfTwo(a.Value+b.Value, a, 1, b, 1) }

// Difference returns a - b.
func (c *Calculus) Difference(a, b Linear) Linear { return c.OfTwo(a.Value-b.Value, a, 1, b, -1) }

// Product returns a b.
func (c *Calculus) Product(a, b Linear) Linear {
	return c.OfTwo(a.Value*b.Value, a, b.Value, b, a.Value)
}

// Quotient returns a/b, which is not known where b is 0.
func (c *Calculus) Quotient(a, b Linear) Linear {
	if b.Value == 0 {
		return Unknown
	}
	v := a.Value / b.Value
	return c.OfTwo(v, a, 1/b.Value, b, -v/b.Value)
}

// Scaled returns k a.
func (c *Calculus) Scaled(a Linear, k float64) Linear { return c.Of(k*a.Value, a, k) }

// Shifted returns a + k.
func (c *Calculus) Shifted(a Linear, k float64) Linear { return c.Of(a.Value+k, a, 1) }

// Complement returns 1 - a.
func (c *Calculus) Complement(a Linear) Linear { return c.Of(1-a.Value, a, -1) }
