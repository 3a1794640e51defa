package topology

import (
	"math"

	"shearprint/field/r3"
)

// Borders between the types.
const (
	// swirlShare is the imaginary part, as a share of the Jacobian's norm, from which a point is a focus. Below it, one
	// turn of the spiral changes its radius by a factor of e^(2 pi 30): no reading of a surface could tell it from a node,
	// and star nodes must not become foci by the errors of a fit.
	swirlShare = 1. / 30
	// traceShare is the trace, as a share of the norm, below which a point has no sense: the spirals of a focus then
	// change by 0.3 per cent in a turn, less than any computation of a flow is good for.
	traceShare = 1e-3
	// centreShare is the trace, as a share of the norm, above which a focus is no centre even where the error of the trace
	// is larger still: it then is a focus whose sense is unknown. Below, spirals change by less than a tenth in a turn.
	centreShare = 0.02
	// confidenceSamples of the Jacobian's error distribution give the confidence to half a per cent.
	confidenceSamples = 512
)

// borders are the magnitudes below which trace and discriminant of a Jacobian count as zero.
type borders struct{ trace, disc float64 }

// bordersOf returns the borders for Jacobian j, whose element (i, a) and (k, b) have the covariance s[i][k] m[a][b].
func bordersOf(j, s, m [2][2]float64) borders {
	n := norm(j)
	// disc = ((j00 - j11)/2)^2 + j01 j10, by its derivatives.
	half := (j[0][0] - j[1][1]) / 2
	g := [2][2]float64{{half, j[1][0]}, {j[0][1], -half}}
	return borders{
		trace: math.Max(float64(traceShare*n), spread([2][2]float64{{1, 0}, {0, 1}}, s, m)),
		disc:  math.Max(float64(float64(swirlShare*n)*float64(swirlShare*n)), spread(g, s, m)),
	}
}

// spread returns the standard error of sum g[i][a] j[i][a].
func spread(g, s, m [2][2]float64) float64 {
	sum := 0.0
	for i := range 2 {
		for k := range 2 {
			for a := range 2 {
				for b := range 2 {
					sum += float64(float64(g[i][a]*g[k][b]) * float64(s[i][k]*m[a][b]))
				}
			}
		}
	}
	return math.Sqrt(math.Max(0, sum))
}

// norm returns the Frobenius norm.
func norm(j [2][2]float64) float64 {
	return r3.Hypot(r3.Hypot(j[0][0], j[0][1]), r3.Hypot(j[1][0], j[1][1]))
}

// discriminant returns (trace/2)^2 - det without cancellation of the squares.
func discriminant(j [2][2]float64) float64 {
	half := (j[0][0] - j[1][1]) / 2
	return float64(half*half) + float64(j[0][1]*j[1][0])
}

// typeOf returns the type of a zero with index +1 or -1 and Jacobian j, and whether the sign of the determinant agrees
// with the index. (Perry and Chong, Annual Review of Fluid Mechanics 19, 1987, from memory.)
func typeOf(j [2][2]float64, index int, b borders) (Type, bool) {
	d := det(j)
	switch {
	case index < 0:
		return Saddle, d < 0
	case !(d > 0):
		return Node, false
	case discriminant(j) >= -b.disc:
		return Node, true
	case math.Abs(j[0][0]+j[1][1]) <= math.Min(b.trace, float64(centreShare*norm(j))):
		return Degenerate, true // a centre
	}
	return Focus, true
}

// senseOf returns what the trace says.
func senseOf(j [2][2]float64, b borders) Sense {
	switch tr := j[0][0] + j[1][1]; {
	case tr > b.trace:
		return Attachment
	case tr < -b.trace:
		return Separation
	}
	return Neutral
}

// eigenvalues returns both eigenvalues as real and imaginary part, the larger real part first, then the positive
// imaginary part.
func eigenvalues(j [2][2]float64) [2][2]float64 {
	mean := j[0][0]/2 + j[1][1]/2
	n := norm(j)
	if n == 0 {
		return [2][2]float64{}
	}
	for i := range 2 { // scaled, so that squares neither overflow nor vanish
		for k := range 2 {
			j[i][k] /= n
		}
	}
	d := discriminant(j)
	root := float64(n * math.Sqrt(math.Abs(d)))
	if d < 0 {
		return [2][2]float64{{mean, root}, {mean, -root}}
	}
	return [2][2]float64{{mean + root, 0}, {mean - root, 0}}
}

// normals returns confidenceSamples points of the normal distribution in four dimensions, evenly spread: the additive
// sequence of the generalised golden ratio (Roberts 2018, from memory), turned into normals by Box and Muller.
func normals() [][4]float64 {
	const golden = 1.1673039782614187 // the root of x^5 = x + 1
	var u, step [4]float64
	for k, x := 0, 1.0; k < 4; k++ {
		x /= golden
		step[k], u[k] = x, 0.5
	}
	z := make([][4]float64, confidenceSamples)
	for i := range z {
		for k := range u {
			u[k] += step[k]
			u[k] -= math.Floor(u[k])
		}
		for k := 0; k < 4; k += 2 {
			r := math.Sqrt(-2 * r3.Log(1-u[k]))
			s, c := r3.SinCos(2 * math.Pi * u[k+1])
			z[i][k], z[i][k+1] = float64(r*c), float64(r*s)
		}
	}
	return z
}

// confidence returns the share of the error distribution around j that keeps its type: j + ls z lm^T with standard
// normal z, where ls ls^T = s and lm lm^T = m.
func confidence(j, s, m [2][2]float64, index int, want Type, b borders, z [][4]float64) float64 {
	ls, lm := cholesky(s), cholesky(m)
	kept := 0
	for _, w := range z {
		var e [2][2]float64
		for i := range 2 {
			for a := range 2 {
				sum := j[i][a]
				for k := range 2 {
					for c := range 2 {
						sum += float64(float64(ls[i][k]*lm[a][c]) * w[2*k+c])
					}
				}
				e[i][a] = sum
			}
		}
		if got, ok := typeOf(e, index, b); ok && got == want {
			kept++
		}
	}
	return float64(kept) / float64(len(z))
}

// cholesky returns the lower triangular l with l l^T = a, for a symmetric matrix that is positive or semidefinite.
func cholesky(a [2][2]float64) [2][2]float64 {
	l00 := math.Sqrt(math.Max(0, a[0][0]))
	if l00 == 0 {
		return [2][2]float64{{0, 0}, {0, math.Sqrt(math.Max(0, a[1][1]))}}
	}
	l10 := a[1][0] / l00
	return [2][2]float64{{l00, 0}, {l10, math.Sqrt(math.Max(0, a[1][1]-float64(l10*l10)))}}
}
