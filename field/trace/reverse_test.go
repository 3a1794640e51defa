package trace_test

import (
	"context"
	"math"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/trace"
)

const (
	// pieceTolerance is the tolerance with which the curves of these tests are traced: the error of a step, as a share of its
	// triangle's longest edge, is estimated by the lower order of the pair and is at most this; that of the place taken, by
	// the higher order, is smaller.
	pieceTolerance = 1e-6
	// onEdge is the barycentric weight below which a place is on an edge: crossings are found to some 1e-14 of a step, and kept
	// 1e-9 of an edge off its ends.
	onEdge = 1e-8
	// offEdge is what a crossing may move by, as a share of an edge: 1e-9 at either end of it, and as much at the start of a
	// curve. The tracer's cornerShare.
	offEdge = 4e-9
)

// piece is what a curve does between two places of its list, in the flat frame of the triangle that it passes.
type piece struct {
	tri    int32
	a, b   r3.Vec2 // its ends
	ta, tb r3.Vec2 // the unit vectors along the curve there, from tau
	ds     float64
	long   float64 // the triangle's longest edge
	edge   bool    // it runs along an edge
	cut    bool    // it ends on an edge, within a step
	rate   float64 // the lesser of the rates at which neighbours part at its ends; negative where they approach [1/m]
	steep  float64 // the greatest of those rates and of the curvatures, whatever their signs [1/m]
	bend   float64 // the greater of the curvatures at its ends [1/m]
	enters crossing
}

// crossing is how a piece begins that comes over an edge: the angles between the edge and the curve, before and after.
type crossing struct {
	edge                 bool
	sin, cos             float64
	sinBefore, cosBefore float64
}

// pieces looks at a path piece by piece. What leads over a vertex, from one triangle to another that has no edge in common
// with it, is no piece: whole is false.
func pieces(f *field.Field, p trace.Path, sign float64) (all []piece, whole bool) {
	whole = true
	for i := 1; i < len(p.Locs); i++ {
		from, to := p.Locs[i-1], p.Locs[i]
		h, ok := commonEdge(f, from, to.Tri)
		if !ok {
			whole = false
			continue
		}
		var enters crossing
		if h >= 0 {
			enters.edge = true
			enters.sinBefore, enters.cosBefore = against(f, from, h%3, sign)
			g := f.Twin[h]
			from = over(f, from, h)
			enters.sin, enters.cos = against(f, from, g%3, -sign)
		}
		c := f.Flat(to.Tri)
		c2 := func(l field.Loc) r3.Vec2 {
			return c[0].Scale(l.Bary[0]).AddScaled(l.Bary[1], c[1]).AddScaled(l.Bary[2], c[2])
		}
		q := piece{tri: to.Tri, a: c2(from), b: c2(to), ds: p.S[i] - p.S[i-1], enters: enters}
		for k := range 3 {
			q.long = math.Max(q.long, c[(k+1)%3].Sub(c[k]).Norm())
			// The flow leads over the edge there, or along it; one that bends back to an edge has begun away from it.
			inward := c[(k+2)%3].Sub(c[(k+1)%3]).Unit().Left()
			q.edge = q.edge || from.Bary[k] < onEdge && to.Bary[k] < onEdge && sign*f.At(from).Tau.Unit().Dot(inward) <= onEdge
		}
		q.rate, q.bend = math.Inf(1), 0
		for _, l := range [2]field.Loc{from, to} {
			rate, bend := partings(f, l)
			q.rate, q.bend = math.Min(q.rate, sign*rate), math.Max(q.bend, bend)
			q.steep = math.Max(q.steep, math.Max(math.Abs(rate), bend))
		}
		q.ta, q.tb = f.At(from).Tau.Unit().Scale(sign), f.At(to).Tau.Unit().Scale(sign)
		all = append(all, q)
	}
	return all, whole
}

// commonEdge returns the half-edge on which a place is and behind which triangle tri is; -1 where the place is one of tri.
func commonEdge(f *field.Field, l field.Loc, tri int32) (h int32, ok bool) {
	if l.Tri == tri {
		return -1, true
	}
	for h := 3 * l.Tri; h < 3*l.Tri+3; h++ {
		if g := f.Twin[h]; g >= 0 && g/3 == tri && l.Bary[(h%3+2)%3] < onEdge {
			return h, true
		}
	}
	return -1, false
}

