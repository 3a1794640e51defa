package topology_test

import (
	"math"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// helical is a flow along a cylinder of radius 1 about the x axis that depends on the distance z from it and on phi = theta - x
// only. On the wall u = z T + z^2/2 B with T = e + sin(phi)/sqrt(2) left, where e runs along the helices, at 45 degrees, and
// left crosses them, towards falling phi; the part normal to the wall follows from continuity. It has no slip and no divergence, exactly.
type helical struct{ b float64 } // B = -T + b cos(phi) left: mu times the pressure gradient is b across the line phi = 0

// at returns dz/dt and dphi/dt.
func (f helical) at(z, phi float64) (up, turn float64) {
	r, s := 1+z, math.Sqrt2/2
	sin, cos := math.Sincos(phi)
	// Across and along the helices: e = (s, s) and left = (s, -s) in (x, theta).
	across := sin*s*z + z*z/2*(f.b*cos-sin*s)
	along := z - z*z/2
	x, theta := s*along+s*across, s*along-s*across
	// Continuity: d(r u_r)/dr = -d(u_theta)/dphi + r d(u_x)/dphi, of which only the part across depends on phi.
	q1, q2 := cos*s, -(cos*s+f.b*sin)/2 // d(across)/dphi = q1 z + q2 z^2
	flux := s * (2*q1*z*z/2 + (2*q2+q1)*z*z*z/3 + q2*z*z*z*z/4)
	return flux / r, theta/r - x
}

// slope returns the distance to the left, per distance from the wall, of the surface on which the fluid leaves: in the time
// that runs with 1/z the wall's line phi = 0 is a saddle of (z, phi), and the surface its unstable direction.
func (f helical) slope() float64 {
	const d = 1e-5
	up, turn := f.at(d, 0)
	_, beside := f.at(d, d)
	zz, pz, pp := up/d/d, turn/d/d, (beside-turn)/d/d // the wall itself is invariant
	return -pz / (zz - pp) / math.Sqrt2               // phi falls by sqrt(2) per distance to the left
}

// The surface that leaves a curved wall along a helix, against the angle from wall quantities: the way in which the wall turns
// under the line tilts it by many degrees.
func TestAngleOnCurvedWall(t *testing.T) {
	const around, alongX, length = 96, 192, 9.0
	var raw field.Raw
	for i := range alongX + 1 {
		for k := range around {
			theta := 2 * math.Pi * (float64(k) + 0.3*math.Sin(float64(7*i+3*k))) / around
			x := length * float64(i) / alongX
			sin, cos := math.Sincos(theta)
			raw.Points = append(raw.Points, r3.Vec{X: x, Y: cos, Z: sin})
			if i < alongX {
				a, b := int32(i*around+k), int32(i*around+(k+1)%around)
				c, d := a+around, b+around
				raw.Tris = append(raw.Tris, [3]int32{a, b, c}, [3]int32{b, d, c})
			}
		}
	}
	for _, b := range []float64{0, 2, -1.5} {
		flow := helical{b}
		raw.Tau, raw.P = make([]r3.Vec, len(raw.Points)), make([]float64, len(raw.Points))
		for i, p := range raw.Points {
			circle := r3.Vec{Y: -p.Z, Z: p.Y}
			sin := math.Sin(math.Atan2(p.Z, p.Y) - p.X)
			e := r3.Vec{X: 1}.Add(circle).Scale(math.Sqrt2 / 2)
			left := r3.Vec{X: 1}.Sub(circle).Scale(math.Sqrt2 / 2)
			raw.Tau[i] = e.AddScaled(sin*math.Sqrt2/2, left)
			raw.P[i] = -b * sin / math.Sqrt2
		}
		s := find(t, build(t, raw), withLines)
		want := math.Atan2(1, flow.slope())
		flat := math.Atan2(1, flow.slope()-0.5/1.5) // without the wall's turning
		found := 0
		for _, l := range s.Lines {
			if l.Kind != topology.SeparationLine || l.Length < 6 {
				continue
			}
			found++
			for i := len(l.Angle) / 4; i < len(l.Angle)*3/4; i++ {
				if math.Abs(l.Angle[i]-want) > 0.01 {
					t.Fatalf("b = %g: angle %g after place %d, want %g; %g without curvature", b, l.Angle[i], i, want, flat)
				}
			}
		}
		if found != 1 || math.Abs(flat-want) < 0.1 {
			t.Errorf("b = %g: %d separation lines, angles %g and %g without curvature", b, found, want, flat)
		}
	}
}

// Along the equator of a sphere that turns in fluid at rest the fluid leaves at right angles, by symmetry (Bickley 1938, from
// memory: the first effect of inertia is tau_theta = (Re/4) sin cos, p = (Re/8) cos 2 theta).
func TestAngleOnTurningSphere(t *testing.T) {
	const re = 2.
	raw := exact.Shake(exact.Sphere(1, 20000), 0.2, 6, exact.OntoSphere(1))
	raw.Tau, raw.P = make([]r3.Vec, len(raw.Points)), make([]float64, len(raw.Points))
	for i, p := range raw.Points {
		south := r3.Vec{Z: -1}.Reject(p) // sin theta e_theta
		raw.Tau[i] = r3.Vec{X: -p.Y, Y: p.X}.Scale(3).AddScaled(re/4*p.Z, south)
		raw.P[i] = re / 8 * (2*p.Z*p.Z - 1)
	}
	s := find(t, build(t, raw), withLines)
	cycles := 0
	for _, l := range s.Lines {
		if l.Type != topology.Cycle {
			continue
		}
		cycles++
		if l.Kind != topology.SeparationLine || !l.Stable || math.Abs(l.Length-2*math.Pi) > 0.01 {
			t.Errorf("the equator: %v, stable %v, length %g", l.Kind, l.Stable, l.Length)
		}
		for i, a := range l.Angle {
			if math.Abs(a-math.Pi/2) > 0.03 {
				t.Fatalf("angle %g at place %d, want a right angle", a, i)
			}
		}
	}
	if cycles != 1 {
		t.Errorf("%d cycles, want the equator", cycles)
	}
}
