package session_test

import (
	"context"
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/render"
	"shearprint/wasm/session"
)

var coordinate = rapid.Float64Range(-1e6, 1e6)

func point(t *rapid.T, name string) [3]float64 {
	return [3]float64{coordinate.Draw(t, name+"x"), coordinate.Draw(t, name+"y"), coordinate.Draw(t, name+"z")}
}

func anyView(t *rapid.T) session.View {
	v := session.Default(rapid.String().Draw(t, "run"))
	v.Eye, v.Target, v.Up = point(t, "eye"), point(t, "target"), point(t, "up")
	v.Angle = rapid.Float64Range(0, 2.9).Draw(t, "angle")
	v.Colour = rapid.SampledFrom([]string{"cp", "p", "tau", "none"}).Draw(t, "colour")
	v.Flow = rapid.SampledFrom([]string{"texture", "lines", "none"}).Draw(t, "flow")
	v.Theme = rapid.SampledFrom([]string{"light", "dark"}).Draw(t, "theme")
	for _, b := range []*bool{&v.Parallel, &v.Points, &v.Separation, &v.Attachment, &v.Closed, &v.Horn, &v.Open, &v.Cycle,
		&v.Legend, &v.Isobars, &v.Motion} {
		*b = rapid.Bool().Draw(t, "switch")
	}
	v.Floor = rapid.Float64Range(0, 1e3).Draw(t, "floor")
	if rapid.Bool().Draw(t, "chosen") {
		at := point(t, "at")
		v.At = &at
	}
	return v
}

// A link opens the view that it was made of, up to the digits it carries, and encodes to itself.
func TestLinkRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := anyView(t)
		link := v.Encode()
		w, err := session.Decode(link, session.Default("other"))
		if err != nil {
			t.Fatalf("%s: %v", link, err)
		}
		if again := w.Encode(); again != link {
			t.Fatalf("%s\nencodes again as\n%s", link, again)
		}
		close := cmp.Comparer(func(a, b float64) bool { return math.Abs(a-b) <= 1e-8*max(math.Abs(a), math.Abs(b)) })
		if d := cmp.Diff(v, w, close); d != "" {
			t.Fatalf("%s opens another view:\n%s", link, d)
		}
		if _, err := session.Decode("#"+link, v); err != nil {
			t.Fatalf("with its sign: %v", err)
		}
	})
}

// What makes no sense is an error that names it, and the view stays.
func TestBadLinks(t *testing.T) {
	v := session.Default("a")
	for link, word := range map[string]string{
		"colour=blue": "blue", "eye=1,2": "eye", "eye=1,2,x": "x", "up=NaN,0,0": "up", "target=1e300,0,0": "target",
		"floor=-1": "floor", "floor=much": "floor", "angle=4": "angle", "zoom=3": "zoom", "run=%zz": "run", "at=Inf,0,0": "at",
	} {
		w, err := session.Decode(link, v)
		if err == nil || !strings.Contains(err.Error(), word) {
			t.Errorf("%s: the error is %v", link, err)
		}
		if d := cmp.Diff(v, w); d != "" {
			t.Errorf("%s changed the view:\n%s", link, d)
		}
	}
}

// A change sets what it names and leaves the rest; a bad one changes nothing.
func TestChange(t *testing.T) {
	v := session.Default("a")
	v.At = &[3]float64{1, 2, 3}
	w, err := v.Change([]byte(`{"theme": "dark", "points": false}`))
	if err != nil || w.Theme != "dark" || w.Points || !w.Legend || w.At == nil {
		t.Errorf("got %+v, %v", w, err)
	}
	w, err = v.Change([]byte(`{"at": null}`))
	if err != nil || w.At != nil || v.At == nil {
		t.Errorf("at: null gives %v, %v", w.At, err)
	}
	if _, err = v.Change([]byte(`{"at": [7, 8, 9]}`)); err != nil || v.At[0] != 1 {
		t.Errorf("a change writes into the old view: %v, %v", v.At, err)
	}
	for _, bad := range []string{`{"theme": "pink"}`, `{"colour": 3}`, `{"speed": 3}`, `[]`, `{`, `{"at": [1e200, 0, 0]}`, `{} {}`} {
		if w, err := v.Change([]byte(bad)); err == nil || cmp.Diff(v, w) != "" {
			t.Errorf("%s: %+v, %v", bad, w, err)
		}
	}
}

// A run without cp is coloured by what it has.
func TestSuit(t *testing.T) {
	for _, c := range []struct {
		colour string
		p, cp  bool
		want   string
	}{
		{"cp", true, true, "cp"}, {"cp", true, false, "p"}, {"cp", false, false, "tau"}, {"p", false, true, "cp"},
		{"p", false, false, "tau"}, {"none", false, false, "none"}, {"tau", true, true, "tau"},
	} {
		v := session.Default("a")
		v.Colour = c.colour
		if got := v.Suit(c.p, c.cp).Colour; got != c.want {
			t.Errorf("%+v gives %s", c, got)
		}
	}
}

