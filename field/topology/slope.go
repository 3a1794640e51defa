package topology

import (
	"shearprint/field"
	"shearprint/field/r3"
)

// Slope is how tau varies around a place that need not be critical.
type Slope struct {
	// Normal points into the fluid; Frame holds two unit tangent vectors with Frame[0] x Frame[1] = Normal.
	Normal r3.Vec
	Frame  [2]r3.Vec
	// Jacobian, Eigenvalues, Trace and Determinant are those of a Point [unit of tau per unit of length].
	Jacobian    [2][2]float64
	Eigenvalues [2][2]float64
	Trace       float64
	Determinant float64
	Fitted      bool   // by the fit that places critical points; false: the slopes of one triangle
	Note        string // why, if not Fitted
}

// Why there is no fit.
const (
	slopeCrease = "on a crease: the slopes are those of one triangle"
	slopeFew    = "too few vertices around for a fit: the slopes are those of one triangle"
)

// SlopeAt returns the Jacobian of tau at loc by the quadratic fit over the vertices around that places critical points;
// where a crease or a rim leaves too few of them, by the linear field of the triangle.
func SlopeAt(f *field.Field, loc field.Loc) Slope {
	p := (&count{turner: turner{f: f}}).placer(nil)
	var pt Point
	fitted := false
	for rings := int32(fitRings); rings <= mostRings && !fitted; rings++ {
		p.gather(rings, loc.Tri)
		clean := p.clean()
		if len(clean) < fewSamples {
			continue
		}
		b := p.baseAt(&seed{}, loc)
		samples, weight := p.samples(&seed{}, &b, clean)
		if b.tau == 0 { // no slope: the triangle says so too
			break
		}
		if q, ok := fit(samples, weight); ok {
			pt.setJacobian(q.jacobian(r3.Vec2{}), b.tau, b.length, b.n, b.axes)
			fitted = true
		}
	}
	note := ""
	if !fitted {
		_, j := p.linear(loc.Tri)
		ex, ey, n := f.Frame(loc.Tri)
		axes := tangentFrame(n)
		pt.setJacobian(turnMatrix(j, ex.Dot(axes[0]), ey.Dot(axes[0])), 1, 1, n, axes)
		note = slopeFew
		if p.crease {
			note = slopeCrease
		}
	}
	return Slope{pt.Normal, pt.Frame, pt.Jacobian, pt.Eigenvalues, pt.Trace, pt.Determinant, fitted, note}
}
