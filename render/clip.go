package render

import "shearprint/field/r3"

// clipCorner is a corner of a triangle while it is clipped: place in the eye's axes and barycentric weights.
type clipCorner struct {
	x, y, z float64
	u, v    float64
}

// clip rasters a triangle that reaches behind the near plane or far beyond the frame, cut to what may be seen.
func (r *raster) clip(b *body, l *level, t int) {
	var buffer [2][9]clipCorner
	poly := buffer[0][:0]
	for k, v := range l.tris[t] {
		d := b.pos[v].Sub(r.lens.eye)
		c := clipCorner{x: d.Dot(r.lens.right), y: d.Dot(r.lens.up), z: d.Dot(r.lens.forward)}
		switch k {
		case 1:
			c.u = 1
		case 2:
			c.v = 1
		}
		poly = append(poly, c)
	}
	// The planes, as functions that are positive on the side that stays.
	planes := [5][4]float64{{0, 0, 1, -nearShare * r.lens.distance}}
	reach := guard / 2 / r.lens.focal
	for i, sign := range [2]float64{1, -1} {
		if r.lens.ortho {
			planes[1+i], planes[3+i] = [4]float64{sign, 0, 0, reach}, [4]float64{0, sign, 0, reach}
		} else {
			planes[1+i], planes[3+i] = [4]float64{sign, 0, reach, 0}, [4]float64{0, sign, reach, 0}
		}
	}
	if r.lens.ortho {
		planes[0] = [4]float64{0, 0, 0, 1}
	}
	for i, plane := range planes {
		poly = cut(poly, plane, buffer[(i+1)%2][:0])
		if len(poly) < 3 {
			return
		}
	}
	for i := 2; i < len(poly); i++ {
		c := [3]corner{r.corner(poly[0]), r.corner(poly[i-1]), r.corner(poly[i])}
		area := (c[1].x-c[0].x)*(c[2].y-c[0].y) - (c[1].y-c[0].y)*(c[2].x-c[0].x)
		if area == 0 || area > 0 && l.cull[t] {
			continue
		}
		r.triangle(&c, area, int32(t))
	}
}

// cut appends to into the part of the polygon on the positive side of the plane (Sutherland and Hodgman, Communications
// of the ACM 17(1), 1974, from memory). Crossings are computed from the inner to the outer end, so that both neighbours
// of a cut edge have the same.
func cut(poly []clipCorner, plane [4]float64, into []clipCorner) []clipCorner {
	side := func(c clipCorner) float64 {
		n := r3.Vec{X: plane[0], Y: plane[1], Z: plane[2]}
		return n.Dot(r3.Vec{X: c.x, Y: c.y, Z: c.z}) + plane[3]
	}
	for i, c := range poly {
		d := poly[(i+1)%len(poly)]
		s, t := side(c), side(d)
		if s >= 0 {
			into = append(into, c)
		}
		if s < 0 && t >= 0 || s >= 0 && t < 0 {
			if s < 0 {
				c, d, s, t = d, c, t, s
			}
			k := s / (s - t)
			mix := func(a, b float64) float64 { return a + float64(k*(b-a)) }
			into = append(into, clipCorner{mix(c.x, d.x), mix(c.y, d.y), mix(c.z, d.z), mix(c.u, d.u), mix(c.v, d.v)})
		}
	}
	return into
}

func (r *raster) corner(c clipCorner) corner {
	s, near, w := r.lens.focal, r.zero-c.z, 1.0
	if !r.lens.ortho {
		near = 1 / c.z
		s *= near
		w = near
	}
	return corner{
		x: int64((r.lens.cx + float64(c.x*s)) * subpixel), y: int64((r.lens.cy - float64(c.y*s)) * subpixel),
		near: near, w: w, u: c.u * w, v: c.v * w,
	}
}
