package render

import (
	"math"

	"shearprint/field/r3"
)

// hit is what the raster leaves at a pixel.
type hit struct {
	near float32 // rises towards the eye: 1/z in perspective, -z in parallel projection; linear over the frame
	tri  int32   // of the level; noHit where there is nothing, ^tri for the back of a triangle
	u, v float32 // barycentric weights of corners 1 and 2
}

const noHit = math.MaxInt32

// subpixel is the number of steps of a vertex's place on the frame per pixel. Edges are then integers, and neighbours
// share every pixel between them exactly once.
const subpixel = 256

// guard is the distance [pixels] from the frame's middle beyond which triangles are clipped: edge functions then stay
// below 2^60.
const guard = 1 << 20

// spot is a vertex on the frame.
type spot struct {
	x, y int32 // in 1/subpixel; x is offFrame where the triangle must be clipped
	near float32
}

const offFrame = math.MinInt32

// corner is a vertex of a triangle as it is rastered: with its barycentric weights within the triangle of the mesh,
// both times w, which is near in perspective and 1 in parallel projection.
type corner struct {
	x, y    int64
	near    float64
	w, u, v float64
}

// nearShare is the distance of the near plane as a share of the distance to the camera's target.
const nearShare = 1e-3

// raster draws levels of a body into hits: rows top..bottom of a frame that is width pixels wide.
type raster struct {
	lens           Lens    // in body coordinates
	zero           float64 // z that counts as near = 0 in parallel projection
	width          int
	top, bottom    int
	hits           []hit // of rows top..bottom
	tried, written int
}

// project fills spots with the places on the frame of the vertices used[from:to], or from..to where used is nil.
func project(b *body, used []int32, l *Lens, zero float64, spots []spot, from, to int) {
	nearest := float64(nearShare * l.distance)
	for i := from; i < to; i++ {
		i := i
		if used != nil {
			i = int(used[i])
		}
		d := b.pos[i].Sub(l.eye)
		x, y, z := d.Dot(l.right), d.Dot(l.up), d.Dot(l.forward)
		s, near := l.focal, zero-z
		if !l.ortho {
			if !(z > nearest) {
				spots[i].x = offFrame
				continue
			}
			near = 1 / z
			s *= near
		}
		x, y = float64(x*s), float64(y*s)
		if !(x < guard && x > -guard && y < guard && y > -guard) {
			spots[i].x = offFrame
			continue
		}
		spots[i] = spot{int32(math.Floor(float64((l.cx+x)*subpixel) + 0.5)),
			int32(math.Floor(float64((l.cy-y)*subpixel) + 0.5)),
			float32(near)}
	}
}

// clear empties the rows.
func (r *raster) clear() {
	for i := range r.hits {
		r.hits[i] = hit{near: -math.MaxFloat32, tri: noHit}
	}
}

// draw rasters triangles from..to of the level. Of equally near triangles the first stays.
func (r *raster) draw(b *body, l *level, spots []spot, from, to int) {
	top, bottom := int32(r.top*subpixel), int32(r.bottom*subpixel)
	right := int32(r.width * subpixel)
	for t := from; t < to; t++ {
		tri := l.tris[t]
		p, q, s := spots[tri[0]], spots[tri[1]], spots[tri[2]]
		if p.x == offFrame || q.x == offFrame || s.x == offFrame {
			r.clip(b, l, t)
			continue
		}
		if max(p.y, q.y, s.y) < top || min(p.y, q.y, s.y) > bottom || max(p.x, q.x, s.x) < 0 || min(p.x, q.x, s.x) > right {
			continue
		}
		area := int64(q.x-p.x)*int64(s.y-p.y) - int64(q.y-p.y)*int64(s.x-p.x)
		if area == 0 || area > 0 && l.cull[t] { // fronts run counter-clockwise, which is negative with y downward
			continue
		}
		w0, w1, w2 := 1.0, 1.0, 1.0
		if !r.lens.ortho {
			w0, w1, w2 = float64(p.near), float64(q.near), float64(s.near)
		}
		c := [3]corner{
			{int64(p.x), int64(p.y), float64(p.near), w0, 0, 0},
			{int64(q.x), int64(q.y), float64(q.near), w1, w1, 0},
			{int64(s.x), int64(s.y), float64(s.near), w2, 0, w2},
		}
		r.triangle(&c, area, int32(t))
	}
}

// triangle fills the pixels whose middles lie in the triangle.
func (r *raster) triangle(c *[3]corner, area int64, id int32) {
	a, b, d := &c[0], &c[1], &c[2]
	if area < 0 {
		b, d, area = d, b, -area
	} else {
		id = ^id
	}
	const half = subpixel / 2
	x0 := max((min(a.x, b.x, d.x)+half-1)>>8, 0)
	x1 := min((max(a.x, b.x, d.x)-half)>>8, int64(r.width-1))
	y0 := max((min(a.y, b.y, d.y)+half-1)>>8, int64(r.top))
	y1 := min((max(a.y, b.y, d.y)-half)>>8, int64(r.bottom-1))
	if x0 > x1 || y0 > y1 {
		return
	}
	px, py := x0<<8+half, y0<<8+half
	e0, e0x, e0y := edge(b, d, px, py)
	e1, e1x, e1y := edge(d, a, px, py)
	e2, e2x, e2y := edge(a, b, px, py)
	inverse := 1 / float64(area)
	near1, near2 := float64((b.near-a.near)*inverse), float64((d.near-a.near)*inverse)
	w1, w2 := float64((b.w-a.w)*inverse), float64((d.w-a.w)*inverse)
	u1, u2 := float64((b.u-a.u)*inverse), float64((d.u-a.u)*inverse)
	v1, v2 := float64((b.v-a.v)*inverse), float64((d.v-a.v)*inverse)
	for y := y0; y <= y1; y++ {
		row := r.hits[(int(y)-r.top)*r.width:][:r.width]
		f0, f1, f2 := e0, e1, e2
		inside := false
		for x := x0; x <= x1; x++ {
			if f0|f1|f2 >= 0 {
				inside = true
				m1, m2 := float64(f1), float64(f2)
				near := float32(a.near + float64(near1*m1) + float64(near2*m2))
				h := &row[x]
				r.tried++
				if near > h.near {
					w := 1 / (a.w + float64(w1*m1) + float64(w2*m2))
					h.near, h.tri = near, id
					h.u = float32((a.u + float64(u1*m1) + float64(u2*m2)) * w)
					h.v = float32((a.v + float64(v1*m1) + float64(v2*m2)) * w)
					r.written++
				}
			} else if inside {
				break
			}
			f0, f1, f2 = f0+e0x, f1+e1x, f2+e2x
		}
		e0, e1, e2 = e0+e0y, e1+e1y, e2+e2y
	}
}

// edge returns the edge function from a to b at a pixel's middle and its steps per pixel. Pixels on an edge belong to
// the triangle whose upper or left edge it is.
func edge(a, b *corner, px, py int64) (at, stepX, stepY int64) {
	dx, dy := b.x-a.x, b.y-a.y
	at = dx*(py-a.y) - dy*(px-a.x)
	if !(dy < 0 || dy == 0 && dx > 0) {
		at--
	}
	return at, -dy << 8, dx << 8
}

// z returns the distance along the view that near stands for.
func (r *raster) z(near float32) float64 {
	if r.lens.ortho {
		return r.zero - float64(near)
	}
	return 1 / float64(near)
}

// zeroOf returns the z that counts as near = 0: that of the body's middle.
func zeroOf(l *Lens) float64 { return r3.Vec{}.Sub(l.eye).Dot(l.forward) }