func TestRequest(t *testing.T) {
	r, err := session.ParseRequest(`{"version": 1, "id": 7, "what": "pick", "args": {"x": 1, "y": 2, "reach": 3}}`)
	if err != nil || r.ID != 7 || r.What != "pick" {
		t.Fatalf("got %+v, %v", r, err)
	}
	p, err := session.Read[session.Place](r)
	if err != nil || p != (session.Place{X: 1, Y: 2, Reach: 3}) {
		t.Errorf("got %+v, %v", p, err)
	}
	for text, word := range map[string]string{
		`{"version": 2, "id": 7, "what": "pick", "args": {}}`: "reload", `{"version": 1, "id": 7, "args": {}}`: "kind",
		`{"version": 1, "id": -7, "what": "a"}`: "-7", `{`: "read", `{"version": 1, "who": 1}`: "who", ``: "read",
	} {
		if _, err := session.ParseRequest(text); err == nil || !strings.Contains(err.Error(), word) {
			t.Errorf("%s: the error is %v", text, err)
		}
	}
	for _, args := range []string{`{"x": "a"}`, `{"z": 1}`, `{"reach": -1}`, `[]`} {
		if _, err := session.Read[session.Place](session.Request{What: "pick", Args: []byte(args)}); err == nil {
			t.Errorf("%s is taken for a place", args)
		}
	}
	for _, s := range []session.Size{{Width: 1e9, Height: 1, Ratio: 1}, {Width: 9, Height: 9}, {Width: math.NaN(), Ratio: 1}} {
		if s.Check() == nil {
			t.Errorf("%+v is taken for a size", s)
		}
	}
}

// Cancel ends the work on one request, or on all, and no other.
func TestJobs(t *testing.T) {
	var jobs session.Jobs
	a, endA := jobs.Begin(context.Background(), 1)
	b, endB := jobs.Begin(context.Background(), 2)
	jobs.Cancel(1)
	jobs.Cancel(9)
	if a.Err() == nil || b.Err() != nil {
		t.Errorf("cancelling 1: %v, %v", a.Err(), b.Err())
	}
	endA()
	c, endC := jobs.Begin(context.Background(), 3)
	jobs.Keep(2)
	if b.Err() != nil || c.Err() == nil {
		t.Errorf("keeping 2: %v, %v", b.Err(), c.Err())
	}
	endC()
	jobs.Cancel(0)
	if b.Err() == nil {
		t.Error("cancelling all leaves one")
	}
	endB()
	if c, end := jobs.Begin(context.Background(), 1); c.Err() != nil {
		t.Error("a new request is cancelled by an old cancel")
	} else {
		end()
	}
}

// Gestures keep the camera usable, and keep the place they turn about or zoom at where it is on the frame.
func TestGestures(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := render.Camera{From: r3.Vec{X: -5, Y: 1, Z: 2}, Up: r3.Vec{Z: 1}, Ortho: rapid.Bool().Draw(t, "ortho")}
		at := r3.Vec{X: rapid.Float64Range(-1, 1).Draw(t, "x"), Y: rapid.Float64Range(-1, 1).Draw(t, "y")}
		for range rapid.IntRange(1, 30).Draw(t, "count") {
			g := session.Gesture{
				Kind: rapid.SampledFrom([]string{"orbit", "pan", "zoom"}).Draw(t, "kind"),
				DX:   rapid.Float64Range(-300, 300).Draw(t, "dx"), DY: rapid.Float64Range(-300, 300).Draw(t, "dy"),
				Factor: rapid.Float64Range(0.1, 10).Draw(t, "factor"),
			}
			before := c.Lens(1000, 1000)
			x0, y0, z0 := before.Project(at)
			c = g.Move(c, 1000, at, 4)
			after := c.Lens(1000, 1000)
			x1, y1, z1 := after.Project(at)
			far := math.Max(math.Abs(x0), math.Abs(y0)) > 1e5 // nearly beside the eye
			if g.Kind != "pan" && z0 > 1e-3 && z1 > 1e-3 && !far && math.Hypot(x1-x0, y1-y0) > 1e-3 {
				t.Fatalf("%+v moves the place from %g, %g to %g, %g", g, x0, y0, x1, y1)
			}
			if d := c.At.Sub(c.From).Norm(); !(d >= 4e-5*0.999 && d <= 200*1.001) {
				t.Fatalf("%+v takes the eye to a distance of %g", g, d)
			}
		}
	})
}

