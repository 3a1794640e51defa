package render

import "math"

// canvas is an RGBA picture, premultiplied, that lines, marks and type are drawn on.
type canvas struct {
	w, h  int
	pix   []byte
	cover []uint8 // scratch for shapes whose parts overlap; zero between uses
}

func (c *canvas) reset(pix []byte, w, h int) {
	c.w, c.h, c.pix = w, h, pix
	clear(pix)
	c.cover = fitted(c.cover, w*h)
}

// blend lays a colour with the given coverage (0 to 255) over pixel i.
func (c *canvas) blend(i int, color rgb, cover uint32) {
	if cover == 0 {
		return
	}
	o := c.pix[4*i : 4*i+4 : 4*i+4]
	k := 255 - cover
	for j := range 3 {
		o[j] = uint8((uint32(color[j])*cover + uint32(o[j])*k) / 255)
	}
	o[3] = uint8(cover + uint32(o[3])*k/255)
}

// shape fills what lies inside a signed distance [pixels, negative inside], with soft edges. It looks at the pixels
// within reach of x, y.
func (c *canvas) shape(x, y, reach float64, color rgb, alpha float64, distance func(dx, dy float64) float64) {
	x0, x1 := max(int(math.Floor(x-reach)), 0), min(int(math.Ceil(x+reach)), c.w-1)
	y0, y1 := max(int(math.Floor(y-reach)), 0), min(int(math.Ceil(y+reach)), c.h-1)
	for j := y0; j <= y1; j++ {
		for i := x0; i <= x1; i++ {
			d := distance(float64(i)+0.5-x, float64(j)+0.5-y)
			c.blend(j*c.w+i, color, coverage(d, alpha))
		}
	}
}

// coverage turns a signed distance into the share of a pixel that is covered, times alpha, in 255ths.
func coverage(d, alpha float64) uint32 {
	return uint32(float64(min(max(0.5-d, 0), 1)*alpha*255) + 0.5)
}

// rect fills a rectangle with soft edges.
func (c *canvas) rect(x0, y0, x1, y1 float64, color rgb, alpha float64) {
	share := func(i int, lo, hi float64) float64 { return min(max(min(float64(i+1), hi)-max(float64(i), lo), 0), 1) }
	left, right := max(int(math.Floor(x0)), 0), min(int(math.Ceil(x1)), c.w)
	for j := max(int(math.Floor(y0)), 0); j < min(int(math.Ceil(y1)), c.h); j++ {
		row := float64(share(j, y0, y1) * alpha * 255)
		for i := left; i < right; i++ {
			k := row
			if float64(i) < x0 || float64(i+1) > x1 {
				k *= share(i, x0, x1)
			}
			c.blend(j*c.w+i, color, uint32(k+0.5))
		}
	}
}
