package render

import "math"

// vertex is a point of a curve on the frame, with its opacity and width there.
type vertex struct {
	x, y  float64
	alpha float64 // 0 to 1
	width float64 // pixels
}

// stroke adds the curve to the canvas's scratch coverage: overlaps take the larger, so that joints do not show.
func (c *canvas) stroke(curve []vertex, extra float64) (box bounds) {
	box = emptyBounds()
	for i := 1; i < len(curve); i++ {
		a, b := &curve[i-1], &curve[i]
		if a.alpha <= 0 && b.alpha <= 0 || !(math.Abs(a.x)+math.Abs(a.y)+math.Abs(b.x)+math.Abs(b.y) < 1e7) {
			continue
		}
		reach := max(a.width, b.width)/2 + extra + 1
		x0, x1 := max(int(math.Floor(min(a.x, b.x)-reach)), 0), min(int(math.Ceil(max(a.x, b.x)+reach)), c.w-1)
		y0, y1 := max(int(math.Floor(min(a.y, b.y)-reach)), 0), min(int(math.Ceil(max(a.y, b.y)+reach)), c.h-1)
		dx, dy := b.x-a.x, b.y-a.y
		length2 := float64(dx*dx) + float64(dy*dy)
		inverse := 0.0
		if length2 > 0 {
			inverse = 1 / length2
		}
		far := float64(reach * reach)
		for y := y0; y <= y1; y++ {
			row := c.cover[y*c.w : (y+1)*c.w]
			py := float64(y) + 0.5 - a.y
			for x := x0; x <= x1; x++ {
				px := float64(x) + 0.5 - a.x
				t := (float64(px*dx) + float64(py*dy)) * inverse
				if t < 0 { // min and max are calls in the browser
					t = 0
				} else if t > 1 {
					t = 1
				}
				ex, ey := px-float64(t*dx), py-float64(t*dy)
				square := float64(ex*ex) + float64(ey*ey)
				if square >= far {
					continue
				}
				k := 0.5 - math.Sqrt(square) + (a.width+float64(t*(b.width-a.width)))/2 + extra
				if k <= 0 {
					continue
				}
				if k > 1 {
					k = 1
				}
				cover := uint8(float64(k*(a.alpha+float64(t*(b.alpha-a.alpha)))*255) + 0.5)
				if cover > row[x] {
					row[x] = cover
				}
			}
		}
		if x0 <= x1 && y0 <= y1 {
			box.add(x0, y0)
			box.add(x1, y1)
		}
	}
	return box
}

// ink lays the colour over the pixels by the scratch coverage and empties that.
func (c *canvas) ink(box bounds, color rgb, alpha float64) {
	k := uint32(256 * alpha)
	for y := box.y0; y <= box.y1; y++ {
		for i := y*c.w + box.x0; i <= y*c.w+box.x1; i++ {
			if v := c.cover[i]; v != 0 {
				c.blend(i, color, uint32(v)*k>>8)
				c.cover[i] = 0
			}
		}
	}
}

// bounds is a rectangle of pixels, ends included.
type bounds struct{ x0, y0, x1, y1 int }

func emptyBounds() bounds { return bounds{math.MaxInt32, math.MaxInt32, -1, -1} }

func (b *bounds) add(x, y int) {
	b.x0, b.y0, b.x1, b.y1 = min(b.x0, x), min(b.y0, y), max(b.x1, x), max(b.y1, y)
}

func (b *bounds) join(o bounds) {
	b.x0, b.y0, b.x1, b.y1 = min(b.x0, o.x0), min(b.y0, o.y0), max(b.x1, o.x1), max(b.y1, o.y1)
}

// dashes cuts a curve into pieces of on pixels with gaps of off pixels between.
func dashes(curve []vertex, on, off float64) [][]vertex {
	var out [][]vertex
	var piece []vertex
	left, drawing := on, true
	for i, b := range curve {
		if i == 0 {
			piece = append(piece, b)
			continue
		}
		a := curve[i-1]
		length := math.Sqrt(float64((b.x-a.x)*(b.x-a.x)) + float64((b.y-a.y)*(b.y-a.y)))
		if !(length < 1e6) {
			length = 0
		}
		at := 0.0
		for length-at > left {
			at += left
			t := at / length
			m := vertex{a.x + float64(t*(b.x-a.x)), a.y + float64(t*(b.y-a.y)), a.alpha + float64(t*(b.alpha-a.alpha)), a.width}
			if drawing {
				out = append(out, append(piece, m))
				piece = nil
				left = off
			} else {
				piece = []vertex{m}
				left = on
			}
			drawing = !drawing
		}
		left -= length - at
		if drawing {
			piece = append(piece, b)
		}
	}
	if drawing && len(piece) > 1 {
		out = append(out, piece)
	}
	return out
}
