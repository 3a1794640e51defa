package topology

import "math"

// terms is the number of coefficients of a quadratic in two variables: 1, x, y, x^2, x y, y^2.
const terms = 6

// rows are the equations of a least-squares problem: the terms at a sample, then three right-hand sides.
type rows [][terms + 3]float64

// rankShare is the share of a column's length that must be independent of the columns before it. Samples in a stretched
// patch of aspect 50 leave 1/50^2; on a line, rounding.
const rankShare = 1e-7

// solveQuadratic finds the coefficients that fit the rows best, for each right-hand side. It returns the upper
// triangle r of the factorisation, for error estimates, and whether the samples determine all coefficients. The rows
// are overwritten: those after the sixth hold the residuals, turned among themselves. (Householder reflections; own
// code, since products must not be fused.)
func solveQuadratic(a rows) (x [3][terms]float64, r [terms][terms]float64, ok bool) {
	n := len(a)
	if n < terms {
		return x, r, false
	}
	for k := range terms {
		full, below := 0.0, 0.0
		for i := range n {
			s := float64(a[i][k] * a[i][k])
			full += s
			if i >= k {
				below += s
			}
		}
		norm := math.Sqrt(below)
		if !(norm > float64(rankShare*math.Sqrt(full))) {
			return x, r, false
		}
		if a[k][k] > 0 {
			norm = -norm
		}
		// The reflection along v = a_k - norm e_k takes column k to norm e_k.
		pivot := a[k][k] - norm
		scale := -1 / float64(norm*pivot) // 2/(v.v)
		for j := k + 1; j < terms+3; j++ {
			dot := float64(pivot * a[k][j])
			for i := k + 1; i < n; i++ {
				dot += float64(a[i][k] * a[i][j])
			}
			dot *= scale
			a[k][j] -= float64(dot * pivot)
			for i := k + 1; i < n; i++ {
				a[i][j] -= float64(dot * a[i][k])
			}
		}
		a[k][k] = norm
		for i := k + 1; i < n; i++ {
			a[i][k] = 0
		}
	}
	for i := range terms {
		copy(r[i][i:], a[i][i:terms])
	}
	for c := range x {
		for i := terms - 1; i >= 0; i-- {
			s := a[i][terms+c]
			for j := i + 1; j < terms; j++ {
				s -= float64(r[i][j] * x[c][j])
			}
			x[c][i] = s / r[i][i]
		}
	}
	return x, r, true
}
