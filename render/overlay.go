package render

import (
	"context"

	"shearprint/field/r3"
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
	if s.Isobars > 0 && s.Quantity.of(s.Field) != Plain {
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

// edgeAlpha is the opacity of the body's outline and creases: enough to part the body from the ground, less than any
// line that means something.
const edgeAlpha = 0.5

// edges draws the outline, rims and creases of the surface.
func (r *Renderer) edges(c *canvas, sight *sight, col *colors, pixels float64) {
	b := r.body
	f := b.field
	// Which triangles face the eye.
	r.facing = fitted(r.facing, len(f.Tris))
	if r.frame.Quality == Still {
		for t := range f.Tris {
			p := f.Points[f.Tris[t][0]]
			r.facing[t] = !sight.away(int32(t), p)
		}
	}
	var segment [2]vertex
	box := emptyBounds()
	draw := func(h int32) {
		p, q := f.Points[f.Tail(h)], f.Points[f.Tip(h)]
		x, y, seen, ok := sight.see(p)
		if !ok {
			return
		}
		u, v, sees, ok := sight.see(q)
		if !ok {
			return
		}
		segment[0], segment[1] = vertex{x, y, seen, 1.1 * pixels}, vertex{u, v, sees, 1.1 * pixels}
		box.join(c.stroke(segment[:], 0))
	}
	for _, h := range b.creases {
		draw(h)
	}
	if r.frame.Quality == Still {
		for h, g := range f.Twin {
			if g > int32(h) && r.facing[h/3] != r.facing[g/3] {
				draw(int32(h))
			}
		}
	}
	c.ink(box, col.edge, edgeAlpha)
}

// sharp is the cosine of the angle between neighbouring triangles beyond which their edge is drawn: 40 degrees.
const sharp = 0.766

// creasesOf lists the half-edges of rims and creases.
func creasesOf(b *body) []int32 {
	f := b.field
	normal := func(t int32) r3.Vec { return f.Corner(t).Normal().Unit() }
	var out []int32
	for h, g := range f.Twin {
		switch {
		case g < 0:
			out = append(out, int32(h))
		case g > int32(h) && b.normal[f.Tail(int32(h))][3]+b.normal[f.Tip(int32(h))][3] != 0:
			if normal(int32(h/3)).Dot(normal(g/3)) < sharp {
				out = append(out, int32(h))
			}
		}
	}
	return out
}