// over returns a place on half-edge h as one of the triangle behind it.
func over(f *field.Field, l field.Loc, h int32) field.Loc {
	g := f.Twin[h]
	out := field.Loc{Tri: g / 3}
	share := l.Bary[(h%3+1)%3] / (l.Bary[h%3] + l.Bary[(h%3+1)%3])
	out.Bary[g%3], out.Bary[(g%3+1)%3] = share, 1-share
	return out
}

// against returns sine and cosine of the angle from edge k of a place's triangle to sign times tau at the place.
func against(f *field.Field, l field.Loc, k int32, sign float64) (sin, cos float64) {
	c := f.Flat(l.Tri)
	e, t := c[(k+1)%3].Sub(c[k]).Unit(), f.At(l).Tau.Unit().Scale(sign)
	return e.Cross(t), e.Dot(t)
}

// partings returns the rate at which neighbouring curves part at a place, which is the derivative across of the direction
// across, and the curvature of the curve there.
func partings(f *field.Field, l field.Loc) (rate, bend float64) {
	c, tau := f.Flat(l.Tri), f.CornerTau(l.Tri)
	v := f.At(l).Tau
	t := v.Unit()
	along, across := slope(c, tau, t), slope(c, tau, t.Left())
	return across.Dot(t.Left()) / v.Norm(), math.Abs(along.Dot(t.Left())) / v.Norm()
}

// slope returns the derivative along d of what is linear in the triangle c with the values v at its corners.
func slope(c, v [3]r3.Vec2, d r3.Vec2) r3.Vec2 {
	twice := c[1].Sub(c[0]).Cross(c[2].Sub(c[0]))
	var sum r3.Vec2
	for k := range 3 {
		sum = sum.AddScaled(c[(k+2)%3].Sub(c[(k+1)%3]).Cross(d)/twice, v[k])
	}
	return sum
}

// smooth is a random field on a random surface and a place on it. Each coordinate of tau is a polynomial of degree two in
// the place, of which the surface takes the tangential part.
func smooth(t *rapid.T) (*field.Field, field.Loc) {
	surface := rapid.SampledFrom([]string{"sphere", "torus", "disk"}).Draw(t, "surface")
	triangles := rapid.IntRange(300, 3000).Draw(t, "triangles")
	shake := rapid.SampledFrom([]float64{0, 0.1, 0.3}).Draw(t, "shake")
	seed := rapid.Uint64Range(1, 99).Draw(t, "seed")
	var raw field.Raw
	project := exact.OntoPlane
	switch surface {
	case "sphere":
		raw, project = exact.Sphere(1, triangles), exact.OntoSphere(1)
	case "torus":
		raw, project = exact.Torus(1, 0.4, triangles), ontoTorus
	case "disk":
		raw = exact.Disk(1, triangles)
	}
	if shake > 0 {
		raw = exact.Shake(raw, shake, seed, project)
	}
	number := rapid.Float64Range(-1, 1)
	vec := func(name string) r3.Vec {
		return r3.Vec{X: number.Draw(t, name), Y: number.Draw(t, name), Z: number.Draw(t, name)}
	}
	constant, x, y, z, xy, yz, zx := vec("1"), vec("x"), vec("y"), vec("z"), vec("xy"), vec("yz"), vec("zx")
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = constant.AddScaled(p.X, x).AddScaled(p.Y, y).AddScaled(p.Z, z).
			AddScaled(p.X*p.Y, xy).AddScaled(p.Y*p.Z, yz).AddScaled(p.Z*p.X, zx)
	}
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	tri := rapid.Int32Range(0, int32(len(f.Tris)-1)).Draw(t, "triangle")
	u := rapid.Float64Range(0.01, 1)
	b := [3]float64{u.Draw(t, "b"), u.Draw(t, "b"), u.Draw(t, "b")}
	sum := b[0] + b[1] + b[2]
	return f, field.Loc{Tri: tri, Bary: [3]float64{b[0] / sum, b[1] / sum, b[2] / sum}}
}

// ontoTorus projects onto the torus of radii 1 and 0.4, for Shake.
func ontoTorus(p r3.Vec) r3.Vec {
	ring := r3.Vec{X: p.X, Z: p.Z}.Unit()
	return ring.AddScaled(0.4, p.Sub(ring).Unit())
}

