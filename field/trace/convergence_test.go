package trace_test

import (
	"context"
	"math"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/trace"
)

// streamline is a field whose streamlines are known.
type streamline struct {
	name    string
	source  string
	surface func(triangles int) field.Raw
	project func(r3.Vec) r3.Vec // for Shake
	tau     func(r3.Vec) r3.Vec
	// off returns how far a place is from the streamline through another, across it; arc the length between them along it, nil
	// where it has no closed form.
	off    func(from, at r3.Vec) float64
	arc    func(from, at r3.Vec) float64
	starts []r3.Vec
	length float64
}

// tangent returns the part of v that is tangential to the unit sphere at p.
func tangent(v, p r3.Vec) r3.Vec { return v.Reject(p.Unit()) }

func unitSphere(triangles int) field.Raw { return exact.Sphere(1, triangles) }

func unitTorus(triangles int) field.Raw { return exact.Torus(1, 0.4, triangles) }

func unitDisk(triangles int) field.Raw { return exact.Disk(1, triangles) }

// angles returns colatitude and longitude.
func angles(p r3.Vec) (theta, phi float64) {
	return math.Atan2(math.Hypot(p.X, p.Y), p.Z), math.Atan2(p.Y, p.X)
}

// streamlines on curved surfaces, and on the disk for fields that are not linear.
func streamlines() []streamline {
	// Strain (a, a, b) with swirl w on the sphere: tau = (I - nn) M n is what n = exp(t M) n0 / |exp(t M) n0| obeys, so that
	// tan(theta) grows by exp((a-b) t) while phi grows by w t.
	const a, b, w = -0.15, 0.3, 0.5
	// Stream along z with swirl: tau = sin(theta) (-u, w) in the directions of theta and phi, at a constant angle to the
	// meridians: loxodromes, phi = -(w/u) ln tan(theta/2).
	const u, v = 1.0, 1.7
	// On the torus of radii 1 and 0.4 velocities of constant rates in both angles draw straight lines in the angles.
	const around, through = 1.0, 2.3
	torusAngles := func(p r3.Vec) (round, tube float64) {
		return math.Atan2(-p.Z, p.X), math.Atan2(p.Y, math.Hypot(p.X, p.Z)-1)
	}
	k := exact.Rotors[0]
	varying := func(p r3.Vec) float64 { return 1 + p.X*p.X + 0.5*p.Y }
	spiral := func(from, at r3.Vec) float64 { // ln r - (F/G) theta
		turn := turned(math.Atan2(at.Y, at.X)-math.Atan2(from.Y, from.X), math.Log(at.Norm()/from.Norm())*k.G/k.F)
		return (math.Log(at.Norm()/from.Norm()) - turn*k.F/k.G) * at.Norm() / math.Hypot(1, k.F/k.G)
	}
	around3 := []r3.Vec{{X: 0.3, Y: 0.2, Z: 0.9}, {X: -0.2, Y: 0.3, Z: 0.8}, {X: 0.1, Y: -0.4, Z: 0.7}, {X: -0.3, Y: -0.2, Z: 0.85}}
	return []streamline{
		{name: "strain and swirl", source: "derived above", surface: unitSphere, project: exact.OntoSphere(1),
			tau: func(p r3.Vec) r3.Vec {
				return tangent(r3.Vec{X: -(a*p.X - w*p.Y), Y: -(w*p.X + a*p.Y), Z: -b * p.Z}, p)
			},
			off: func(from, at r3.Vec) float64 {
				t0, p0 := angles(from)
				t1, p1 := angles(at)
				g := math.Log(math.Tan(t1) / math.Tan(t0)) // (a-b) t
				miss := g*w/(a-b) - turned(p1-p0, g*w/(a-b))
				// By the gradient of what is constant along the streamline.
				return miss / math.Hypot(w/(a-b)*2/math.Sin(2*t1), 1/math.Sin(t1))
			},
			starts: around3, length: 0.8},
		{name: "loxodrome", source: "Mercator: curves of constant bearing; derived above", surface: unitSphere, project: exact.OntoSphere(1),
			tau: func(p r3.Vec) r3.Vec { return tangent(r3.Vec{Z: -u}, p).Add(r3.Vec{Z: v}.Cross(p)) },
			off: func(from, at r3.Vec) float64 {
				t0, p0 := angles(from)
				t1, p1 := angles(at)
				g := math.Log(math.Tan(t1/2)/math.Tan(t0/2)) * v / u
				return (g - turned(p1-p0, g)) * math.Sin(t1) / math.Hypot(1, v/u)
			},
			arc: func(from, at r3.Vec) float64 {
				t0, _ := angles(from)
				t1, _ := angles(at)
				return (t1 - t0) * math.Hypot(1, v/u)
			},
			starts: around3, length: 3.2},
		{name: "winding on a torus", source: "derived above", surface: unitTorus, project: ontoTorus,
			tau: func(p r3.Vec) r3.Vec {
				ring := r3.Vec{X: p.X, Z: p.Z}.Unit()
				n := p.Sub(ring).Unit()
				east := r3.Vec{Y: 1}.Cross(ring)
				return east.Scale(around*math.Hypot(p.X, p.Z)).AddScaled(0.4*through, n.Cross(east))
			},
			off: func(from, at r3.Vec) float64 {
				r0, t0 := torusAngles(from)
				r1, t1 := torusAngles(at)
				round := r3.Wrap(r1 - r0)
				miss := turned(t1-t0, round*through/around) - round*through/around
				ring := 1 + 0.4*math.Cos(t1)
				return miss / math.Hypot(1/0.4, through/around/ring)
			},
			starts: []r3.Vec{{X: 1.4}, {X: 1, Y: 0.4}, {Z: 1.3, Y: 0.3}, {X: -0.7, Z: 0.2}}, length: 3.5},
		{name: "spiral", source: "Karman's disk, r = r0 exp(theta F'/G'), at a speed that varies with place", surface: unitDisk,
			project: exact.OntoPlane,
			tau: func(p r3.Vec) r3.Vec {
				return r3.Vec{X: k.F*p.X - k.G*p.Y, Y: k.G*p.X + k.F*p.Y}.Scale(varying(p))
			},
			off:    spiral,
			arc:    func(from, at r3.Vec) float64 { return (at.Norm() - from.Norm()) * math.Hypot(1, k.G/k.F) },
			starts: []r3.Vec{{X: 0.2, Y: 0.1}, {X: -0.15, Y: 0.2}, {X: 0.1, Y: -0.25}, {X: -0.2, Y: -0.1}}, length: 0.9},
	}
}

