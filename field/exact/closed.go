package exact

import (
	"shearprint/field"
	"shearprint/field/r3"
)

// closedCases are closed bodies of higher genus and with sharp edges, where Poincare and Hopf give the sum.
func closedCases() []Case {
	const big, small = 1.0, 0.4
	torusNormal := func(p r3.Vec) r3.Vec {
		ring := r3.Vec{X: p.X, Z: p.Z}.Unit().Scale(big)
		return p.Sub(ring).Unit()
	}
	along := func(dir r3.Vec) func(r3.Vec) r3.Vec {
		return func(p r3.Vec) r3.Vec { return dir.Reject(torusNormal(p)) }
	}
	ex := []Point{
		{r3.Vec{X: big + small}, "node", "separation", 1, [2]complex128{-1 / (big + small), -1 / small}},
		{r3.Vec{X: -big - small}, "node", "attachment", 1, [2]complex128{1 / small, 1 / (big + small)}},
		{r3.Vec{X: big - small}, "saddle", "attachment", -1, [2]complex128{1 / small, -1 / (big - small)}},
		{r3.Vec{X: small - big}, "saddle", "separation", -1, [2]complex128{1 / (big - small), -1 / small}},
	}
	torus := func(triangles int) field.Raw { return Torus(big, small, triangles) }
	stir := func(p r3.Vec) r3.Vec {
		return r3.Vec{X: 1 + 0.3*p.Y, Y: 0.7 - 0.2*p.Z + 0.1*p.X, Z: 0.4 + 0.5*p.X}
	}
	side := func(triangles, squares int) int {
		n := 1
		for 2*squares*n*n < triangles {
			n++
		}
		return n
	}
	return []Case{
		{Name: "torus-stream", Source: "derived: tau = (I - nn) e_x on a torus", Euler: 0, Points: ex, Surface: torus,
			Tau: along(r3.Vec{X: 1})},
		{Name: "torus-around", Source: "derived: the rotation about the axis vanishes nowhere", Euler: 0, Points: []Point{},
			Surface: torus, Tau: func(p r3.Vec) r3.Vec { return r3.Vec{Y: 1}.Cross(p) }},
		{Name: "cube", Source: "Poincare and Hopf", Euler: 2, IndexSum: 2, Tau: stir,
			Surface: func(n int) field.Raw { return Blocks(side(n, 6), [3]int{}) }},
		{Name: "ring-of-blocks", Source: "Poincare and Hopf", Euler: 0, IndexSum: 0, Tau: stir,
			Surface: func(n int) field.Raw { return Ring(side(n, 32)) }},
		{Name: "eight-of-blocks", Source: "Poincare and Hopf", Euler: -2, IndexSum: -2, Tau: stir,
			Surface: func(n int) field.Raw { return Eight(side(n, 50)) }},
	}
}
