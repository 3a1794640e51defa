package render

import (
	"math"
	"testing"

	"github.com/go-gl/mathgl/mgl64"
	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
)

func drawVec(t *rapid.T, name string) r3.Vec {
	c := rapid.Float64Range(-5, 5)
	return r3.Vec{X: c.Draw(t, name+".x"), Y: c.Draw(t, name+".y"), Z: c.Draw(t, name+".z")}
}

func drawCamera(t *rapid.T) Camera {
	at := drawVec(t, "at")
	way := drawVec(t, "way")
	if r3.Hypot(way.X, way.Y) < 0.1 {
		way.X++
	}
	return Camera{From: at.Add(way), At: at, Up: vertical, Ortho: rapid.Bool().Draw(t, "ortho"),
		Fov: rapid.Float64Range(0.1, 1.5).Draw(t, "fov")}
}

// mathgl's matrices, made independently, project to the same pixels.
func TestLensAgreesWithMatrices(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := drawCamera(t)
		const w, h = 640, 480
		p := c.At.Add(drawVec(t, "p").Scale(0.1))
		lens := c.Lens(w, h)
		x, y, z := lens.Project(p)
		if z <= 0.1 {
			return
		}
		v := func(p r3.Vec) mgl64.Vec3 { return mgl64.Vec3{p.X, p.Y, p.Z} }
		projection := mgl64.Perspective(c.Fov, float64(w)/h, 0.05, 100)
		if c.Ortho {
			half := c.Height() / 2
			projection = mgl64.Ortho(-half*w/h, half*w/h, -half, half, 0.05, 100)
		}
		q := projection.Mul4(mgl64.LookAtV(v(c.From), v(c.At), v(c.Up))).Mul4x1(v(p).Vec4(1))
		wantX, wantY := (q[0]/q[3]+1)/2*w, (1-q[1]/q[3])/2*h
		if math.Abs(x-wantX) > 1e-6*(1+math.Abs(wantX)) || math.Abs(y-wantY) > 1e-6*(1+math.Abs(wantY)) {
			t.Fatalf("pixel %g,%g, want %g,%g", x, y, wantX, wantY)
		}
	})
}

func TestZoomKeepsThePointUnderThePointer(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := drawCamera(t)
		lens := c.Lens(800, 600)
		px, py := rapid.Float64Range(0, 800).Draw(t, "x"), rapid.Float64Range(0, 600).Draw(t, "y")
		p := lens.OnTarget(px, py)
		if x, y, _ := lens.Project(p); math.Abs(x-px)+math.Abs(y-py) > 1e-6 {
			t.Fatalf("the target plane's point is at %g,%g, want %g,%g", x, y, px, py)
		}
		factor := rapid.Float64Range(0.2, 5).Draw(t, "factor")
		d := c.Zoom(factor, p)
		zoomed := d.Lens(800, 600)
		if x, y, _ := zoomed.Project(p); math.Abs(x-px)+math.Abs(y-py) > 1e-6 {
			t.Fatalf("after zooming the point is at %g,%g, want %g,%g", x, y, px, py)
		}
		if got, want := d.Height(), c.Height()/factor; math.Abs(got-want) > 1e-9*want {
			t.Fatalf("height %g, want %g", got, want)
		}
	})
}

func TestPanMovesTheTarget(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := drawCamera(t)
		dx, dy := rapid.Float64Range(-1, 1).Draw(t, "dx"), rapid.Float64Range(-1, 1).Draw(t, "dy")
		lens := c.Pan(dx, dy).Lens(800, 600)
		x, y, _ := lens.Project(c.At)
		if math.Abs(x-400-600*dx) > 1e-6 || math.Abs(y-300-600*dy) > 1e-6 {
			t.Fatalf("the target went to %g,%g", x, y)
		}
	})
}

