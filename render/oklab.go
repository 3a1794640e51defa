package render

import "math"

// lab is a colour in OKLab (Ottosson, A perceptual color space for image processing, 2020): L from 0 to 1, a towards
// red, b towards yellow.
type lab struct{ l, a, b float64 }

// linear is a colour in linear sRGB, 0 to 1 where a screen can show it.
type linear [3]float64

// okLMS takes linear sRGB to the cone responses of OKLab, okInverse back (the author's matrices of 2021-01-25).
var (
	okLMS = [3][3]float64{
		{.4122214708, .5363325363, .0514459929},
		{.2119034982, .6806995451, .1073969566},
		{.0883024619, .2817188376, .6299787005},
	}
	okInverse = [3][3]float64{
		{4.0767416621, -3.3077115913, .2309699292},
		{-1.2684380046, 2.6097574011, -.3413193965},
		{-.0041960863, -.7034186147, 1.7076147010},
	}
	okLab = [3][3]float64{
		{.2104542553, .7936177850, -.0040720468},
		{1.9779984951, -2.4285922050, .4505937099},
		{.0259040371, .7827717662, -.8086757660},
	}
)

func times(m *[3][3]float64, v [3]float64) (w [3]float64) {
	for i, row := range m {
		w[i] = float64(row[0]*v[0]) + float64(row[1]*v[1]) + float64(row[2]*v[2])
	}
	return w
}

// toLab returns the colour in OKLab.
func (c linear) toLab() lab {
	m := times(&okLMS, c)
	for i := range m {
		m[i] = cbrt(m[i])
	}
	m = times(&okLab, m)
	return lab{m[0], m[1], m[2]}
}

// toLinear returns the colour in linear sRGB; components beyond 0 to 1 are what no screen can show.
func (c lab) toLinear() linear {
	m := [3]float64{
		c.l + float64(.3963377774*c.a) + float64(.2158037573*c.b),
		c.l - float64(.1055613458*c.a) - float64(.0638541728*c.b),
		c.l - float64(.0894841775*c.a) - float64(1.2914855480*c.b),
	}
	for i, x := range m {
		m[i] = float64(x * x * x)
	}
	return times(&okInverse, m)
}

// cbrt is the cube root by Newton's method from a power of two near it: the same bytes everywhere.
func cbrt(x float64) float64 {
	if x < 0 {
		return -cbrt(-x)
	}
	if x == 0 {
		return 0
	}
	_, e := math.Frexp(x)
	y := math.Ldexp(1, e/3)
	for range 8 { // from within a factor of two, quadratically, to the last bit but one
		y = (float64(2*y) + x/float64(y*y)) / 3
	}
	return y
}

// encode returns the byte of sRGB for a linear component, clamped.
func encode(x float64) uint8 {
	x = min(max(x, 0), 1)
	if x <= 0.0031308 {
		x *= 12.92
	} else {
		x = float64(1.055*pow5of12(x)) - 0.055
	}
	return uint8(float64(x*255) + 0.5)
}

// pow5of12 is x to the power 1/2.4 for 0 < x <= 1: the cube root of the fourth root of x^5.
func pow5of12(x float64) float64 { return cbrt(math.Sqrt(math.Sqrt(x * x * x * x * x))) }

// shown tells whether a screen can show the colour.
func (c linear) shown() bool {
	const slack = 1e-4 // far below half a step of a byte
	for _, x := range c {
		if !(x >= -slack && x <= 1+slack) {
			return false
		}
	}
	return true
}

// rgb is a colour in bytes of sRGB.
type rgb [3]uint8

// rgb returns the nearest colour of the same lightness and hue that a screen can show.
func (c lab) rgb() rgb {
	lo, hi := 0.0, 1.0
	if !c.toLinear().shown() {
		for range 24 { // halving: chroma to 1e-7
			mid := (lo + hi) / 2
			if (lab{c.l, c.a * mid, c.b * mid}).toLinear().shown() {
				lo = mid
			} else {
				hi = mid
			}
		}
		c.a, c.b = float64(c.a*lo), float64(c.b*lo)
	}
	l := c.toLinear()
	return rgb{encode(l[0]), encode(l[1]), encode(l[2])}
}
