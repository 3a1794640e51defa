package render

import "shearprint/field/r3"

// lineStyle is the form of a line, in points.
type lineStyle struct {
	width, halo float64
	on, off     float64 // dashes; 0 for an unbroken line
}

// lineStyles tells separation from attachment by form: unbroken and bold against dashed. Neutral lines are thin.
var lineStyles = [...]lineStyle{
	NeutralSense:    {width: 1.1, halo: 0.9},
	AttachmentSense: {width: 2.1, halo: 1.2, on: 8, off: 5},
	SeparationSense: {width: 2.3, halo: 1.2},
}

func (c *colors) ofLine(s Sense) rgb {
	switch s {
	case SeparationSense:
		return c.separation
	case AttachmentSense:
		return c.attachment
	}
	return c.line
}

// line draws one line: its halo below, its core above.
func (c *canvas) line(curve []vertex, l *Line, col *colors, pixels float64) {
	style := lineStyles[min(l.Sense, SeparationSense)]
	width := float64(style.width * pixels)
	if l.Chosen {
		width *= 1.6
	}
	for i := range curve {
		curve[i].width = width
	}
	pieces := [][]vertex{curve}
	if style.on > 0 {
		pieces = dashes(curve, style.on*pixels, style.off*pixels)
	}
	c.strokes(pieces, style.halo*pixels, col.halo, 0.85)
	c.strokes(pieces, 0, col.ofLine(l.Sense), 1)
	if l.Sense != NeutralSense {
		c.beads(curve, l.Form, col, col.ofLine(l.Sense), pixels)
	}
}

// beads marks the form of a line along it.
func (c *canvas) beads(curve []vertex, form Form, col *colors, color rgb, pixels float64) {
	const apart, size = 30, 2.6 // in points
	if form == ClosedForm {
		return
	}
	for i, d := range dashes(curve, apart/2*pixels, 0.01) {
		v := d[0]
		if i%2 == 0 || v.alpha <= 0.5 { // half way between ends, so that a sample in the key has one
			continue
		}
		switch form {
		case HornForm:
			c.bar(d, col, color, 3.2*pixels, pixels)
		case OpenForm:
			c.disc(v.x, v.y, (size+0.9)*pixels, col.halo, v.alpha)
			c.disc(v.x, v.y, size*pixels, color, v.alpha)
		case CycleForm:
			c.disc(v.x, v.y, (size+1.6)*pixels, color, v.alpha)
			c.disc(v.x, v.y, (size-0.3)*pixels, col.halo, v.alpha)
		}
	}
}

// bar draws a short stroke across the beginning of a piece.
func (c *canvas) bar(piece []vertex, col *colors, color rgb, half, pixels float64) {
	v, last := piece[0], piece[min(len(piece)-1, 3)]
	dx, dy := last.x-v.x, last.y-v.y
	size := r3.Hypot(dx, dy)
	if size == 0 {
		return
	}
	dx, dy = dx/size*half, dy/size*half
	width := 1.7 * pixels
	across := []vertex{{v.x - dy, v.y + dx, v.alpha, width}, {v.x + dy, v.y - dx, v.alpha, width}}
	c.strokes([][]vertex{across}, 0.8*pixels, col.halo, 0.85)
	c.strokes([][]vertex{across}, 0, color, 1)
}

// strokes draws curves that may touch as one.
func (c *canvas) strokes(pieces [][]vertex, extra float64, color rgb, alpha float64) {
	box := emptyBounds()
	for _, p := range pieces {
		box.join(c.stroke(p, extra))
	}
	c.ink(box, color, alpha)
}

// comet draws a streamline that grows from a fine tail to a round head, so that its direction shows in a still picture.
func (c *canvas) comet(curve []vertex, col *colors, pixels float64) {
	const tail, head = 0.5, 2.6 // widths in points
	total := 0.0
	at := make([]float64, len(curve))
	for i := 1; i < len(curve); i++ {
		total += distance(curve[i-1], curve[i])
		at[i] = total
	}
	for i := range curve {
		s := at[i] / max(total, 1e-9)
		curve[i].width = float64((tail + float64((head-tail)*s*s)) * pixels)
	}
	c.strokes([][]vertex{curve}, 0.7*pixels, col.halo, 0.7)
	c.strokes([][]vertex{curve}, 0, col.stream, 0.95)
	if n := len(curve); n > 0 && curve[n-1].alpha > 0.5 && total > 6*pixels {
		v := curve[n-1]
		c.disc(v.x, v.y, 2.5*pixels, col.halo, v.alpha)
		c.disc(v.x, v.y, 1.9*pixels, col.stream, v.alpha)
	}
}
