package render

import "math"

// isobars draws lines of equal value, at round values, from the scalar plane; the line of 0 is heavier. It returns
// taken with the labels' areas added.
func (r *Renderer) isobars(s *Scene, c *canvas, pixels float64, taken []area) []area {
	p := &r.plate
	factor := r.frame.Layers.Factor
	col := s.Theme.colors()
	step := niceStep((r.high - r.low) / float64(s.Isobars))
	type spot struct {
		x, y  float64
		value int
	}
	var spots []spot
	rows := p.bottom - p.top
	for y := 1; y+1 < rows; y++ {
		for x := 1; x+1 < p.w; x++ {
			i := y*p.w + x
			v := float64(p.scalar[i])
			if v != v {
				continue
			}
			k := math.Floor(v/step + 0.5)
			gx := slopeAt(p.scalar, p.steps, i, 1, stepRight)
			gy := slopeAt(p.scalar, p.steps, i, p.w, stepDown)
			g := float64(math.Sqrt(float64(gx*gx)+float64(gy*gy)) * (1 / float64(factor))) // per frame pixel
			if g == 0 {
				continue
			}
			off := math.Abs(v-float64(k*step)) / g
			half := float64(0.45 * pixels)
			if k == 0 {
				half = float64(0.9 * pixels)
			}
			cover := coverage(off-half, 0.75)
			if cover == 0 {
				continue
			}
			// Where lines would run together there is only noise to see.
			if apart := step / g; apart < 4*pixels {
				cover = uint32(float64(cover) * max(apart/(4*pixels)-0.25, 0))
			}
			for dy := range factor {
				for dx := range factor {
					if px, py := x*factor+dx, y*factor+dy; px < c.w && py < c.h {
						c.blend(py*c.w+px, col.isobar, cover)
					}
				}
			}
			if off < 0.5 && step/g > 16*pixels {
				spots = append(spots, spot{float64(x*factor) + 0.5, float64(y*factor) + 0.5, int(k)})
			}
		}
	}
	if r.frame.Quality != Still {
		return taken
	}
	// Labels: of each value the first free spots that are far from others of the same value.
	last := map[int][]spot{}
	h := float64(r.small.size * 0.74)
	for i := 0; i < len(spots); i += 7 {
		q := spots[i]
		text := tickText(float64(q.value)*step, step)
		w := r.small.set(text).advance
		a := area{q.x - w/2 - 3, q.y - h/2 - 3, q.x + w/2 + 3, q.y + h/2 + 3}
		if a.x0 < 0 || a.y0 < 0 || a.x1 > float64(c.w) || a.y1 > float64(c.h) || covered(a, taken) {
			continue
		}
		near := false
		for _, o := range last[q.value] {
			near = near || math.Abs(o.x-q.x)+math.Abs(o.y-q.y) < 420*pixels
		}
		if near {
			continue
		}
		last[q.value] = append(last[q.value], q)
		taken = append(taken, a)
		c.text(r.small, text, q.x, q.y+h/2, 0.5, col.ink, col.halo, 0.9)
	}
	return taken
}

// slopeAt returns the difference of the plane's values per pixel at i along a step of the given stride, one-sided at
// jumps of the surface.
func slopeAt(plane []float32, steps []uint8, i, stride int, jump uint8) float64 {
	a, b, n := i, i, 0.0
	if steps[i-stride]&jump == 0 && plane[i-stride] == plane[i-stride] {
		a, n = i-stride, n+1
	}
	if steps[i]&jump == 0 && plane[i+stride] == plane[i+stride] {
		b, n = i+stride, n+1
	}
	if n == 0 {
		return 0
	}
	return (float64(plane[b]) - float64(plane[a])) / n
}
