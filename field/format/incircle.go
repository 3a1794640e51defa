package format

import (
	"math"
	"math/bits"
)

// inCircle tells whether v lies within the circle through a, b, c, which run counter-clockwise. The determinant is
// first taken in floating point; where its error could hide the sign, in whole numbers of 128 bits.
func (d *divided) inCircle(a, b, c, v int32) bool {
	o := d.p[v]
	from := func(p gridPoint) (x, y int64) { return int64(p.x - o.x), int64(p.y - o.y) }
	ax, ay := from(d.p[a])
	bx, by := from(d.p[b])
	cx, cy := from(d.p[c])
	a2, b2, c2 := ax*ax+ay*ay, bx*bx+by*by, cx*cx+cy*cy
	bc, ca, ab := bx*cy-by*cx, cx*ay-cy*ax, ax*by-ay*bx
	x, y, z := float64(float64(a2)*float64(bc)), float64(float64(b2)*float64(ca)), float64(float64(c2)*float64(ab))
	// Conversions and products are each off by 2^-53 at most, the two sums too: 8 of them bound all together.
	bound := (math.Abs(x) + math.Abs(y) + math.Abs(z)) * (8.0 / (1 << 53))
	switch sum := x + y + z; {
	case sum > bound:
		return true
	case sum < -bound:
		return false
	}
	var exact int128
	exact.addProduct(a2, bc)
	exact.addProduct(b2, ca)
	exact.addProduct(c2, ab)
	return exact.hi > 0 || exact.hi == 0 && exact.lo > 0
}

// int128 is a whole number in two's complement.
type int128 struct {
	hi int64
	lo uint64
}

// addProduct adds a*b, a not negative.
func (s *int128) addProduct(a, b int64) {
	hi, lo := bits.Mul64(uint64(a), uint64(b))
	if b < 0 {
		hi -= uint64(a) // two's complement of b counted 2^64 too much
	}
	var carry uint64
	s.lo, carry = bits.Add64(s.lo, lo, 0)
	sum, _ := bits.Add64(uint64(s.hi), hi, carry)
	s.hi = int64(sum)
}
