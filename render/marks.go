package render

import "math"

func distance(a, b vertex) float64 {
	dx, dy := a.x-b.x, a.y-b.y
	return math.Sqrt(float64(dx*dx) + float64(dy*dy))
}

func (c *canvas) disc(x, y, radius float64, color rgb, alpha float64) {
	c.shape(x, y, radius+1, color, alpha, func(dx, dy float64) float64 { return round(dx, dy) - radius })
}

func round(dx, dy float64) float64 { return math.Sqrt(float64(dx*dx) + float64(dy*dy)) }

// markSize is the radius of a mark in points.
const markSize = 6.0

// outline is the signed distance to the outline of a mark of radius one unit r.
type outline func(dx, dy, r float64) float64

// outlines tells the type of a point by its form. All forms have about the same area and a straight way to be drawn
// hollow.
var outlines = [...]outline{
	NodeMark:       func(dx, dy, r float64) float64 { return round(dx, dy) - r },
	FocusMark:      drop,
	SaddleMark:     star,
	DegenerateMark: func(dx, dy, r float64) float64 { return max(math.Abs(dx), math.Abs(dy)) - float64(0.85*r) },
	ProbeMark:      func(dx, dy, r float64) float64 { return round(dx, dy) - float64(0.55*r) },
}

// star has four points along the diagonals and hollow flanks: four arcs of circles, like the streamlines at a saddle.
func star(dx, dy, r float64) float64 {
	const tip, flank = 1.45, 1.25
	x, y := (math.Abs(dx+dy))*math.Sqrt2/2, (math.Abs(dx-dy))*math.Sqrt2/2
	// Inside where farther than flank*r from the corner circle's middle at (c, c).
	c := flank + 0.35
	d := float64(flank*r) - round(x-float64(c*r), y-float64(c*r))
	return max(d, max(x, y)-float64(tip*r))
}

// drop is a disc with two curled arms, which turn as the streamlines of a focus do.
func drop(dx, dy, r float64) float64 {
	d := round(dx, dy) - float64(0.84*r)
	// Each arm is half a circle of radius 0.62 r, fading in width.
	for _, sign := range [2]float64{1, -1} {
		x, y := float64(dx*sign)-float64(0.84*r), float64(dy*sign)
		if y < 0 {
			arm := math.Abs(round(x, y)-float64(0.62*r)) - float64(0.22*r)
			d = min(d, arm)
		} else {
			d = min(d, round(x-float64(0.62*r), y)-float64(0.22*r))
		}
	}
	return d
}

// mark draws a critical point. Filled means separation, hollow attachment; a neutral mark is filled on its left half.
func (c *canvas) mark(m *Mark, x, y, seen float64, col *colors, pixels float64) {
	r := float64(markSize * pixels)
	if m.Weak {
		r *= 0.72
	}
	form := outlines[min(m.Shape, ProbeMark)]
	if m.Half { // the upper half stands on the rim
		whole := form
		form = func(dx, dy, r float64) float64 { return max(whole(dx, dy, r), dy) }
	}
	color := col.ofLine(m.Sense)
	if m.Sense == NeutralSense {
		color = col.line
	}
	reach := float64(2*r) + float64(3*pixels)
	border := float64(1.5 * pixels)
	if m.Chosen {
		ring := func(dx, dy float64) float64 { return math.Abs(round(dx, dy)-float64(2*r)) - float64(1.1*pixels) }
		c.shape(x, y, reach+r, col.halo, 0.9*seen, func(dx, dy float64) float64 { return ring(dx, dy) - float64(1.2*pixels) })
		c.shape(x, y, reach+r, color, seen, ring)
	}
	c.shape(x, y, reach, col.halo, 0.95*seen, func(dx, dy float64) float64 {
		return form(dx, dy, r) - float64(1.4*pixels)
	})
	c.shape(x, y, reach, color, seen, func(dx, dy float64) float64 { return form(dx, dy, r) })
	if m.Sense == SeparationSense {
		return
	}
	c.shape(x, y, reach, col.halo, seen, func(dx, dy float64) float64 {
		d := form(dx, dy, r) + border
		if m.Sense == NeutralSense {
			d = max(d, -dx)
		}
		return d
	})
}

// hint draws a point that is hidden behind the surface: a faint ring of its size, nothing that could be taken for a
// mark.
func (c *canvas) hint(x, y float64, col *colors, pixels float64) {
	r := float64(markSize * 0.8 * pixels)
	ring := func(dx, dy float64) float64 { return math.Abs(round(dx, dy)-r) - float64(0.5*pixels) }
	c.shape(x, y, r+float64(2*pixels), col.halo, 0.35, func(dx, dy float64) float64 {
		return ring(dx, dy) - float64(0.8*pixels)
	})
	c.shape(x, y, r+float64(2*pixels), col.line, 0.4, ring)
}