// turned returns the angle that is the given one but for whole turns and nearest to near.
func turned(angle, near float64) float64 { return near + r3.Wrap(angle-near) }

// The error against streamlines of closed form is that of the mesh, on which tau is linear and places are on chords: it falls
// by the square of the edges, on even meshes and on shaken ones, across the curves and in their arc length.
func TestOrderOnKnownStreamlines(t *testing.T) {
	const (
		// Over three quarterings of the triangles. Orders of 1.9 to 2.7 are measured: which places are the worst differs from mesh
		// to mesh, and errors of both signs cancel along a curve.
		least, most = 1.7, 3
		shake       = 0.2
	)
	for _, c := range streamlines() {
		for _, share := range []float64{0, shake} {
			var off, arc []float64
			for _, n := range []int{2000, 8000, 32000, 128000} {
				raw := c.surface(n)
				if share > 0 {
					raw = exact.Shake(raw, share, 5, c.project)
				}
				o, s := errorsOn(t, c, raw, trace.Options{MaxLength: c.length})
				off, arc = append(off, o), append(arc, s)
			}
			check := func(what string, e []float64) {
				order := math.Log2(e[0]/e[len(e)-1]) / float64(len(e)-1)
				t.Logf("%s, shaken by %g: %s %.2g, order %.2f", c.name, share, what, e, order)
				if !(order > least && order < most) {
					t.Errorf("%s, shaken by %g: %s %.3g, order %.2f, not 2", c.name, share, what, e, order)
				}
			}
			check("off by", off)
			if c.arc != nil {
				check("arc length off by", arc)
			}
		}
	}
}

// errorsOn traces the curves of a case on a mesh and returns how far they are off at worst, across and in arc length.
func errorsOn(t *testing.T, c streamline, raw field.Raw, opt trace.Options) (off, arc float64) {
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = c.tau(p)
	}
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	tr := trace.New(f, nil, nil)
	for _, from := range c.starts {
		l, _ := f.Nearest(from)
		p := tr.Trace(context.Background(), l, opt)
		if p.End != trace.TooLong && p.End != trace.Rim {
			t.Fatalf("%s: ends after %g because %v", c.name, p.Length(), p.End)
		}
		start := f.Position(l)
		for i, l := range p.Locs {
			at := f.Position(l)
			off = math.Max(off, math.Abs(c.off(start, at)))
			if c.arc != nil {
				arc = math.Max(arc, math.Abs(c.arc(start, at)-p.S[i]))
			}
		}
	}
	return off, arc
}

// On linear fields in the plane the mesh errs not at all, and what is left is the error of the steps: the estimate goes with the
// step's cube and is held to the tolerance, the place's own error with the fourth power, of as many more steps as they are
// shorter: it falls in proportion to the tolerance.
func TestOrderInTolerance(t *testing.T) {
	const (
		// 1.00 and 1.01 are measured over five decades.
		least, most = 0.8, 1.3
	)
	k, h := exact.Rotors[0], exact.AttachmentTable[2]
	spiral := streamlines()[3]
	spiral.tau = func(p r3.Vec) r3.Vec { return r3.Vec{X: k.F*p.X - k.G*p.Y, Y: k.G*p.X + k.F*p.Y} }
	power := h.C * h.G / h.F
	for _, c := range []streamline{spiral, {
		name: "attachment", source: "Howarth 1951: dy/dx = c g\" y / (f\" x), so y = y0 (x/x0)^(c g\"/f\")", surface: unitDisk,
		tau: func(p r3.Vec) r3.Vec { return r3.Vec{X: h.F * p.X, Y: h.C * h.G * p.Y} },
		off: func(from, at r3.Vec) float64 {
			slope := power * at.Y / at.X
			return (at.Y - from.Y*math.Pow(at.X/from.X, power)) / math.Hypot(1, slope)
		},
		starts: []r3.Vec{{X: 0.02, Y: 0.1}, {X: -0.03, Y: 0.15}, {X: 0.05, Y: -0.3}, {X: -0.01, Y: -0.02}}, length: 0.8,
	}} {
		var off []float64
		tolerances := []float64{1e-4, 1e-5, 1e-6, 1e-7, 1e-8, 1e-9}
		for _, tolerance := range tolerances {
			// Large triangles, within which the tolerance decides about the steps.
			o, _ := errorsOn(t, c, c.surface(54), trace.Options{MaxLength: c.length, Tolerance: tolerance})
			off = append(off, o)
		}
		order := math.Log(off[0]/off[len(off)-1]) / math.Log(tolerances[0]/tolerances[len(off)-1])
		t.Logf("%s: off by %.2g, order %.2f", c.name, off, order)
		if !(order > least && order < most) {
			t.Errorf("%s: off by %.3g, order %.2f in the tolerance, not 1", c.name, off, order)
		}
	}
}
