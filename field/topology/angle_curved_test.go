package topology_test

import (
	"cmp"
	"math"
	"slices"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// knotted is a flow outside a torus around the y axis whose separation line runs around hole and tube at once, obliquely to
// both directions of curvature. It is the curl of d^2 A, with d the distance from the wall: exactly without divergence and
// slip, whatever A. With A = T x n/2 + d C the velocity is u = d T + ..., and T is tau/mu. Viscosity is 1.
//
// With the angles phi around the hole and psi around the tube, T makes phi' = along(phi), psi' = phi' - rate sin(psi - phi):
// the fluid leaves on psi = phi.
type knotted struct {
	along func(phi float64) float64
	rate  float64
	lean  float64 // C = lean times the unit vector around the hole; sets the pressure gradient across the line
}

const bigRadius, smallRadius = 1., 0.5

// torusPlace is a place in space in the coordinates of the torus.
type torusPlace struct {
	phi, psi, d       float64 // d is the distance from the wall
	around, up, n     r3.Vec  // unit vectors of growing phi, psi and d
	aroundR, tubeHalf float64 // the wall's radii under the place: of the circles of phi and of psi
}

func onTorus(p r3.Vec) torusPlace {
	rho := math.Hypot(p.X, p.Z)
	cp, sp := p.X/rho, -p.Z/rho
	far := math.Hypot(rho-bigRadius, p.Y)
	ct, st := (rho-bigRadius)/far, p.Y/far
	return torusPlace{
		phi: math.Atan2(sp, cp), psi: math.Atan2(st, ct), d: far - smallRadius,
		around: r3.Vec{X: -sp, Z: -cp}, up: r3.Vec{X: -st * cp, Y: ct, Z: st * sp}, n: r3.Vec{X: ct * cp, Y: st, Z: -ct * sp},
		aroundR: bigRadius + smallRadius*ct, tubeHalf: smallRadius,
	}
}

// torusAt returns the place on the wall with the angles phi and psi.
func torusAt(phi, psi float64) r3.Vec {
	sp, cp := math.Sincos(phi)
	st, ct := math.Sincos(psi)
	r := bigRadius + smallRadius*ct
	return r3.Vec{X: r * cp, Y: smallRadius * st, Z: -r * sp}
}

// shear returns T at the foot of a place.
func (k knotted) shear(q torusPlace) r3.Vec {
	a := k.along(q.phi)
	return q.around.Scale(q.aroundR*a).AddScaled(q.tubeHalf*(a-k.rate*math.Sin(q.psi-q.phi)), q.up)
}

func (k knotted) potential(p r3.Vec) r3.Vec {
	q := onTorus(p)
	return k.shear(q).Cross(q.n).Scale(0.5).AddScaled(k.lean*q.d, q.around)
}

// perDistance returns the velocity divided by the distance from the wall: curl(d^2 A)/d = 2 n x A + d curl A.
func (k knotted) perDistance(p r3.Vec) r3.Vec {
	const h = 1e-4
	dx := k.potential(p.Add(r3.Vec{X: h})).Sub(k.potential(p.Sub(r3.Vec{X: h}))).Scale(0.5 / h)
	dy := k.potential(p.Add(r3.Vec{Y: h})).Sub(k.potential(p.Sub(r3.Vec{Y: h}))).Scale(0.5 / h)
	dz := k.potential(p.Add(r3.Vec{Z: h})).Sub(k.potential(p.Sub(r3.Vec{Z: h}))).Scale(0.5 / h)
	curl := r3.Vec{X: dy.Z - dz.Y, Y: dz.X - dx.Z, Z: dx.Y - dy.X}
	q := onTorus(p)
	return q.n.Cross(k.potential(p)).Scale(2).AddScaled(q.d, curl)
}

// laplacian returns that of the velocity, component by component in space.
func (k knotted) laplacian(p r3.Vec) r3.Vec {
	const h = 1e-3
	u := func(p r3.Vec) r3.Vec { return k.perDistance(p).Scale(onTorus(p).d) }
	sum := u(p).Scale(-6)
	for _, e := range []r3.Vec{{X: h}, {Y: h}, {Z: h}} {
		sum = sum.Add(u(p.Add(e))).Add(u(p.Sub(e)))
	}
	return sum.Scale(1 / (h * h))
}

// leftOf returns the direction in the wall to the left of the line psi = phi, taken towards growing phi.
func leftOf(q torusPlace) r3.Vec {
	return q.n.Cross(q.around.Scale(q.aroundR).AddScaled(q.tubeHalf, q.up).Unit())
}

// pressure returns one on the wall whose gradient across the line is what holds the balance with friction, where the fluid
// sticks: grad p = the Laplacian of u. Elsewhere it is of no consequence.
func (k knotted) pressure(phi, psi float64) float64 {
	p := torusAt(psi, psi)
	q := onTorus(p)
	left := leftOf(q)
	apart := left.Dot(q.up)/q.tubeHalf - left.Dot(q.around)/q.aroundR // left . grad(psi - phi)
	return left.Dot(k.laplacian(p)) / apart * math.Sin(psi-phi)
}

func (k knotted) field(t *testing.T, triangles int) *field.Field {
	raw := exact.Torus(bigRadius, smallRadius, triangles)
	raw = exact.Shake(raw, 0.2, 3, func(p r3.Vec) r3.Vec { q := onTorus(p); return p.AddScaled(-q.d, q.n) })
	raw.Tau, raw.P = make([]r3.Vec, len(raw.Points)), make([]float64, len(raw.Points))
	for i, p := range raw.Points {
		q := onTorus(p)
		raw.Tau[i], raw.P[i] = k.shear(q), k.pressure(q.phi, q.psi)
	}
	return build(t, raw)
}

// risen is where a streamline passes: the angle phi of its foot, and the angle at which it stands to the wall, seen along
// the line.
type risen struct{ phi, angle float64 }

// rise follows a streamline from the given height over the line at phi until phi has changed by turn, and returns the last
// time around, by rising phi. Whatever its beginning, it approaches the surface that leaves the wall: in the slope across the
// line the beginning is forgotten with the third power of the factor by which the height grows, where T is constant along.
func (k knotted) rise(t *testing.T, phi, turn, height float64) []risen {
	t.Helper()
	const dt, most, near = 1e-3, 100000, 2e-3
	p := torusAt(phi, phi).AddScaled(height, onTorus(torusAt(phi, phi)).n)
	way := math.Copysign(1, turn)
	var out []risen
	for done := 0.0; math.Abs(done) < math.Abs(turn); {
		k1 := k.perDistance(p)
		k2 := k.perDistance(p.AddScaled(dt/2, k1))
		k3 := k.perDistance(p.AddScaled(dt/2, k2))
		k4 := k.perDistance(p.AddScaled(dt, k3))
		p = p.AddScaled(dt/6, k1.AddScaled(2, k2).AddScaled(2, k3).Add(k4))
		q := onTorus(p)
		done += r3.Wrap(q.phi - phi)
		phi = q.phi
		line := torusAt(phi, phi)
		beside := way * leftOf(onTorus(line)).Dot(p.AddScaled(-q.d, q.n).Sub(line))
		if math.Abs(turn)-math.Abs(done) < 2*math.Pi {
			out = append(out, risen{phi, math.Atan2(q.d, beside)})
		}
		if len(out) == most || !(q.d > 0) || q.d > near {
			t.Fatalf("the streamline from phi = %g is at the height %g", phi, q.d)
		}
	}
	slices.SortFunc(out, func(a, b risen) int { return cmp.Compare(a.phi, b.phi) })
	return out
}

// angleAt returns the angle where a streamline passes nearest to phi from below.
func angleAt(r []risen, phi float64) float64 {
	i, _ := slices.BinarySearchFunc(r, phi, func(a risen, phi float64) int { return cmp.Compare(a.phi, phi) })
	return r[min(i, len(r)-1)].angle
}

// angleError is the least error of angles that the tests below call wrong [rad]. Edges of the mesh turn by 0.05, and the
// curvature of the wall is worth up to 0.6.
const angleError = 0.01

// Along a closed line the angle depends on the whole turn, not on where the list of places begins: against streamlines of the
// exact flow. Neighbours of the slowest cycle come closer by a factor of 7 only in a turn.
func TestAngleOnKnottedCycle(t *testing.T) {
	for _, c := range []struct{ rate, lean, turns float64 }{{1.2, 0, 3}, {1.2, 1, 3}, {1.2, -1, 3}, {0.3, 0.2, 7}} {
		k := knotted{func(float64) float64 { return 1 }, c.rate, c.lean}
		f := k.field(t, 40000)
		want := k.rise(t, 0, 2*math.Pi*c.turns, 1e-8)
		found := 0
		for _, l := range find(t, f, withLines).Lines {
			if l.Type != topology.Cycle || l.Kind != topology.SeparationLine {
				continue
			}
			found++
			for i, loc := range l.Locs {
				phi := onTorus(f.Position(loc)).phi
				if w := angleAt(want, phi); !(math.Abs(l.Angle[i]-w) < angleError) {
					t.Fatalf("%+v: angle %g at phi = %g, want %g", c, l.Angle[i], phi, w)
				}
			}
		}
		if found != 1 {
			t.Errorf("%+v: %d separation cycles, want 1", c, found)
		}
	}
}

// From a saddle the line runs both ways to a node; what is on the left changes sides. Close to the points tau hardly tells the
// line's direction, so the places there count.
func TestAngleOnKnottedSeparatrices(t *testing.T) {
	for _, lean := range []float64{0, 1, -1} {
		k := knotted{math.Sin, 2, lean}
		f := k.field(t, 40000)
		s := find(t, f, withLines)
		const begin, end = 0.02, 3.1
		found := 0
		for _, l := range s.Lines {
			if l.Kind != topology.SeparationLine || l.From < 0 || f.Position(s.Points[l.From].Loc).X < 0 {
				continue
			}
			found++
			way := math.Copysign(1, onTorus(f.Position(l.Locs[len(l.Locs)/2])).phi)
			want := k.rise(t, way*1e-4, way*end, 1e-9)
			if w := angleAt(want, way*begin); !(math.Abs(l.Angle[0]-w) < angleError) {
				t.Errorf("lean %g: angle %g at the saddle, want %g", lean, l.Angle[0], w)
			}
			for i, loc := range l.Locs {
				phi := onTorus(f.Position(loc)).phi
				if w := angleAt(want, phi); way*phi > begin && way*phi < end && !(math.Abs(l.Angle[i]-w) < angleError) {
					t.Fatalf("lean %g: angle %g at phi = %g, want %g", lean, l.Angle[i], phi, w)
				}
			}
		}
		if found != 2 {
			t.Errorf("lean %g: %d lines from the saddle, want 2", lean, found)
		}
	}
}
