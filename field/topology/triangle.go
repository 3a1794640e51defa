package topology

import (
	"math"
)

// linear returns the zero of the linear field in triangle t, moved into the triangle, and the Jacobian in the flat
// frame.
func (p *placer) linear(t int32) (bary [3]float64, j [2][2]float64) {
	f := p.c.f
	x, u := f.Flat(t), f.CornerTau(t)
	area := x[1].Sub(x[0]).Cross(x[2].Sub(x[0]))
	if area > 0 {
		// Gradients of the barycentric weights.
		for k := range 3 {
			g := x[(k+2)%3].Sub(x[(k+1)%3]).Left().Scale(1 / area)
			j[0][0] += float64(u[k].X * g.X)
			j[0][1] += float64(u[k].X * g.Y)
			j[1][0] += float64(u[k].Y * g.X)
			j[1][1] += float64(u[k].Y * g.Y)
		}
	}
	// The weights at the zero are as the areas that pairs of vectors span.
	scale := math.Max(u[0].Norm(), math.Max(u[1].Norm(), u[2].Norm()))
	if scale == 0 {
		return [3]float64{1. / 3, 1. / 3, 1. / 3}, j
	}
	sum := 0.0
	for k := range 3 {
		a, b := u[(k+1)%3].Scale(1/scale), u[(k+2)%3].Scale(1/scale)
		bary[k] = a.Cross(b)
		sum += bary[k]
	}
	for k := range 3 {
		bary[k] /= sum
		if !(bary[k] >= 0) {
			bary[k] = 0
		}
	}
	total := bary[0] + bary[1] + bary[2]
	if !(total > 0) || math.IsInf(total, 1) {
		return [3]float64{1. / 3, 1. / 3, 1. / 3}, j
	}
	for k := range 3 {
		bary[k] /= total
	}
	return bary, j
}

// flipMargin is the share of the norm by which the triangle's own Jacobian must be a focus or a node to speak against
// the fit: one triangle's slopes are off by about the field's curvature times the edge, which is a few per cent.
const flipMargin = 0.1

// flips tells whether the point's triangle alone gives clearly another type than the fit.
func (p *placer) flips(s *seed, kind Type) bool {
	_, j := p.linear(s.tris[0])
	n := norm(j)
	if n == 0 || s.index < 0 {
		return false // a saddle by its index, whatever the slopes
	}
	for i := range 2 {
		for k := range 2 {
			j[i][k] /= n
		}
	}
	d := discriminant(j)
	const margin = flipMargin * flipMargin
	return kind == Node && d < -margin || kind == Focus && d > margin
}

// byTriangle places the point by the linear field of its triangle.
func (p *placer) byTriangle(s *seed, pt *Point) {
	f := p.c.f
	t := pt.Loc.Tri
	_, j := p.linear(t)
	ex, ey, n := f.Frame(t)
	axes := tangentFrame(n)
	c, d := ex.Dot(axes[0]), ey.Dot(axes[0]) // axes[0] in the flat frame
	j = turnMatrix(j, c, d)
	scale := norm(j)
	if scale == 0 {
		pt.setJacobian(j, 1, 1, n, axes)
		pt.Type, pt.Confidence = Degenerate, 0
		return
	}
	for i := range 2 {
		for k := range 2 {
			j[i][k] /= scale
		}
	}
	lim := borders{trace: traceShare, disc: swirlShare * swirlShare}
	kind, agrees := typeOf(j, s.index, lim)
	pt.setJacobian(j, scale, 1, n, axes)
	pt.Type, pt.Sense = kind, senseOf(j, lim)
	if !agrees {
		pt.Type, pt.Sense, pt.Confidence = Degenerate, Neutral, 0
		addNote(pt, noteLinear)
		return
	}
	if kind == Degenerate {
		pt.Sense = Neutral
	}
	pt.Confidence = p.shareAround(t, s.index, kind, lim)
}

// turnMatrix returns j in the frame whose first axis is (c, d) in the old one.
func turnMatrix(j [2][2]float64, c, d float64) [2][2]float64 {
	q := [2][2]float64{{c, d}, {-d, c}}
	var out [2][2]float64
	for i := range 2 {
		for k := range 2 {
			for a := range 2 {
				for b := range 2 {
					out[i][k] += float64(float64(q[i][a]*j[a][b]) * q[k][b])
				}
			}
		}
	}
	return out
}

// shareAround returns the share of triangle t and its neighbours whose own Jacobians give the same type: all that can
// be said of its certainty without a fit.
func (p *placer) shareAround(t int32, index int, want Type, lim borders) float64 {
	kept, all := 0, 0
	p.gather(1, t)
	for _, g := range p.faces {
		_, j := p.linear(g)
		n := norm(j)
		if n == 0 {
			continue
		}
		all++
		if got, ok := typeOf(j, index, borders{lim.trace * n, lim.disc * n * n}); ok && got == want {
			kept++
		}
	}
	return float64(kept) / math.Max(1, float64(all))
}
