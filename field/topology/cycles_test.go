package topology_test

import (
	"math"
	"testing"

	"shearprint/field/exact"
	"shearprint/field/topology"
)

func cyclesOf(s *topology.Skeleton) []topology.Line {
	var out []topology.Line
	for _, l := range s.Lines {
		if l.Type == topology.Cycle {
			out = append(out, l)
		}
	}
	return out
}

// The supercritical Hopf normal form: r' = r (0.36 - r^2), phi' = 1. Its circle has r = 0.6; neighbours approach it by the
// power -0.72 * 2 pi of e in a turn.
func TestHopfCycle(t *testing.T) {
	s := find(t, caseNamed("hopf-cycle").Field(20000), withLines)
	c := cyclesOf(s)
	if len(c) != 1 || len(s.Lines) != 1 {
		t.Fatalf("%d cycles in %d lines, want 1", len(c), len(s.Lines))
	}
	if l := c[0]; !l.Stable || l.Kind != topology.SeparationLine || math.Abs(l.Length-1.2*math.Pi) > 0.01 ||
		math.Abs(l.Strength-1.44*math.Pi) > 0.1 {
		t.Errorf("stable %v, kind %v, length %g, strength %g", l.Stable, l.Kind, l.Length, l.Strength)
	}
}

// One cycle inside another, r' = r (0.09 - r^2) (0.36 - r^2), phi' = 1: the inner attracts, the outer repels.
func TestNestedCycles(t *testing.T) {
	s := find(t, planeField(t, exact.Disk(1, 20000), func(x, y float64) (float64, float64) {
		q := x*x + y*y
		m := (0.09 - q) * (0.36 - q)
		return m*x - y, m*y + x
	}), withLines)
	found := map[bool]float64{}
	for _, l := range cyclesOf(s) {
		found[l.Stable] = l.Length / (2 * math.Pi)
	}
	if len(cyclesOf(s)) != 2 || math.Abs(found[true]-0.3) > 0.01 || math.Abs(found[false]-0.6) > 0.01 {
		t.Errorf("%d cycles of radius %v, want 0.3 (stable) and 0.6", len(cyclesOf(s)), found)
	}
}

// Van der Pol's oscillator, x” = mu (1 - x^2) x' - x with mu = 1: the cycle against the one of a fine integration in time
// by the classical Runge-Kutta method, in length and in amplitude.
func TestVanDerPol(t *testing.T) {
	rate := func(x, y float64) (float64, float64) { return y, (1-x*x)*y - x }
	x, y := 2.0, 0.0
	wantLength, wantX := 0.0, 0.0
	const h = 1e-4
	turns := 0
	for turns < 12 {
		ax, ay := rate(x, y)
		bx, by := rate(x+h/2*ax, y+h/2*ay)
		cx, cy := rate(x+h/2*bx, y+h/2*by)
		dx, dy := rate(x+h*cx, y+h*cy)
		nx, ny := x+h/6*(ax+2*bx+2*cx+dx), y+h/6*(ay+2*by+2*cy+dy)
		if y >= 0 && ny < 0 {
			turns++
			if turns == 11 { // the transient is long gone: measure the last turn
				wantLength, wantX = 0, x
			}
		}
		wantLength += math.Hypot(nx-x, ny-y)
		x, y = nx, ny
	}
	s := find(t, planeField(t, exact.Plate(4, 4, 30000), rate), withLines)
	c := cyclesOf(s)
	if len(c) != 1 || !c[0].Stable {
		t.Fatalf("cycles %v", c)
	}
	gotX := 0.0
	for _, l := range c[0].Locs {
		gotX = math.Max(gotX, s.Field.Position(l).X)
	}
	if math.Abs(c[0].Length-wantLength) > 0.005*wantLength || math.Abs(gotX-wantX) > 0.01 {
		t.Errorf("length %g and amplitude %g, want %g and %g", c[0].Length, gotX, wantLength, wantX)
	}
}

// CHECKS 3.6: a sphere with swirl and strain. The equator is a closed orbit with the multiplier exp(5 pi E0/Omega), which
// repels; with E0 = 0.3 and Omega = 1 the exponent is 1.5 pi.
func TestEquator(t *testing.T) {
	c := cyclesOf(find(t, caseNamed("swirl-and-strain").Field(20000), withLines))
	if len(c) != 1 || c[0].Stable || c[0].Kind != topology.AttachmentLine || math.Abs(c[0].Length-2*math.Pi) > 0.01 ||
		math.Abs(c[0].Strength-1.5*math.Pi) > 0.05 {
		t.Errorf("cycles %+v", c)
	}
}

// Around a torus every streamline closes: none is a cycle, and the skeleton says so.
func TestBandOfClosedOrbits(t *testing.T) {
	s := find(t, caseNamed("torus-around").Field(5000), withLines)
	told := false
	for _, f := range s.Findings {
		told = told || f.Code == "closed-bands"
	}
	if len(s.Lines) != 0 || !told {
		t.Errorf("%d lines, told: %v", len(s.Lines), told)
	}
}
