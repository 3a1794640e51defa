package topology

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// byFit places the point by a quadratic fit over the neighbourhood of pt.Loc. It returns why that is impossible, or "".
func (p *placer) byFit(s *seed, pt *Point) string {
	f := p.c.f
	var q quadratic
	var b base
	ok := false
	tris, rings := p.core(s, pt)
	for ; rings <= mostRings && !ok; rings++ {
		p.gather(rings, tris...)
		clean := p.clean()
		if len(clean) < fewSamples {
			continue
		}
		b = p.baseAt(s, pt.Loc)
		samples, weight := p.samples(s, &b, clean)
		if b.tau == 0 {
			return noteNoSlope
		}
		q, ok = fit(samples, weight)
	}
	if !ok {
		if p.crease {
			return noteCrease
		}
		return noteFew
	}
	reach := pt.Size / b.length // the start is in the triangle; the zero may be an edge outside it
	zero, found := q.zero(r3.Vec2{}, 2*reach)
	special := len(s.zeros) > 1 || s.index != 1 && s.index != -1
	if special {
		zero, found = r3.Vec2{}, true // the patch's own place
	}
	if !found {
		return noteFar
	}
	spot := b.lift(zero, at(&q.z, zero))
	if f.Corner(pt.Loc.Tri).At(f.Corner(pt.Loc.Tri).Nearest(spot)).Sub(spot).Norm() > pt.Size {
		return noteFar
	}
	j, m := q.jacobian(zero), q.errors(zero)
	lim := bordersOf(j, q.noise, m)
	kind, agrees := typeOf(j, s.index, lim)
	if !agrees && !special {
		return noteIndex
	}
	pt.setJacobian(j, b.tau, b.length, b.n, b.axes)
	pt.Type, pt.Sense = kind, senseOf(j, lim)
	if kind == Degenerate {
		pt.Sense = Neutral
	}
	pt.Confidence = 1
	if !special {
		pt.Confidence = confidence(j, q.noise, m, s.index, kind, lim, p.normals)
		pt.Loc = p.nearest(spot)
		if len(s.tris) == 1 && !s.half && p.flips(s, kind) {
			pt.Resolved = false
			addNote(pt, noteFlips)
		}
	}
	return ""
}

// core returns the triangles around which the point is fitted, and the number of rings: two around a triangle or a
// small patch, one around the fan of a zero vertex, so that a symmetric place has symmetric samples.
func (p *placer) core(s *seed, pt *Point) ([]int32, int32) {
	const small = 16 // triangles; larger patches have no linear part to be fitted
	switch {
	case len(s.tris) > small || len(s.zeros) > 1:
		return []int32{pt.Loc.Tri}, fitRings
	case len(s.zeros) == 1:
		return s.tris, fitRings - 1
	}
	return s.tris, fitRings
}

// baseAt returns the tangent plane at loc: perpendicular to the interpolated normal, or to the triangle's where a
// crease spoils the other; in the plane of symmetry for a half point.
func (p *placer) baseAt(s *seed, loc field.Loc) base {
	f := p.c.f
	b := base{origin: f.Position(loc), n: f.Normal(loc)}
	for _, v := range f.Tris[loc.Tri] {
		if p.creased[v] == p.stamp {
			b.n = f.Corner(loc.Tri).Normal().Unit()
		}
	}
	if b.n == (r3.Vec{}) {
		b.n = f.Corner(loc.Tri).Normal().Unit()
	}
	if s.half {
		b.origin = b.origin.AddScaled(-b.origin.Sub(s.mirror.origin).Dot(s.mirror.normal), s.mirror.normal)
		b.n = b.n.Reject(s.mirror.normal).Unit()
	}
	b.axes = tangentFrame(b.n)
	return b
}

