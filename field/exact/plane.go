package exact

import (
	"shearprint/field"
	"shearprint/field/r3"
)

// plane makes a case from a plane field.
func plane(f func(x, y float64) (u, v float64)) func(r3.Vec) r3.Vec {
	return func(p r3.Vec) r3.Vec {
		u, v := f(p.X, p.Y)
		return r3.Vec{X: u, Y: v}
	}
}

// planeCases are patches with rims, whose balance counts tangencies (Poincare 1885; Hunt, Abell, Peterka and Woo 1978
// for the use in flow), and plane systems with known structure.
func planeCases() []Case {
	const a2 = 0.18 // squared half distance of the pair
	pair := []Point{
		{r3.Vec{X: 0.4242640687119285}, "node", "attachment", 1, [2]complex128{1, 0.848528137423857}},
		{r3.Vec{X: -0.4242640687119285}, "saddle", "attachment", -1, [2]complex128{1, -0.848528137423857}},
	}
	annulus := func(n int) field.Raw { return Annulus(0.7, 2, n) }
	return []Case{
		{Name: "disk-uniform", Source: "Poincare's tangency rule: two exterior tangencies", Euler: 1, BoundaryTerm: -1,
			Points: []Point{}, Surface: unitDisk, Tau: plane(func(x, y float64) (float64, float64) { return 1, 0 })},
		{Name: "disk-saddle", Source: "Poincare's tangency rule: four exterior tangencies", Euler: 1, IndexSum: -1,
			BoundaryTerm: -2, Points: []Point{{offset, "saddle", "neutral", -1, [2]complex128{1, -1}}}, Surface: unitDisk,
			Tau: plane(func(x, y float64) (float64, float64) { return x - offset.X, -(y - offset.Y) })},
		{Name: "disk-dipole", Source: "Poincare's tangency rule: two interior tangencies", Euler: 1, IndexSum: 2,
			BoundaryTerm: 1, Surface: unitDisk,
			Tau: plane(func(x, y float64) (float64, float64) {
				x, y = x-offset.X, y-offset.Y
				return x*x - y*y, 2 * x * y
			})},
		{Name: "disk-monkey-saddle", Source: "index of conj(z)^2: -2", Euler: 1, IndexSum: -2, BoundaryTerm: -3,
			Surface: unitDisk,
			Tau: plane(func(x, y float64) (float64, float64) {
				x, y = x-offset.X, y-offset.Y
				return x*x - y*y, -2 * x * y
			})},
		{Name: "disk-shifted-turn", Source: "Poincare's tangency rule: one of each", Euler: 1, IndexSum: 1,
			Surface: unitDisk, Tau: plane(func(x, y float64) (float64, float64) { return -y + 0.3, x + 0.2 })},
		{Name: "annulus-uniform", Source: "Poincare's tangency rule: two of each", Surface: annulus, Points: []Point{},
			Tau: plane(func(x, y float64) (float64, float64) { return 1, 0 })},
		{Name: "saddle-node-pair", Source: "derived; robustness a^2 = 0.18 by the merge of sublevel sets (Chazal, Skraba " +
			"and Patel 2012, from memory)", Euler: 1, IndexSum: 0, BoundaryTerm: -1, Points: pair, Surface: unitDisk,
			Tau: plane(func(x, y float64) (float64, float64) { return x*x - a2, y })},
		{Name: "hopf-cycle", Source: "supercritical Hopf normal form: a focus inside an attracting circle of radius 0.6",
			Euler: 1, IndexSum: 1, Surface: unitDisk,
			Points: []Point{{r3.Vec{}, "focus", "attachment", 1, [2]complex128{complex(0.36, 1), complex(0.36, -1)}}},
			Tau: plane(func(x, y float64) (float64, float64) {
				m := 0.36 - x*x - y*y
				return m*x - y, x + m*y
			})},
	}
}
