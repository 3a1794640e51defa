package render

import (
	"context"
)

// overlay draws what lies above the surface. factor is the number of frame pixels per pixel of the plate.
func (r *Renderer) overlay(ctx context.Context, s *Scene, c *canvas, factor float64) error {
	col := s.Theme.colors()
	pixels := s.scale()
	pixels *= smallFrame(c.w, c.h, pixels)
	sight := r.sight(factor)
	r.setType(pixels)
	var taken []area
	if !s.Bare {
		taken = r.furnitureAreas(s, c, pixels)
	}
	if s.Isobars > 0 && s.Quantity.of(s.Field) < Plain {
		taken = r.isobars(s, c, pixels, taken)
	}
	r.edges(c, sight, col, pixels)
	for _, locs := range s.Streamlines {
		if ctx.Err() != nil {
			return ctx.Err()
		}
		c.comet(sight.curve(locs, 1), col, pixels)
	}
	// Neutral lines lie below the others.
	for _, wanted := range [...]Sense{NeutralSense, AttachmentSense, SeparationSense} {
		for i := range s.Lines {
			if l := &s.Lines[i]; l.Sense == wanted {
				if ctx.Err() != nil {
					return ctx.Err()
				}
				c.line(sight.curve(l.Locs, 1), l, col, pixels)
			}
		}
	}
	labels := r.marks(s, c, sight, col, pixels)
	for i := range s.Lines {
		l := &s.Lines[i]
		if l.Label == "" || len(l.Locs) == 0 {
			continue
		}
		if x, y, seen, inside := sight.seeLoc(l.Locs[len(l.Locs)/2]); inside && seen > 0.5 {
			labels = append(labels, label{text: l.Label, x: x, y: y, weak: true})
		}
	}
	c.placeLabels(labels, taken, r.small, col, pixels)
	if !s.Bare {
		r.furniture(s, c, col, pixels)
	}
	return ctx.Err()
}

// smallFrame shrinks type, marks and lines on frames that are small, down to what can just be read.
func smallFrame(w, h int, pixels float64) float64 {
	return min(max(float64(min(w, h))/(460*pixels), 0.72), 1)
}

// setType makes the typists of the frame's sizes.
func (r *Renderer) setType(pixels float64) {
	const points = 12.5
	if r.small == nil || r.small.size != points*pixels {
		r.small = newTypist(points * pixels)
	}
}

// marks draws the points, strong ones last, and returns their labels, strong ones first.
func (r *Renderer) marks(s *Scene, c *canvas, sight *sight, col *colors, pixels float64) []label {
	var strong, weak []label
	for _, pass := range [2]bool{true, false} {
		for i := len(s.Marks) - 1; i >= 0; i-- {
			m := &s.Marks[i]
			if m.Weak != pass || m.Loc.Tri < 0 || int(m.Loc.Tri) >= len(s.Field.Tris) {
				continue
			}
			x, y, seen, inside := sight.seeLoc(m.Loc)
			if !inside {
				continue
			}
			if seen < 0.35 {
				c.hint(x, y, col, pixels)
				continue
			}
			c.mark(m, x, y, seen, col, pixels)
			if m.Label == "" {
				continue
			}
			l := label{text: m.Label, x: x, y: y, weak: m.Weak}
			if m.Weak {
				weak = append([]label{l}, weak...)
			} else {
				strong = append([]label{l}, strong...)
			}
		}
	}
	return append(strong, weak...)
}