// samples returns the vertices in the base's coordinates (x, y, tau's components, height), with their mirror images for
// a half point, and sets the base's units. The weight is the share of rows that are independent.
func (p *placer) samples(s *seed, b *base, vertices []int32) (rows [][5]float64, weight float64) {
	f := p.c.f
	weight = 1
	add := func(d, tau r3.Vec) {
		rows = append(rows, [5]float64{
			d.Dot(b.axes[0]), d.Dot(b.axes[1]), tau.Dot(b.axes[0]), tau.Dot(b.axes[1]), d.Dot(b.n),
		})
	}
	for _, v := range vertices {
		d := f.Points[v].Sub(b.origin)
		tau := f.Tau3[v].RotateBetween(f.Normals[v], b.n)
		if !s.half {
			add(d, tau)
			continue
		}
		weight = 0.5
		m := s.mirror.normal
		if math.Abs(d.Dot(m)) < float64(stretchPlanar*f.EdgeLength(3*s.tris[0])) || p.onStretch(s, v) {
			add(d.Reject(m), tau.Reject(m))
			continue
		}
		add(d, tau)
		add(d.AddScaled(-2*d.Dot(m), m), tau.AddScaled(-2*tau.Dot(m), m))
	}
	for _, r := range rows {
		b.length = math.Max(b.length, r3.Hypot(r[0], r[1]))
		b.tau = math.Max(b.tau, r3.Hypot(r[2], r[3]))
	}
	if b.length == 0 || b.tau == 0 {
		b.tau = 0
		return rows, weight
	}
	for i := range rows {
		r := &rows[i]
		r[0], r[1], r[4] = r[0]/b.length, r[1]/b.length, r[4]/b.length
		r[2], r[3] = r[2]/b.tau, r[3]/b.tau
	}
	return rows, weight
}

// onStretch tells whether rim vertex v lies in the seed's plane of symmetry.
func (p *placer) onStretch(s *seed, v int32) bool {
	f := p.c.f
	if !f.OnRim(v) {
		return false
	}
	d := math.Abs(f.Points[v].Sub(s.mirror.origin).Dot(s.mirror.normal))
	return d <= float64(stretchPlanar*f.EdgeLength(f.Out[v]))
}

// lift returns the place with coordinates x and height z over the base.
func (b *base) lift(x r3.Vec2, z float64) r3.Vec {
	return b.origin.AddScaled(float64(x.X*b.length), b.axes[0]).AddScaled(float64(x.Y*b.length), b.axes[1]).
		AddScaled(float64(z*b.length), b.n)
}

// nearest returns the place in the gathered patch that is nearest to spot; the triangle gathered first wins a tie.
func (p *placer) nearest(spot r3.Vec) field.Loc {
	f := p.c.f
	best, least := field.Loc{Tri: p.faces[0]}, math.Inf(1)
	for _, t := range p.faces {
		c := f.Corner(t)
		bary := c.Nearest(spot)
		if d := c.At(bary).Sub(spot).Norm(); d < least {
			best, least = field.Loc{Tri: t, Bary: bary}, d
		}
	}
	return best
}

// setJacobian stores Jacobian j, given in units of tau over length, in the frame of the axes.
func (pt *Point) setJacobian(j [2][2]float64, tau, length float64, n r3.Vec, axes [2]r3.Vec) {
	unit := finite(tau / length)
	for i := range 2 {
		for k := range 2 {
			j[i][k] = tidy(j[i][k])
			pt.Jacobian[i][k] = finite(float64(j[i][k] * unit))
		}
	}
	for i, e := range eigenvalues(j) {
		pt.Eigenvalues[i] = [2]float64{finite(float64(tidy(e[0]) * unit)), finite(float64(tidy(e[1]) * unit))}
	}
	pt.Trace = finite(float64(tidy(j[0][0]+j[1][1]) * unit))
	pt.Determinant = finite(float64(float64(det(j)*unit) * unit))
	pt.Normal, pt.Frame = n, axes
}

// tidy makes zero of what rounding leaves of a zero, in units of the patch: a result of 1e-17 would only puzzle.
func tidy(x float64) float64 {
	const rounding = 1e-13
	if math.Abs(x) < rounding {
		return 0
	}
	return x
}

// finite keeps numbers within the range that results can hold: data of any size must not give infinities.
func finite(x float64) float64 {
	switch {
	case x != x:
		return 0
	case x > math.MaxFloat64:
		return math.MaxFloat64
	case x < -math.MaxFloat64:
		return -math.MaxFloat64
	}
	return x
}
