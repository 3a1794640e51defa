package render

import (
	"shearprint/field/r3"
)

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