// The middle of a run appears in the middle of the free part of the stage, whole.
func TestFit(t *testing.T) {
	f := exact.Cases()[0].Field(2000)
	s := session.Size{Width: 1200, Height: 700, Ratio: 1, Left: 350, Top: 50, Bottom: 80}
	c := s.Fit(render.NamedView("iso", f), f)
	lens := c.Lens(1200, 700)
	for _, p := range f.Points {
		if x, y, _ := lens.Project(p); x < 350 || x > 1200 || y < 50 || y > 620 {
			t.Fatalf("%v appears at %g, %g", p, x, y)
		}
	}
	mx, my := s.Middle()
	var mean r3.Vec
	for _, p := range f.Points {
		mean = mean.AddScaled(1/float64(len(f.Points)), p)
	}
	if x, y, _ := lens.Project(mean); math.Hypot(x-mx, y-my) > 12 {
		t.Errorf("the run's middle appears at %g, %g; the free middle is %g, %g", x, y, mx, my)
	}
}

// A flight to a place ends with the place in the middle of the frame, seen from outside.
func TestToward(t *testing.T) {
	f := exact.Cases()[0].Field(2000)
	c := render.NamedView("iso", f)
	for v := range f.Points {
		d := session.Toward(c, f.Points[v], f.Normals[v], f.Diagonal())
		lens := d.Lens(100, 100)
		if x, y, z := lens.Project(f.Points[v]); math.Hypot(x-50, y-50) > 1e-6 || z <= 0 {
			t.Fatalf("vertex %d appears at %g, %g, %g", v, x, y, z)
		}
		if d.From.Sub(d.At).Dot(f.Normals[v]) <= 0 && f.Normals[v].Dot(c.From.Sub(c.At).Unit()) > -0.9 {
			t.Fatalf("vertex %d is seen from inside", v)
		}
	}
}

// What is packed unpacks; no block of bytes makes the reader fail otherwise than by an error.
func TestPack(t *testing.T) {
	f := exact.Cases()[0].Field(2000)
	r := render.NewRenderer()
	for _, q := range []render.Quality{render.Moving, render.Still} {
		frame, err := r.Frame(context.Background(), &render.Scene{Field: f}, render.NamedView("iso", f), 101, 67, q)
		if err != nil {
			t.Fatal(err)
		}
		block := session.Pack(nil, &frame.Layers, frame.W, frame.H)
		p, err := session.Unpack(block)
		if err != nil {
			t.Fatal(err)
		}
		l := &frame.Layers
		if p.W != 101 || p.H != 67 || p.PW != l.W || p.PH != l.H || p.Factor != l.Factor || string(p.Overlay) != string(l.Overlay) {
			t.Fatalf("unpacked %d x %d, planes %d x %d", p.W, p.H, p.PW, p.PH)
		}
		for i := range l.Texture {
			if p.A[4*i] != l.Texture[i] || p.A[4*i+3] != l.Scalar[i] || p.B[4*i] != l.Shade[i] || p.B[4*i+1] != l.Mask[i] {
				t.Fatalf("pixel %d differs", i)
			}
		}
		for n := range len(block) {
			if _, err := session.Unpack(block[:n]); err == nil {
				t.Fatalf("%d of %d bytes are taken for a frame", n, len(block))
			}
		}
	}
}

func TestReplyIsOneLineWithItsVersion(t *testing.T) {
	text, err := session.Reply{ID: 3, Body: map[string]int{"a": 1}}.Text()
	if want := `{"version":1,"id":3,"body":{"a":1}}`; err != nil || text != want {
		t.Errorf("got %s, %v", text, err)
	}
}

func FuzzDecode(f *testing.F) {
	f.Add("run=a&eye=1,2,3&colour=tau")
	f.Add("at=1,2,3&floor=1e9&points=0")
	f.Fuzz(func(t *testing.T, link string) {
		v, err := session.Decode(link, session.Default("a"))
		if err != nil {
			return
		}
		if v.Check() != nil {
			t.Fatalf("%q decodes to a view that does not hold: %v", link, v.Check())
		}
		if w, err := session.Decode(v.Encode(), session.Default("b")); err != nil || w.Encode() != v.Encode() {
			t.Fatalf("%q does not survive: %v", link, err)
		}
	})
}

func FuzzMessages(f *testing.F) {
	f.Add(`{"version": 1, "id": 7, "what": "gesture", "args": {"kind": "zoom", "factor": 2}}`, []byte("1kps"))
	f.Fuzz(func(t *testing.T, text string, block []byte) {
		session.Unpack(block)
		r, err := session.ParseRequest(text)
		if err != nil {
			return
		}
		if g, err := session.Read[session.Gesture](r); err == nil {
			c := g.Move(render.Camera{From: r3.Vec{X: 1}, Up: r3.Vec{Z: 1}}, 100, r3.Vec{}, 1)
			if d := c.From.Norm(); d != d {
				t.Fatalf("%+v gives no camera", g)
			}
		}
		session.Read[session.Size](r)
		session.Read[session.Spot](r)
	})
}