// A curve is a list of places whose arc length grows, whose pieces are as long as their arc but for the chord's error, and whose
// direction is that of tau at the place.
func TestPathFollowsTau(t *testing.T) {
	// Each piece is compared with Simpson's rule on the directions at its ends and at its middle, which errs by ds^5/2880 of
	// their fourth derivative. Where the direction changes little over a step, the higher order's error is a fraction of the
	// estimate and so below the tolerance (below 1 of it in a million pieces, 2.8 in one of some
	// ten million, where the estimate passes through zero).
	//
	// Where neighbours close in by z = rate ds of some -1 within a step, the estimate is blind: on y' = rate y the two orders
	// of the pair differ by z^3(1+z)/48, which vanishes at -1, while the higher is off by |1+z+z^2/2+z^3/6 - e^z| <= 0.094
	// up to z = -1.3, of the distance from the curve to which they close in. That distance is the turn times ds by
	// |z|(1 - e^z): the error is up to 0.12 of turn times ds, twice that as the rate varies. It shrinks as
	// fast as it came, since neighbours close in.
	// And where they close in within a small part of a step, a place that is off by the tolerance has a direction that is off by
	// the rate times that, which over the piece makes z times the tolerance.
	const (
		easy, easyAllowance = 0.1, 5
		allowance, blind    = 10, 0.25
		// atZero is the turn of the direction over an edge from which on a piece is at a zero of tau, nearer than a thousandth
		// of an edge: it turns round within what the crossing of an edge is found to, and nothing can be told.
		atZero = 1e3
	)
	const closeTo = 1e-12 // rounding of what is measured, as a share of an edge
	worst, worstChord := 0.0, 0.0
	rapid.Check(t, func(t *rapid.T) {
		f, from := smooth(t)
		sign := rapid.SampledFrom([]float64{1, -1}).Draw(t, "sign")
		p := trace.New(f, nil, nil).Trace(context.Background(), from, trace.Options{MaxLength: 2, Backward: sign < 0,
			Tolerance: pieceTolerance})
		for i := 1; i < len(p.S); i++ {
			if !(p.S[i] > p.S[i-1]) {
				t.Fatalf("place %d of %d: arc length goes from %v to %v", i, len(p.S), p.S[i-1], p.S[i])
			}
		}
		all, _ := pieces(f, p, sign)
		arc, chords, slack := 0.0, 0.0, 0.0
		for i, q := range all {
			if q.steep*q.long > atZero {
				continue
			}
			d := q.b.Sub(q.a)
			delta := (pieceTolerance*easyAllowance + offEdge) * q.long
			if q.steep*q.ds > easy || q.cut {
				delta = (pieceTolerance*allowance*(1+q.steep*q.ds)+offEdge)*q.long + blind*q.ds*math.Acos(math.Min(1, q.ta.Dot(q.tb)))
			}
			if q.edge { // it is straight, and its direction is the edge's
				if math.Abs(q.ds-d.Norm()) > (offEdge+closeTo)*q.long {
					t.Fatalf("piece %d along an edge: %g of arc for %g", i, q.ds, d.Norm())
				}
				arc, chords, slack = arc+q.ds, chords+d.Norm(), slack+(offEdge+closeTo)*q.long
				continue
			}
			// The curve's direction differs from its chord's by at most that of the ends, which takes the half of its square.
			off := math.Max(math.Abs(d.Cross(q.ta)), math.Abs(d.Cross(q.tb))) / math.Max(d.Norm(), closeTo*q.long)
			short := q.ds*off*off/2 + delta
			if q.ds-d.Norm() > short || d.Norm()-q.ds > delta {
				t.Fatalf("piece %d: %g of arc for a chord of %g, which may be shorter by %g", i, q.ds, d.Norm(), short)
			}
			worstChord = math.Max(worstChord, (q.ds-d.Norm())/short)
			arc, chords, slack = arc+q.ds, chords+d.Norm(), slack+short
			middle := q.a.Lerp(q.b, 0.5).AddScaled(q.ds/8, q.ta.Sub(q.tb))
			tm := f.At(place(f, q.tri, middle)).Tau.Unit().Scale(sign)
			want := q.ta.Add(q.tb).AddScaled(4, tm).Scale(q.ds / 6)
			if miss := d.Sub(want).Norm(); miss > delta {
				t.Fatalf("piece %d: it leads %v, tau %v: %g of its length apart, %g allowed", i, d, want, miss/q.ds, delta/q.ds)
			} else {
				worst = math.Max(worst, miss/delta)
			}
		}
		if math.Abs(arc-chords) > slack {
			t.Fatalf("arc length %g for a polyline of %g, which may be shorter by %g", arc, chords, slack)
		}
	})
	t.Logf("the worst piece took %.2g of what is allowed to its direction, %.2g of what to its length", worst, worstChord)
}