func TestOrbitKeepsDistanceAndUp(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := drawCamera(t)
		d := c
		for range 4 {
			d = d.Orbit(rapid.Float64Range(-4, 4).Draw(t, "yaw"), rapid.Float64Range(-4, 4).Draw(t, "pitch"))
		}
		before, after := c.From.Sub(c.At).Norm(), d.From.Sub(d.At).Norm()
		_, up, _ := d.axes()
		if math.Abs(before-after) > 1e-9*before || d.At != c.At || up.Z < -1e-9 {
			t.Fatalf("from %+v to %+v, up %+v", c, d, up)
		}
	})
	// Back and forth is no change.
	c := Camera{From: r3.Vec{X: 3, Y: 1, Z: 1}, Up: vertical}
	if d := c.Orbit(1, 0.3).Orbit(0, -0.3).Orbit(-1, 0); d.From.Sub(c.From).Norm() > 1e-12 {
		t.Errorf("back at %+v, want %+v", d.From, c.From)
	}
}

func TestNamedViewsShowTheWholeBody(t *testing.T) {
	f := mustField(exact.Torus(2, 0.5, 2000))
	for _, ortho := range []bool{false, true} {
		for _, name := range ViewNames() {
			c := NamedView(name, f)
			c.Ortho = ortho
			c = c.Fit(f, 1.5)
			lens := c.Lens(600, 400)
			var box [4]float64
			for i, p := range f.Points {
				x, y, z := lens.Project(p)
				if x < 0 || x > 600 || y < 0 || y > 400 || z <= 0 {
					t.Fatalf("%s: point %d is at %g,%g", name, i, x, y)
				}
				if i == 0 {
					box = [4]float64{x, x, y, y}
				}
				box = [4]float64{min(box[0], x), max(box[1], x), min(box[2], y), max(box[3], y)}
			}
			// Both margins of at least one direction are those of Fit.
			if box[0] > 600*fitMargin*1.02 && box[2] > 400*fitMargin*1.02 {
				t.Errorf("%s: the body takes %v of 600 x 400", name, box)
			}
		}
	}
}

func TestLookFrom(t *testing.T) {
	c, err := LookFrom("1,2,3: 0,0,-1")
	if err != nil || c.From != (r3.Vec{X: 1, Y: 2, Z: 3}) || c.At != (r3.Vec{Z: -1}) || c.Up != vertical {
		t.Errorf("%+v, %v", c, err)
	}
	if c, err = LookFrom("0,0,3:0,0,0"); err != nil || c.Up != (r3.Vec{Y: 1}) {
		t.Errorf("straight down: %+v, %v", c, err)
	}
	for _, bad := range []string{"", "1,2,3", "1,2:0,0,0", "1,2,x:0,0,0", "1,1,1:1,1,1",
		"NaN,0,0:1,1,1", "1,2,3:4,5,6,7"} {
		if _, err := LookFrom(bad); err == nil {
			t.Errorf("%q is accepted", bad)
		}
	}
}

func TestFlightBeginsAndEndsAtItsCameras(t *testing.T) {
	a := Camera{From: r3.Vec{X: 3}, Up: vertical}
	b := Camera{From: r3.Vec{X: 0.1, Y: 0.4, Z: 0.2}, At: r3.Vec{Y: 0.4}, Up: vertical}
	for _, c := range []struct {
		t    float64
		want Camera
	}{{0, a}, {1, b}} {
		got := a.FlyTo(b, c.t)
		if got.From.Sub(c.want.From).Norm() > 1e-9 || got.At.Sub(c.want.At).Norm() > 1e-9 {
			t.Errorf("at %g: %+v, want %+v", c.t, got, c.want)
		}
	}
}

// mustField gives the surface a field along +x.
func mustField(raw field.Raw) *field.Field {
	for _, p := range raw.Points {
		raw.Tau = append(raw.Tau, r3.Vec{X: 1})
		raw.P = append(raw.P, p.Z)
	}
	f, err := field.Build(raw)
	if err != nil {
		panic(err)
	}
	return f
}
