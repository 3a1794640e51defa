package topology

import (
	"context"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// rates holds, per vertex, how tau varies along and across its own direction [unit of tau per unit of length]. All are
// scalars: they do not depend on any frame.
//
// In a chart, with vectors as complex numbers, the gradient of tau is dtau = a dz + b conj(dz): a holds divergence and
// curl, b the strain. With the unit vector e along tau and beta = b conj(e)^2, the rate along the streamline is
// Re(a + beta), the rate across it, at which neighbours come closer or move apart, Re(a - beta), and the turning of the
// streamline times |tau| is Im(a + beta).
type rates struct {
	f             *field.Field
	along, across []float64
	turn          []float64 // zero where tau is parallel to an eigenvector of its own gradient
}

const (
	// vertexBlock is the number of vertices that one goroutine takes at a time.
	vertexBlock = 8192
	// smoothings of the gradient over neighbouring vertices: second derivatives of computed data are rough on the scale of
	// an edge, and lines are features of many edges.
	smoothings = 3
	// flatFan is the share of the largest possible determinant below which the edges around a vertex are nearly
	// parallel and tell nothing of the gradient across them.
	flatFan = 1e-6
)

// findRates fits the gradient at every vertex to the values at its neighbours, brought into its chart, smooths it, and
// takes it apart.
func findRates(ctx context.Context, f *field.Field) (*rates, error) {
	n := len(f.Points)
	g := gradients{f: f, a: make([]r3.Vec2, n), b: make([]r3.Vec2, n)}
	if err := inBlocks(ctx, n, vertexBlock, func(from, to int) {
		for v := int32(from); v < int32(to); v++ {
			g.fit(v)
		}
	}); err != nil {
		return nil, err
	}
	a, b := make([]r3.Vec2, n), make([]r3.Vec2, n)
	for range smoothings {
		if err := inBlocks(ctx, n, vertexBlock, func(from, to int) {
			for v := int32(from); v < int32(to); v++ {
				a[v], b[v] = g.smooth(v)
			}
		}); err != nil {
			return nil, err
		}
		a, g.a = g.a, a
		b, g.b = g.b, b
	}
	r := &rates{f: f, along: make([]float64, n), across: make([]float64, n), turn: make([]float64, n)}
	for v := range int32(n) {
		beta := times(g.b[v], r3.Polar(1, -2*f.Angle(v)))
		r.along[v] = g.a[v].X + beta.X
		r.across[v] = g.a[v].X - beta.X
		r.turn[v] = g.a[v].Y + beta.Y
	}
	return r, nil
}

// gradients are the complex parts of the gradient of tau in the chart of each vertex.
type gradients struct {
	f    *field.Field
	a, b []r3.Vec2
}

// times is the product of complex numbers.
func times(p, q r3.Vec2) r3.Vec2 {
	return r3.Vec2{X: float64(p.X*q.X) - float64(p.Y*q.Y), Y: float64(p.X*q.Y) + float64(p.Y*q.X)}
}

func conjugate(p r3.Vec2) r3.Vec2 { return r3.Vec2{X: p.X, Y: -p.Y} }

// spokes calls use for every neighbour w of v: the angle of the edge in v's chart, its length, and what to add to an angle
// in w's chart to have it in v's.
func (g *gradients) spokes(v int32, use func(w int32, angle, length, turn float64)) {
	f := g.f
	for h := range f.Fan(v) {
		use(f.Tip(h), f.ChartAngle(h), f.EdgeLength(h), -f.Transport(h))
		if p := field.Prev(h); f.Twin[p] < 0 { // the last edge of a rim vertex has only this half-edge
			use(f.Tail(p), f.Total(v), f.EdgeLength(p), f.Transport(p))
		}
	}
}

// fit finds a and b at v by least squares, every neighbour with the weight of its inverse squared distance.
func (g *gradients) fit(v int32) {
	f := g.f
	var m, y1, y2 r3.Vec2
	count := 0.0
	own := f.Tau[v]
	g.spokes(v, func(w int32, angle, length, turn float64) {
		if length == 0 {
			return
		}
		z := r3.Polar(1, angle)
		y := f.Tau[w].Turn(turn).Sub(own).Scale(1 / length)
		m = m.Add(times(z, z))
		y1 = y1.Add(times(y, conjugate(z)))
		y2 = y2.Add(times(y, z))
		count++
	})
	d := float64(count*count) - m.Dot(m)
	if !(d > flatFan*count*count) {
		return
	}
	g.a[v] = y1.Scale(count/d).AddScaled(-1/d, times(conjugate(m), y2))
	g.b[v] = y2.Scale(count/d).AddScaled(-1/d, times(m, y1))
	if x := g.a[v].Norm() + g.b[v].Norm(); !(x < math.Inf(1)) {
		g.a[v], g.b[v] = r3.Vec2{}, r3.Vec2{}
	}
}

// smooth returns the mean of the gradient at v with that of its neighbours, half and half.
func (g *gradients) smooth(v int32) (a, b r3.Vec2) {
	count := 0.0
	g.spokes(v, func(w int32, _, _, turn float64) {
		a = a.Add(g.a[w])
		b = b.Add(g.b[w].Turn(2 * turn)) // the strain turns twice as fast as vectors do
		count++
	})
	if count == 0 {
		return g.a[v], g.b[v]
	}
	return g.a[v].Lerp(a.Scale(1/count), 0.5), g.b[v].Lerp(b.Scale(1/count), 0.5)
}

// at interpolates one of the scalars.
func (r *rates) at(x []float64, l field.Loc) float64 {
	v := r.f.Tris[l.Tri]
	return float64(l.Bary[0]*x[v[0]]) + float64(l.Bary[1]*x[v[1]]) + float64(l.Bary[2]*x[v[2]])
}

// exponents returns, per place of a curve, by which power of e its neighbours have moved apart since its beginning:
// the integral of (rate across)/|tau| over arc length. It falls where they come closer.
func (r *rates) exponents(locs []field.Loc) []float64 {
	out := make([]float64, len(locs))
	for i := 1; i < len(locs); i++ {
		ds := r.f.Position(locs[i]).Sub(r.f.Position(locs[i-1])).Norm()
		out[i] = out[i-1] + float64(ds*(r.relative(locs[i-1])+r.relative(locs[i])))/2
	}
	return out
}

// relative returns the rate across divided by |tau| [1 per unit of length]; 0 where tau vanishes.
func (r *rates) relative(l field.Loc) float64 {
	size := r.f.At(l).Tau.Norm()
	if !(size > field.ZeroFraction*r.f.MaxTau) {
		return 0
	}
	return finite(r.at(r.across, l) / size)
}
