package topology_test

import (
	"math"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// onlyOpen returns the one open line that the field must have.
func onlyOpen(t *testing.T, f *field.Field, kind topology.Kind) topology.Line {
	t.Helper()
	s := find(t, f, withLines)
	if len(s.Lines) != 1 || s.Lines[0].Type != topology.Open || s.Lines[0].Kind != kind {
		for _, l := range s.Lines {
			t.Logf("%s %v %v length %g: %s", l.ID, l.Kind, l.Type, l.Length, l.Reason)
		}
		t.Fatalf("%d lines, want one open line", len(s.Lines))
	}
	return s.Lines[0]
}

// Straight lines: tau = (1, -y) collects on y = 0 exactly; the swept attachment line of an infinite yawed Hiemenz flow
// (CHECKS 1: tau = (1.23258765682 x, 0.5704652525)) parts at x = 0.
func TestStraightOpenLines(t *testing.T) {
	f := planeField(t, exact.Shake(exact.Plate(2, 1, 6000), 0.2, 3, exact.OntoPlane),
		func(x, y float64) (float64, float64) { return 1, -2 * y })
	l := onlyOpen(t, f, topology.SeparationLine)
	for _, loc := range l.Locs[len(l.Locs)/2:] {
		if p := f.Position(loc); math.Abs(p.Y) > 2e-3 {
			t.Errorf("separation line at %v, want y = 0", p)
		}
	}
	f = planeField(t, exact.Shake(exact.Plate(1, 2, 6000), 0.2, 3, exact.OntoPlane),
		func(x, y float64) (float64, float64) { return 1.23258765682 * x, 0.57046525250 })
	l = onlyOpen(t, f, topology.AttachmentLine)
	for _, loc := range l.Locs[:len(l.Locs)/2] {
		if p := f.Position(loc); math.Abs(p.X) > 2e-3 {
			t.Errorf("attachment line at %v, want x = 0", p)
		}
	}
}

// CHECKS 6b: for tau = (1, -k (y - eps x^2)) the criterion of vanishing curvature is off by the constant 2 eps/k^2; the line
// itself, on which streamlines converge, is y = eps (x^2 - 2x/k + 2/k^2). The line must be the latter.
func TestCurvedOpenLineIsUnbiased(t *testing.T) {
	const k, eps = 2.5, 0.3
	f := planeField(t, exact.Plate(3, 3, 20000), func(x, y float64) (float64, float64) { return 1, -k * (y - eps*x*x) })
	s := find(t, f, withLines)
	bias := 2 * eps / (k * k)
	checked := 0
	for _, l := range s.Lines {
		for _, loc := range l.Locs {
			p := f.Position(loc)
			want := eps * (p.X*p.X - 2*p.X/k + 2/(k*k))
			if p.X > 1 && p.X < 2.5 {
				checked++
				if math.Abs(p.Y-want) > 0.1*bias {
					t.Fatalf("%s at %v, want y = %g; the bias is %g", l.ID, p, want, bias)
				}
			}
		}
	}
	if len(s.Lines) != 1 || checked == 0 {
		t.Errorf("%d lines, %d places checked", len(s.Lines), checked)
	}
}

// Nothing converges on one line more than on others in uniform, in radial and in turning flow.
func TestNoConfetti(t *testing.T) {
	for name, tau := range map[string]func(x, y float64) (float64, float64){
		"uniform":  func(x, y float64) (float64, float64) { return 1, 0.3 },
		"sink":     func(x, y float64) (float64, float64) { return -x, -y },
		"rotation": func(x, y float64) (float64, float64) { return -y, x },
		"wavy":     func(x, y float64) (float64, float64) { return 1, 0.2 * math.Sin(3*x) },
	} {
		f := planeField(t, exact.Shake(exact.Plate(1, 1, 5000), 0.3, 11, exact.OntoPlane), tau)
		if s := find(t, f, withLines); len(s.Lines) != 0 {
			t.Errorf("%s: %d lines, the first: %s", name, len(s.Lines), s.Lines[0].Reason)
		}
	}
	if s := find(t, caseNamed("stokes-sphere").Field(20000), withLines); len(s.Lines) != 0 {
		t.Errorf("Stokes sphere: %d lines", len(s.Lines))
	}
}

// withPressure builds a plane field with a pressure.
func withPressure(t *testing.T, raw field.Raw, tau func(x, y float64) (u, v float64), p func(x, y float64) float64) *field.Field {
	raw.Tau, raw.P = make([]r3.Vec, len(raw.Points)), make([]float64, len(raw.Points))
	for i, q := range raw.Points {
		raw.Tau[i].X, raw.Tau[i].Y = tau(q.X, q.Y)
		raw.P[i] = p(q.X, q.Y)
	}
	return build(t, raw)
}

// Two dimensions: tan theta = -3 (dtau/dx)/(dp/dx) (Oswatitsch 1958, Lighthill 1963; from memory), here on the line x = 0 of
// tau = (-k x, 1).
func TestAngleInTwoDimensions(t *testing.T) {
	const k, g = 1.7, 2.9
	f := withPressure(t, exact.Plate(1, 2, 5000), func(x, y float64) (float64, float64) { return -k * x, 1 },
		func(x, y float64) float64 { return g * x })
	l := onlyOpen(t, f, topology.SeparationLine)
	// The formula's angle is measured from +x, which is on the right of a line along +y.
	want := math.Pi - math.Atan2(3*k, g)
	if got := l.Angle[len(l.Angle)-1]; math.Abs(got-want) > 0.01 {
		t.Errorf("angle %g, want %g", got, want)
	}
}

// From a saddle to a node, where the rates change along the line: against the equation of the slope integrated finely in
// time (Surana, Grunberg and Haller 2006; the form of CHECKS 6b).
func TestAngleFromSaddleToNode(t *testing.T) {
	const g, h = 1.3, 0.8
	f := withPressure(t, exact.Shake(exact.Plate(0.6, 1.4, 30000), 0.1, 2, exact.OntoPlane),
		func(x, y float64) (float64, float64) { return -x * (1 + 0.5*y), y * (1 - y) },
		func(x, y float64) float64 { return g*x + h*x*y })
	s := find(t, f, withLines)
	// x' = 0; the left of +y is -x: the slope towards +x is minus that towards the left.
	y, m := 1e-5, g/2
	const dt = 1e-4
	slope := func(y, m float64) float64 { return (-1.5*(1+0.5*y)+0.5*(1-2*y))*m + (g+h*y)/2 }
	for y < 0.5 {
		k1 := slope(y, m)
		yh := y + dt/2*y*(1-y)
		k2 := slope(yh, m+dt/2*k1)
		m += dt * k2
		y += dt * yh * (1 - yh)
	}
	want := math.Atan2(1, -m)
	for _, l := range s.Lines {
		if l.From < 0 || l.To < 0 || s.Points[l.From].Type != topology.Saddle || s.Points[l.To].Type != topology.Node {
			continue
		}
		for i, loc := range l.Locs {
			if p := f.Position(loc); math.Abs(p.Y-0.5) < 0.01 {
				if math.Abs(l.Angle[i]-want) > 0.02 {
					t.Errorf("angle %g at %v, want %g", l.Angle[i], p, want)
				}
				return
			}
		}
	}
	t.Error("no line from the saddle to the node")
}
