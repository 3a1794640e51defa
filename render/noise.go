package render

import "math"

// cellPixels is the size of the noise's cells on the frame [pixels]: fine enough for the texture to show the direction
// within a few pixels of a critical point; coarse enough that a pixel's middle stands for its cell when the body turns
// (at 1.5 the texture's correlation between frames of a turntable falls to 0.7, at 2 it is 0.85).
const cellPixels = 2.0

// noiseSize is the deviation of the noise. Smeared along a streamline, cells of two pixels make 1.45 times the contrast
// of independent pixels, which a deviation of one would stand for.
const noiseSize = 0.69

// solidNoise returns noise of deviation noiseSize at a place of the body, for cells of the wanted size. The noise is a
// lattice of cells in space, so that it rides with the surface; two octaves of cells, the next smaller and the next
// larger than wanted, are blended so that neither appears or leaves abruptly.
func solidNoise(x, y, z, wanted float64) float32 {
	bits := math.Float64bits(wanted)
	// The exponent is the octave, the mantissa how far the way to the next one is.
	octave := min(max(int(bits>>52&0x7ff)-1023, -400), 400)
	t := math.Float64frombits(bits&(1<<52-1)|1023<<52) - 1
	inverse := math.Float64frombits(uint64(1023-octave) << 52)
	x, y, z = float64(x*inverse), float64(y*inverse), float64(z*inverse)
	a := cellHash(int64(math.Floor(x)), int64(math.Floor(y)), int64(math.Floor(z)), uint64(octave))
	b := cellHash(int64(math.Floor(x/2)), int64(math.Floor(y/2)), int64(math.Floor(z/2)), uint64(octave+1))
	// Even distributions on [-sqrt 3, sqrt 3] have variance one.
	const root3 = 1.7320508075688772
	const scale = 2 * root3 / (1 << 24)
	s := 1 - t
	v := float64(s*(float64(float64(a)*scale)-root3)) + float64(t*(float64(float64(b)*scale)-root3))
	return float32(noiseSize * v / math.Sqrt(float64(s*s)+float64(t*t)))
}

// cellHash returns 24 bits that seem random for a cell of an octave.
func cellHash(x, y, z int64, octave uint64) uint64 {
	h := uint64(x)*0x9e3779b97f4a7c15 + uint64(y)*0xc2b2ae3d27d4eb4f + uint64(z)*0x165667b19e3779f9
	h += octave * 0x27d4eb2f165667c5
	h ^= h >> 31
	h *= 0xd6e8feb86659fd93
	return h >> 40
}