// place returns the place of a triangle that has the given coordinates in its flat frame, also outside.
func place(f *field.Field, tri int32, p r3.Vec2) field.Loc {
	c := f.Flat(tri)
	twice := c[1].Sub(c[0]).Cross(c[2].Sub(c[0]))
	l := field.Loc{Tri: tri}
	for k := range 3 {
		a := c[(k+1)%3]
		l.Bary[k] = c[(k+2)%3].Sub(a).Cross(p.Sub(a)) / twice
	}
	return l
}

// A curve traced along tau and then back over the same length comes to where it began, and after the same length.
//
// The error of a step at arc length s grows on its way to the end and shrinks as much on the way back to s; from there to
// the beginning it grows by what neighbouring curves approach each other on the way there, the exponential of minus the
// integral of the rate at which they part. Over an edge where the flat frames of its sides differ, as on all curved
// surfaces, neighbours part by the ratio of the sines of the angles between the edge and the curve. So the distance from
// the beginning is at most the sum, over all steps of both ways, of the tolerance times that growth. An error b across the curve
// becomes one along it as the curve bends, by the integral of b times the curvature.
//
// A curve that runs along an edge, because both sides flow into it, has forgotten where it came from, and one that leads over
// a vertex has no angle with an edge: neither is compared.
func TestReverseReturns(t *testing.T) {
	const (
		length = 1.5
		// wrong is the error of steps in tolerances: as long as neighbours close in, the estimate is of the order of the error.
		// The worst of some thousand curves took 1.9.
		wrong = 5
		// mostGrown is the error, in edges, up to which it grows as those of nearest neighbours do.
		mostGrown = 0.01
		// fewest is the share of curves that must be compared, lest the test look at nothing.
		fewest = 0.3
	)
	tried, strict, worst := 0, 0, 0.0
	rapid.Check(t, func(t *rapid.T) {
		f, from := smooth(t)
		tr := trace.New(f, nil, nil)
		tried++
		ahead := tr.Trace(context.Background(), from, trace.Options{MaxLength: length, Tolerance: pieceTolerance})
		if ahead.End != trace.TooLong && ahead.End != trace.Rim || len(ahead.Locs) < 2 {
			return
		}
		total := ahead.Length()
		back := tr.Trace(context.Background(), ahead.Locs[len(ahead.Locs)-1],
			trace.Options{Backward: true, MaxLength: total, Tolerance: pieceTolerance})
		there, wholeThere := pieces(f, ahead, 1)
		again, wholeAgain := pieces(f, back, -1)
		if !wholeThere || !wholeAgain || slides(there) || slides(again) {
			return
		}
		allowed, most := grown(there)
		allowed, most = wrong*allowed, wrong*most
		if most > mostGrown*f.MeanEdge() {
			return
		}
		strict++
		if back.End != trace.TooLong {
			t.Fatalf("backward it ends after %g of %g because %v", back.Length(), total, back.End)
		}
		// The place at that length, on the last step, by its cubic.
		q := again[len(again)-1]
		u := 1 - (back.Length()-total)/q.ds
		p := q.a.Scale((1+2*u)*(1-u)*(1-u)).AddScaled(u*u*(3-2*u), q.b).
			AddScaled(u*(1-u)*(1-u)*q.ds, q.ta).AddScaled(-u*u*(1-u)*q.ds, q.tb)
		miss := f.Position(place(f, q.tri, p)).Sub(f.Position(from)).Norm()
		if miss > allowed {
			t.Fatalf("after %g there and back it is %.3g edges from its beginning, %.3g allowed", total, miss/f.MeanEdge(),
				allowed/f.MeanEdge())
		}
		worst = math.Max(worst, miss/allowed)
	})
	t.Logf("%d curves, of which %d compared; the worst took %.2g of what is allowed", tried, strict, worst)
	if float64(strict) < fewest*float64(tried) {
		t.Errorf("only %d of %d curves were followed back", strict, tried)
	}
}

// slides tells whether a curve runs along an edge anywhere.
func slides(all []piece) bool {
	for _, q := range all {
		if q.edge {
			return true
		}
	}
	return false
}

