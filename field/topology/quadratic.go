package topology

import (
	"math"

	"shearprint/field/r3"
)

// quadratic is a fitted field around an origin in a tangent plane, in units of the patch's size and of its largest
// |tau|.
type quadratic struct {
	u, v, z [terms]float64 // tau's two components and the surface's height
	r       [terms][terms]float64
	// noise is the covariance of the residuals of u and v.
	noise [2][2]float64
}

// fit takes samples (x, y, u, v, height) and fits the quadratic; ok is false where they do not determine it. weight is
// the number of independent samples per row: 1, or 1/2 where half of them are mirror images.
func fit(samples [][5]float64, weight float64) (q quadratic, ok bool) {
	a := make(rows, len(samples))
	for i, s := range samples {
		x, y := s[0], s[1]
		a[i] = [terms + 3]float64{1, x, y, float64(x * x), float64(x * y), float64(y * y), s[2], s[3], s[4]}
	}
	c, r, ok := solveQuadratic(a)
	if !ok {
		return q, false
	}
	q = quadratic{u: c[0], v: c[1], z: c[2], r: r}
	for _, row := range a[terms:] {
		e, f := row[terms], row[terms+1]
		q.noise[0][0] += float64(e * e)
		q.noise[0][1] += float64(e * f)
		q.noise[1][1] += float64(f * f)
	}
	free := math.Max(1, float64(float64(len(samples))*weight)-terms)
	for i := range 2 {
		for j := i; j < 2; j++ {
			q.noise[i][j] /= free
		}
	}
	q.noise[1][0] = q.noise[0][1]
	return q, true
}

// at returns a polynomial's value at p.
func at(c *[terms]float64, p r3.Vec2) float64 {
	return c[0] + float64(c[1]*p.X) + float64(c[2]*p.Y) +
		float64(c[3]*float64(p.X*p.X)) + float64(c[4]*float64(p.X*p.Y)) + float64(c[5]*float64(p.Y*p.Y))
}

// slope returns a polynomial's derivatives at p.
func slope(c *[terms]float64, p r3.Vec2) [2]float64 {
	return [2]float64{
		c[1] + float64(2*c[3]*p.X) + float64(c[4]*p.Y),
		c[2] + float64(c[4]*p.X) + float64(2*c[5]*p.Y),
	}
}

// jacobian returns the derivatives of (u, v) at p.
func (q *quadratic) jacobian(p r3.Vec2) [2][2]float64 {
	return [2][2]float64{slope(&q.u, p), slope(&q.v, p)}
}

// newtonSteps is ample: convergence doubles the digits at every step, and more than a handful means that there is none.
const newtonSteps = 30

// zero looks for the zero of the fit from p by Newton's method, within the given distance of p.
func (q *quadratic) zero(p r3.Vec2, reach float64) (r3.Vec2, bool) {
	start := p
	for range newtonSteps {
		j := q.jacobian(p)
		d := det(j)
		if d == 0 {
			return p, false
		}
		u, v := at(&q.u, p), at(&q.v, p)
		step := r3.Vec2{X: (float64(j[1][1]*u) - float64(j[0][1]*v)) / d, Y: (float64(j[0][0]*v) - float64(j[1][0]*u)) / d}
		p = p.Sub(step)
		if !(p.Sub(start).Norm() <= reach) {
			return p, false
		}
		const settled = 1e-12 // of the patch's size: rounding
		if step.Norm() <= settled {
			return p, true
		}
	}
	return p, false
}

// errors returns the covariance of each row of the Jacobian at p for residuals of unit variance: the covariance of
// elements (i, a) and (j, b) is noise[i][j] errors[a][b].
func (q *quadratic) errors(p r3.Vec2) [2][2]float64 {
	g := [2][terms]float64{{0, 1, 0, 2 * p.X, p.Y, 0}, {0, 0, 1, 0, p.X, 2 * p.Y}}
	// z = r^-T g, row by row from the top.
	var z [2][terms]float64
	for a := range g {
		for i := range terms {
			s := g[a][i]
			for k := range i {
				s -= float64(q.r[k][i] * z[a][k])
			}
			z[a][i] = s / q.r[i][i]
		}
	}
	var m [2][2]float64
	for a := range 2 {
		for b := range 2 {
			for i := range terms {
				m[a][b] += float64(z[a][i] * z[b][i])
			}
		}
	}
	return m
}

func det(j [2][2]float64) float64 { return float64(j[0][0]*j[1][1]) - float64(j[0][1]*j[1][0]) }
