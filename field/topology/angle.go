package topology

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// addAngles computes, along separation lines, the angle at which the surface that leaves the wall stands to it, where the
// pressure is known: measured from the wall on the left of the line, in (0, pi).
//
// The surface leaves at the distance m z to the left of the line, at the height z. From wall quantities (Surana, Grunberg
// and Haller 2006, from memory; the form used here is re-derived), with arc length l along the line, e along tau, and left
// = n x e:
//
//	|tau| dm/dl = (3/2 across + 1/2 along) m + (left . grad p)/2 - left . (grad n) tau
//
// where across and along are the rates of tau across and along the line. At a critical point m is the solution of
// (2 J + tr J) m = -grad p. In two dimensions it is the tan(theta) = -3 (dtau/dx)/(dp/dx) of Oswatitsch 1958 and Lighthill
// 1963.
func (s *Skeleton) addAngles(r *rates) {
	if s.Field.P == nil {
		return
	}
	var b *bends
	for i := range s.Lines {
		l := &s.Lines[i]
		if l.Kind == SeparationLine && len(l.Locs) > 1 {
			if b == nil {
				b = newBends(r.f)
			}
			l.Angle = s.anglesAlong(l, r, b)
		}
	}
}

func (s *Skeleton) anglesAlong(l *Line, r *rates, b *bends) []float64 {
	f := r.f
	terms := make([]angleTerm, len(l.Locs))
	for i, loc := range l.Locs {
		terms[i] = termAt(f, r, b, loc)
	}
	m := terms[0].frozen()
	if l.From >= 0 {
		m = s.atPoint(&s.Points[l.From], terms[min(1, len(terms)-1)].left)
	}
	turns := 1
	if l.Type == Cycle {
		turns = cycleTurns
	}
	out := make([]float64, len(l.Locs))
	for range turns {
		for i := range terms {
			if i > 0 {
				ds := f.Position(l.Locs[i]).Sub(f.Position(l.Locs[i-1])).Norm()
				m = step(m, ds, terms[i-1].mean(terms[i]))
			}
			out[i] = r3.Atan2(1, m)
		}
	}
	return out
}

// cycleTurns is the number of turns after which the slope along a cycle has forgotten its beginning: cycles with a kind
// contract by a factor of e per turn or so, and the slope forgets with at least the power 3/2 of it.
const cycleTurns = 20

// angleTerm holds the coefficients of |tau| dm/dl = rate m + push at a place.
type angleTerm struct {
	rate, push, tau float64
	left            r3.Vec
}

func (a angleTerm) mean(b angleTerm) angleTerm {
	return angleTerm{rate: (a.rate + b.rate) / 2, push: (a.push + b.push) / 2, tau: (a.tau + b.tau) / 2}
}

// frozen returns the slope at which nothing changes along the line.
func (a angleTerm) frozen() float64 {
	if a.rate == 0 {
		return 0
	}
	return finite(-a.push / a.rate)
}

// step goes on by ds with the coefficients held: exact for constant ones, whatever the step.
func step(m, ds float64, c angleTerm) float64 {
	if !(c.tau > 0) {
		return m
	}
	x := float64(c.rate*ds) / c.tau
	if math.Abs(x) < smallStep {
		return finite(m + float64(float64(c.push*ds)/c.tau))
	}
	g := r3.Exp(math.Min(x, mostExponent))
	return finite(float64(m*g) + float64(c.push/c.rate*(g-1)))
}

// smallStep is the exponent below which e^x - 1 is x to rounding's half.
const smallStep = 1e-8

func termAt(f *field.Field, r *rates, b *bends, loc field.Loc) angleTerm {
	s := f.At(loc)
	n := f.Corner(loc.Tri).Normal().Unit()
	left := n.Cross(s.Tau3.Unit())
	c := angleTerm{tau: s.Tau.Norm(), left: left}
	c.rate = float64(1.5*r.at(r.across, loc)) + float64(0.5*r.at(r.along, loc))
	var slope r3.Vec
	for k, v := range f.Tris[loc.Tri] {
		slope = slope.AddScaled(loc.Bary[k], pressureSlope(f, v))
	}
	c.push = finite(slope.Dot(left)/2 - left.Dot(b.along(loc.Tri, s.Tau3)))
	return c
}

// pressureSlope returns the gradient of p at vertex v in space, by least squares over its edges.
func pressureSlope(f *field.Field, v int32) r3.Vec {
	axes := tangentFrame(f.Normals[v])
	var xx, xy, yy, bx, by float64
	add := func(w int32) {
		d := f.Points[w].Sub(f.Points[v])
		q := d.Dot(d)
		if q == 0 {
			return
		}
		x, y, p := d.Dot(axes[0]), d.Dot(axes[1]), f.P[w]-f.P[v]
		xx += float64(x*x) / q
		xy += float64(x*y) / q
		yy += float64(y*y) / q
		bx += float64(x*p) / q
		by += float64(y*p) / q
	}
	for h := range f.Fan(v) {
		add(f.Tip(h))
		if p := field.Prev(h); f.Twin[p] < 0 {
			add(f.Tail(p))
		}
	}
	d := float64(xx*yy) - float64(xy*xy)
	if !(d > flatFan) {
		return r3.Vec{}
	}
	return axes[0].Scale((float64(yy*bx)-float64(xy*by))/d).
		AddScaled((float64(xx*by)-float64(xy*bx))/d, axes[1])
}

// atPoint returns the slope of the surface that leaves a critical point, towards the left of the line.
func (s *Skeleton) atPoint(p *Point, left r3.Vec) float64 {
	f := s.Field
	var slope r3.Vec
	for k, v := range f.Tris[p.Loc.Tri] {
		slope = slope.AddScaled(p.Loc.Bary[k], pressureSlope(f, v))
	}
	gx, gy := slope.Dot(p.Frame[0]), slope.Dot(p.Frame[1])
	a := p.Jacobian
	for i := range 2 {
		for k := range 2 {
			a[i][k] *= 2
		}
		a[i][i] += p.Trace
	}
	d := det(a)
	if d == 0 {
		return 0
	}
	x := (float64(a[0][1]*gy) - float64(a[1][1]*gx)) / d
	y := (float64(a[1][0]*gx) - float64(a[0][0]*gy)) / d
	return finite(float64(x*left.Dot(p.Frame[0])) + float64(y*left.Dot(p.Frame[1])))
}
