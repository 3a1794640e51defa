package r3

import "math"

// The elementary functions below use only +, -, *, / and Sqrt, which IEEE 754 defines to the last bit, with products
// that cannot be fused. They are accurate to a few units in the last place over the ranges that this project needs.

// Hypot returns sqrt(x^2 + y^2) without overflow.
func Hypot(x, y float64) float64 {
	x, y = math.Abs(x), math.Abs(y)
	if x < y {
		x, y = y, x
	}
	if x == 0 || math.IsInf(x, 1) || x != x || y != y {
		return x + y
	}
	q := y / x
	return float64(x * math.Sqrt(1+float64(q*q)))
}

// atanTerms is the number of terms of the arctangent's alternating series. After reduction |x| <= tan(pi/16) < 0.199,
// so that the first term left out is below 0.199^25/25 = 1e-19.
const atanTerms = 12

func atanReduced(x float64) float64 {
	z := float64(x * x)
	s := 0.0
	for k := atanTerms - 1; k >= 0; k-- {
		s = 1/float64(2*k+1) - float64(z*s)
	}
	return float64(x * s)
}

// atanUnit returns atan(x) for 0 <= x <= 1.
func atanUnit(x float64) float64 {
	// Table of reduction: atan x = atan c + atan((x-c)/(1+c x)) for the nearest c = tan(k pi/8).
	const t1 = 0.41421356237309503 // tan(pi/8)
	const b1 = 0.1989123673796580  // tan(pi/16)
	const b3 = 0.6681786379192989  // tan(3 pi/16)
	switch {
	case x < b1:
		return atanReduced(x)
	case x < b3:
		return math.Pi/8 + atanReduced((x-t1)/(1+float64(t1*x)))
	}
	return math.Pi/4 + atanReduced((x-1)/(1+x))
}

// Atan2 returns the angle of (x, y) in (-pi, pi]; 0 for (0, 0), and NaN if either is NaN. A negative zero is a zero: unlike
// math.Atan2, which gives -pi there, Atan2(-0, -1) is pi.
func Atan2(y, x float64) float64 {
	if x != x || y != y {
		return math.NaN()
	}
	ax, ay := math.Abs(x), math.Abs(y)
	var a float64
	switch {
	case ax == 0 && ay == 0:
		return 0
	case math.IsInf(ax, 1) || math.IsInf(ay, 1):
		return math.Atan2(y, x)
	case ay <= ax:
		a = atanUnit(ay / ax)
	default:
		a = math.Pi/2 - atanUnit(ax/ay)
	}
	if x < 0 {
		a = math.Pi - a
	}
	if y < 0 {
		a = -a
	}
	return a
}

// SinCos returns sin x and cos x for |x| below 1e9; beyond, accuracy falls, and NaN and infinities give NaN.
func SinCos(x float64) (sin, cos float64) {
	if x-x != 0 {
		return math.NaN(), math.NaN()
	}
	// Cody and Waite's reduction by pi/2 in three parts, each with trailing zeros, so that k*part is exact.
	const p1 = 1.57079632673412561417e+00
	const p2 = 6.07710050630396597660e-11
	const p3 = 2.02226624879595063154e-21
	k := math.Floor(float64(x*(2/math.Pi)) + 0.5)
	r := ((x - float64(k*p1)) - float64(k*p2)) - float64(k*p3)
	z := float64(r * r)
	// Taylor series on |r| <= pi/4: first terms left out are below 1e-18.
	s, c := 0.0, 0.0
	for i := len(sinTerms) - 1; i >= 0; i-- {
		s = float64(s*z) + sinTerms[i]
		c = float64(c*z) + cosTerms[i]
	}
	s = float64(s * r)
	switch int64(k) & 3 {
	case 0:
		return s, c
	case 1:
		return c, -s
	case 2:
		return -s, -c
	}
	return -c, s
}

var sinTerms = [...]float64{1, -1. / 6, 1. / 120, -1. / 5040, 1. / 362880, -1. / 39916800, 1. / 6227020800,
	-1. / 1307674368000, 1. / 355687428096000}
var cosTerms = [...]float64{1, -1. / 2, 1. / 24, -1. / 720, 1. / 40320, -1. / 3628800, 1. / 479001600,
	-1. / 87178291200, 1. / 20922789888000}

// Exp returns e^x, 0 below -745 and +Inf above 709.78.
func Exp(x float64) float64 {
	switch {
	case x != x:
		return x
	case x > 709.78:
		return math.Inf(1)
	case x < -745:
		return 0
	}
	const ln2hi = 6.93147180369123816490e-01
	const ln2lo = 1.90821492927058770002e-10
	k := math.Floor(float64(x/math.Ln2) + 0.5)
	r := (x - float64(k*ln2hi)) - float64(k*ln2lo)
	// |r| <= 0.347: the 15th term is below 1e-18.
	s := 1.0
	for i := 14; i >= 1; i-- {
		s = 1 + float64(s*r)/float64(i)
	}
	return math.Ldexp(s, int(k))
}

// Log returns the natural logarithm; -Inf for 0, NaN below.
func Log(x float64) float64 {
	switch {
	case x != x || x < 0:
		return math.NaN()
	case x == 0:
		return math.Inf(-1)
	case math.IsInf(x, 1):
		return x
	}
	f, e := math.Frexp(x)
	if f < math.Sqrt2/2 {
		f *= 2
		e--
	}
	// ln f = 2 atanh(t), t = (f-1)/(f+1), |t| <= 0.1716: the term after the last is below 0.1716^25/25 = 3e-21.
	t := (f - 1) / (f + 1)
	z := float64(t * t)
	s := 0.0
	for k := 12; k >= 0; k-- {
		s = float64(z*s) + 1/float64(2*k+1)
	}
	const ln2hi = 6.93147180369123816490e-01
	const ln2lo = 1.90821492927058770002e-10
	n := float64(e)
	return float64(n*ln2hi) + (float64(2*t*s) + float64(n*ln2lo))
}

// Wrap returns the angle a + 2 pi k that lies in (-pi, pi].
func Wrap(a float64) float64 {
	if a > -math.Pi && a <= math.Pi {
		return a
	}
	a -= float64(2 * math.Pi * math.Ceil((a-math.Pi)/(2*math.Pi)))
	// One unit in the last place may be left over the edge.
	if a <= -math.Pi {
		return a + 2*math.Pi
	}
	if a > math.Pi {
		return a - 2*math.Pi
	}
	return a
}
