package topology

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// addAngles computes, along separation lines, the angle [rad] at which the surface that leaves the wall stands to it, where
// the pressure is known: measured from the wall on the left of the line, in (0, pi).
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
//
// The derivation: next to the wall mu u = z tau + z^2/2 (grad p - (div n) tau) + ..., since friction where the fluid sticks is
// mu (d2u/dz2 + div n du/dz); the part with div n is along tau, and so not across the line. The foot of a fluid particle
// at the height z runs with (1 + z grad n)^-1 u, which is the term with grad n. The particle rises with mu dz/dt = -z^2/2 div
// tau; that the area of the wall grows with z counts only at z^3. So the place m z to the left of the line moves with
// mu d(m z)/dt = z (m z across) + z^2 ((left . grad p)/2 - left . (grad n) tau), while mu dl/dt = z |tau|.
//
// Along is the derivative of |tau| along the line, and across the rest of the divergence. The rates at vertices, which are
// along and across the tau of each vertex, would not do beside a saddle, where tau points anywhere.
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
		before, after := f.Position(l.Locs[max(i-1, 0)]), f.Position(l.Locs[min(i+1, len(l.Locs)-1)])
		terms[i] = termAt(f, r, b, loc, after.Sub(before).Unit())
	}
	m := frozen(terms[0].to(terms[1]))
	if l.From >= 0 {
		m = s.atPoint(&s.Points[l.From], terms[0].left)
	}
	turns := 1
	if l.Type == Cycle {
		turns = cycleTurns
	}
	out := make([]float64, len(l.Locs))
	for range turns {
		for i := range terms {
			if i > 0 {
				m = step(m, terms[i-1].to(terms[i]))
			}
			out[i] = r3.Atan2(1, m)
		}
	}
	return out
}

// cycleTurns is the number of turns after which the slope along a cycle has forgotten its beginning: cycles with a kind
// contract by a factor of e per turn or so, and the slope forgets with at least the power 3/2 of it.
const cycleTurns = 20

// angleTerm holds what tells of the slope at a place of a line.
type angleTerm struct {
	at, left       r3.Vec
	tau, div, push float64 // push is the change of |tau| dm/dl that does not depend on m
}

// angleStep holds the coefficients of |tau| dm/dl = rate m + push over a distance.
type angleStep struct{ distance, tau, rate, push float64 }

func (a angleTerm) to(b angleTerm) angleStep {
	c := angleStep{distance: b.at.Sub(a.at).Norm(), tau: (a.tau + b.tau) / 2, push: (a.push + b.push) / 2}
	c.rate = float64(0.75 * (a.div + b.div))
	if c.distance > 0 {
		c.rate = finite(c.rate - (b.tau-a.tau)/c.distance)
	}
	return c
}

// frozen returns the slope at which nothing changes along the line.
func frozen(c angleStep) float64 {
	if c.rate == 0 {
		return 0
	}
	return finite(-c.push / c.rate)
}

// step goes on with the coefficients held: exact for constant ones, whatever the step.
func step(m float64, c angleStep) float64 {
	if !(c.tau > 0) {
		return m
	}
	x := float64(c.rate*c.distance) / c.tau
	if math.Abs(x) < smallStep {
		return finite(m + float64(float64(c.push*c.distance)/c.tau))
	}
	g := r3.Exp(math.Min(x, mostExponent))
	return finite(float64(m*g) + float64(c.push/c.rate*(g-1)))
}

// smallStep is the exponent below which e^x - 1 is x to rounding's half.
const smallStep = 1e-8

// termAt takes the direction of the line from its places: beside critical points tau itself tells it badly.
func termAt(f *field.Field, r *rates, b *bends, loc field.Loc, e r3.Vec) angleTerm {
	left := f.Corner(loc.Tri).Normal().Cross(e).Unit()
	c := angleTerm{at: f.Position(loc), left: left, tau: f.At(loc).Tau.Norm(), div: r.at(r.along, loc) + r.at(r.across, loc)}
	var slope r3.Vec
	for k, v := range f.Tris[loc.Tri] {
		slope = slope.AddScaled(loc.Bary[k], pressureSlope(f, v))
	}
	c.push = finite(slope.Dot(left)/2 - float64(c.tau*left.Dot(b.along(loc.Tri, e))))
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
