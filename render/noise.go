package render

import "math"

// cellPixels is the size of the noise's cells on the frame [pixels]: fine enough for the texture to show the direction
// within a few pixels of a critical point, coarse enough that a pixel's middle stands for its cell when the body turns.
const cellPixels = 1.5

// solidNoise returns white noise of variance one at a place of the body for a pixel that shows the length pixel there.
// The noise is a lattice of cells in space, so that it rides with the surface; two octaves of cells, the next smaller and
// the next larger than wanted, are blended so that neither appears or leaves abruptly.
func solidNoise(x, y, z, pixel float64) float32 {
	wanted := math.Float64bits(cellPixels * pixel)
	// The exponent is the octave, the mantissa how far the way to the next one is.
	octave := min(max(int(wanted>>52&0x7ff)-1023, -400), 400)
	t := math.Float64frombits(wanted&(1<<52-1)|1023<<52) - 1
	inverse := math.Float64frombits(uint64(1023-octave) << 52)
	a := cellNoise(x*inverse, y*inverse, z*inverse, uint32(octave))
	inverse /= 2
	b := cellNoise(x*inverse, y*inverse, z*inverse, uint32(octave+1))
	s := 1 - t
	return float32((float64(s*a) + float64(t*b)) / math.Sqrt(float64(s*s)+float64(t*t)))
}

// cellNoise returns the value of the cell of size one that holds the point: evenly spread, mean 0, variance 1.
func cellNoise(x, y, z float64, seed uint32) float64 {
	h := uint32(int64(math.Floor(x)))*0x8da6b343 ^ uint32(int64(math.Floor(y)))*0xd8163841 ^
		uint32(int64(math.Floor(z)))*0xcb1ab31f ^ seed*0x9e3779b9
	h ^= h >> 15
	h *= 0x2c1b3c6d
	h ^= h >> 12
	h *= 0x297a2d39
	h ^= h >> 15
	const root3 = 1.7320508075688772 // of the ends of the even distribution with variance 1
	return float64(h>>8)*(2*root3/(1<<24)) - root3
}