// grown returns how far from its beginning a curve may come that is traced to its end and back: the sum of the errors of
// its steps, each grown on the way from the step to the beginning, across the curve and along it. And the most that it is on the
// way, also along an edge that is crossed at a small angle.
func grown(all []piece) (home, most float64) {
	across, along := 0.0, 0.0
	for i := len(all) - 1; i >= 0; i-- {
		q := all[i]
		step := 2 * (pieceTolerance + offEdge) * q.long // there and back
		growth := math.Exp(-q.rate * q.ds)
		along += step + q.bend*q.ds*(across+step)*math.Max(1, growth)
		across = across*growth + step*math.Max(1, growth)
		if q.enters.edge {
			e := across / math.Abs(q.enters.sin)
			across = e * math.Abs(q.enters.sinBefore)
			along += e * math.Abs(q.enters.cosBefore-q.enters.cos)
			most = math.Max(most, e)
		}
		most = math.Max(most, math.Hypot(across, along))
	}
	return math.Hypot(across, along), most
}

// A curve that comes to a zero of tau that is no stop ends at it, without winding or trembling there for thousands of
// steps: a step that passes the zero within is not accepted because it is as short as the tolerance.
func TestEndsAtZeros(t *testing.T) {
	const (
		// near is the distance, in edges, at which steps of the tolerance turn back: 1e-6 by the ratio of the rates, here up to 40.
		near = 1e-4
		// mostPlaces is some 20 steps to halve the distance, 20 times, for the slowest focus.
		mostPlaces = 2500
		// apart is what arc length and polyline may differ by: the chords' error, 1e-4 of it.
		apart = 2e-4
	)
	for _, triangles := range []int{100, 600, 4000} {
		for _, m := range [][4]float64{{-1, 0, 0, -1}, {-1, 0, 0, -8}, {-1, 0, 0, -40}, {-1, 1, 0, -1}, {-1, 1, -0.2, -1.5},
			{-1, -1, 1, -1}, {-1, -5, 5, -1}, {-1, 3, -0.5, -1}} {
			for shift := range 5 {
				zx, zy := 0.013+0.01*float64(shift), -0.007+0.003*float64(shift)
				f := flat(t, exact.Disk(1, triangles), func(x, y float64) (float64, float64) {
					x, y = x-zx, y-zy
					return m[0]*x + m[1]*y, m[2]*x + m[3]*y
				})
				p := trace.New(f, nil, nil).Trace(context.Background(), at(f, 0.5, 0.3), trace.Options{})
				length := 0.0
				for i := 1; i < len(p.Locs); i++ {
					length += f.Position(p.Locs[i]).Sub(f.Position(p.Locs[i-1])).Norm()
				}
				q := f.Position(p.Locs[len(p.Locs)-1]).Sub(r3.Vec{X: zx, Y: zy}).Norm() / f.MeanEdge()
				if p.End != trace.Stagnant || q > near || len(p.Locs) > mostPlaces || p.Length()-length > apart*length {
					t.Errorf("%d triangles, %v, shift %d: ends %.2g edges away because %v, after %d places and %g of arc for %g",
						triangles, m, shift, q, p.End, len(p.Locs), p.Length(), length)
				}
			}
		}
	}
}

// A curve that touches an edge and bends away from it goes on beside the edge, or crosses it and comes back: also where it
// comes so near that the error of its steps decides which. It must not take the touch for an edge that both sides flow into,
// and run along it.
func TestTouchesEdges(t *testing.T) {
	const (
		radius = 2
		// most is the error allowed after some 50 steps of the default tolerance on edges of 0.47; 1.4e-7 was measured.
		most  = 1e-6
		tries = 2000
	)
	worst := 0.0
	// Circles, which the mesh reproduces, whose tops are within 1e-5 of the edges on y = 0, between two vertices and at one: there a
	// step may lead out over one edge, back, and out over the next.
	for _, topX := range []float64{0.05, 0} {
		for i := range tries {
			topY := 2e-5 * (float64(i)/tries - 0.5)
			f := flat(t, exact.Plate(1, 1, 72), func(x, y float64) (float64, float64) { return y - topY + radius, topX - x })
			s, c := math.Sincos(0.4)
			from := at(f, topX-radius*s, topY+radius*(c-1))
			p := trace.New(f, nil, nil).Trace(context.Background(), from, trace.Options{MaxLength: 1.2})
			for _, l := range p.Locs {
				q := f.Position(l)
				worst = math.Max(worst, math.Abs(math.Hypot(q.X-topX, q.Y-topY+radius)-radius))
			}
		}
	}
	if worst > most {
		t.Errorf("off the circle by %g, %g allowed", worst, float64(most))
	}
}
