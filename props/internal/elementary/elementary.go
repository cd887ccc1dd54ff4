// Package elementary has exponentials and logarithms for equations of state, where they are more than half the cost: made by
// tables, without the standard library's care for the last bit and for special values. Method: Tang, ACM Trans. Math. Softw.
// 15 (1989) 144 and 16 (1990) 378.
package elementary

import (
	"math"
	"math/big"
)

const (
	tableBits = 7
	tableSize = 1 << tableBits

	ln2Hi = 0x1.62e42fefap-1 // ln 2 with 15 zero bits at the end, so that k*ln2Hi is exact
	ln2Lo = 0x1.cf79abc9e3b3ap-40
	round = 0x1.8p52 // adding it leaves the nearest whole number in the low bits
)

// exp2Table holds 2^(i/128) as a rounded number and what rounding took away.
var exp2Table = func() (t [tableSize]struct{ high, low float64 }) {
	const digits = 120 // bits
	two := new(big.Float).SetPrec(digits).SetInt64(2)
	root := two
	for range tableBits {
		root = new(big.Float).SetPrec(digits).Sqrt(root)
	}
	x := new(big.Float).SetPrec(digits).SetInt64(1)
	for i := range t {
		t[i].high, _ = x.Float64()
		t[i].low, _ = new(big.Float).SetPrec(digits).Sub(x, big.NewFloat(t[i].high)).Float64()
		x.Mul(x, root)
	}
	return t
}()

// Exp returns e^x to about one unit in the last place; below -700 it returns 0.
func Exp(x float64) float64 {
	if !(x > -700 && x < 700) {
		if x <= -700 {
			return 0
		}
		return math.Exp(x)
	}
	z := x*(tableSize/math.Ln2) + round
	k := math.Float64bits(z)
	n := z - round
	r := x - n*(ln2Hi/tableSize) - n*(ln2Lo/tableSize)
	q := r * r
	p := r + q*(0.5+r*(1.0/6)) + q*q*(1.0/24+r*(1.0/120))
	t := &exp2Table[k&(tableSize-1)]
	scale := math.Float64frombits(k>>tableBits<<52 + 0x3ff<<52)
	return scale * (t.high + (t.low + t.high*p))
}

// logEntry holds 1/c and ln(c) of a number c near the middle of a table interval of [1, 2), 1/c rounded to few bits so
// that products with it are nearly exact.
type logEntry struct{ inverse, log float64 }

var logTable = func() (t [tableSize]logEntry) {
	for i := range t {
		inverse := 1 / (1 + (float64(i)+0.5)/tableSize)
		inverse = math.Round(inverse*512) / 512 // 1 for numbers near 1, where the logarithm must not cancel
		t[i] = logEntry{inverse, -math.Log(inverse)}
	}
	return t
}()

// Log returns ln(x) of a normal positive number to about 2e-16 absolute, or relative where |ln x| > 1.
func Log(x float64) float64 {
	b := math.Float64bits(x)
	if b-1<<52 >= 0x7fe<<52 { // zero, denormal, negative, infinite or not a number
		return math.Log(x)
	}
	e := float64(int(b>>52) - 1023)
	m := math.Float64frombits(b&(1<<52-1) | 0x3ff<<52)
	t := &logTable[b>>(52-tableBits)&(tableSize-1)]
	r := m*t.inverse - 1
	q := r * r
	p := q*(-0.5+r*(1.0/3)) + q*q*(-0.25+r*0.2) + q*q*q*(-1.0/6+r*(1.0/7))
	return e*ln2Hi + t.log + (r + (p + e*ln2Lo))
}
