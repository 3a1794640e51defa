package render

import (
	"context"
	"math"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// count returns the number of pixels of the overlay that are close to the colour.
func count(fr *Frame, c rgb) int {
	n := 0
	for i := 0; i < len(fr.Layers.Overlay); i += 4 {
		o := fr.Layers.Overlay[i : i+4]
		near := true
		for k := range 3 {
			d := int(o[k]) - int(c[k])
			near = near && d > -30 && d < 30
		}
		if o[3] > 200 && near {
			n++
		}
	}
	return n
}

// From any side, the marks that are drawn are those whose surface faces the eye on a sphere; the others are hinted.
func TestMarksShowOnlyWhereVisible(t *testing.T) {
	f := strained(5000)
	r := NewRenderer()
	for _, p := range []r3.Vec{{X: 1}, {X: -1}, {Y: 1}, {Z: 1}, {X: 0.6, Y: -0.7, Z: 0.4}} {
		loc, _ := f.Nearest(p)
		for _, name := range ViewNames() {
			cam := NamedView(name, f)
			s := &Scene{Field: f, Bare: true, Flow: NoFlow, Marks: []Mark{{Loc: loc, Sense: SeparationSense}}}
			fr := shoot(t, r, s, cam, 300, 300, Still)
			// The angle between the surface and the view, with what perspective and the mesh leave to chance left out.
			facing := f.Position(loc).Dot(cam.From.Sub(f.Position(loc)).Unit())
			drawn := count(fr, Light.colors().separation)
			if facing > 0.15 && drawn < 35 || facing < -0.15 && drawn > 0 {
				t.Errorf("%v from %s (facing %.2f): %d pixels of the mark", p, name, facing, drawn)
			}
		}
	}
}

// Filled marks are separation, hollow ones attachment; every pair of shape and sense looks different from all others.
func TestMarksCanBeToldApart(t *testing.T) {
	type look struct {
		shape Shape
		sense Sense
	}
	pictures := map[look][]byte{}
	col := *Print.colors() // without the help of colour
	for shape := NodeMark; shape <= DegenerateMark; shape++ {
		for sense := NeutralSense; sense <= SeparationSense; sense++ {
			var c canvas
			pix := make([]byte, 4*24*24)
			c.reset(pix, 24, 24)
			c.mark(&Mark{Shape: shape, Sense: sense}, 12, 12, 1, &col, 1)
			pictures[look{shape, sense}] = pix
		}
	}
	for a, p := range pictures {
		for b, q := range pictures {
			if a == b {
				continue
			}
			differ := 0
			for i := 0; i < len(p); i += 4 {
				if d := int(p[i]) - int(q[i]); d > 100 || d < -100 {
					differ++
				}
			}
			if differ < 12 { // of some 110 pixels of a mark
				t.Errorf("%+v and %+v differ in %d pixels only", a, b, differ)
			}
		}
	}
}

func TestLabelsAvoidOneAnother(t *testing.T) {
	f := strained(5000)
	s := &Scene{Field: f, Flow: NoFlow}
	cam := NamedView("iso", f)
	loc, _ := f.Nearest(cam.From)
	middle := f.Position(loc)
	for i := range 12 { // a crowd
		sin, cos := r3.SinCos(float64(i))
		l, _ := f.Nearest(middle.Add(r3.Vec{X: 0.12 * cos, Y: 0.12 * sin, Z: 0.05 * sin}))
		s.Marks = append(s.Marks, Mark{Loc: l, Label: "N1?"})
	}
	r := NewRenderer()
	shoot(t, r, s, cam, 400, 400, Still)
	// The labels again, by hand, on a canvas that counts.
	var c canvas
	c.reset(make([]byte, 4*400*400), 400, 400)
	labels := r.marks(s, &c, r.sight(1), Light.colors(), 1)
	if len(labels) != 12 {
		t.Fatalf("%d labels, want 12", len(labels))
	}
	taken := c.placeLabels(labels, nil, r.small, Light.colors(), 1)
	placed := taken[len(labels):]
	if len(placed) < 6 {
		t.Errorf("only %d of 12 labels found a place", len(placed))
	}
	for i, a := range placed {
		for j, b := range taken {
			if j != i+len(labels) && a.x0+2 < b.x1-2 && b.x0+2 < a.x1-2 && a.y0+2 < b.y1-2 && b.y0+2 < a.y1-2 {
				t.Errorf("label %d covers %d: %v, %v", i, j, a, b)
			}
		}
	}
}

// around returns n places on a circle around the sphere, the last of them the first again.
func around(f *field.Field, n int) []field.Loc {
	var out []field.Loc
	for i := range n {
		sin, cos := r3.SinCos(2 * math.Pi * float64(i) / float64(n-1))
		l, _ := f.Nearest(r3.Vec{X: cos, Y: sin, Z: 0.1 * sin})
		out = append(out, l)
	}
	return out
}

// A line around the sphere shows on the front only; separation is one unbroken piece there, attachment several.
func TestLinesAreToldApartByForm(t *testing.T) {
	f := strained(5000)
	equator := around(f, 721)
	cam := NamedView("iso", f)
	r := NewRenderer()
	pieces := map[Sense]int{}
	for _, sense := range []Sense{AttachmentSense, SeparationSense} {
		s := &Scene{Field: f, Bare: true, Flow: NoFlow, Theme: Print, Lines: []Line{{Locs: equator, Sense: sense}}}
		fr := shoot(t, r, s, cam, 400, 400, Still)
		pieces[sense] = islands(fr, rgb{0, 0, 0})
	}
	if pieces[SeparationSense] != 1 || pieces[AttachmentSense] < 8 {
		t.Errorf("pieces: separation %d, attachment %d", pieces[SeparationSense], pieces[AttachmentSense])
	}
}

// The form of a line shows along it, and in the key: bars and dots add ink of its colour, rings have light middles, and a line of
// neither kind has no form. A separatrix without a kind on the whole is drawn by its reaches.
func TestFormsOfLines(t *testing.T) {
	f := strained(5000)
	arc := around(f, 200)
	cam := NamedView("iso", f)
	r := NewRenderer()
	dark := map[[2]uint8]int{}
	for _, sense := range []Sense{SeparationSense, NeutralSense} {
		for form := ClosedForm; form <= CycleForm; form++ {
			s := &Scene{Field: f, Bare: true, Flow: NoFlow, Theme: Print, Lines: []Line{{Locs: arc, Sense: sense, Form: form}}}
			fr := shoot(t, r, s, cam, 400, 400, Still)
			n := 0
			for o := fr.Layers.Overlay; len(o) > 0; o = o[4:] {
				if o[3] > 200 && o[0] < 120 {
					n++
				}
			}
			dark[[2]uint8{uint8(sense), uint8(form)}] = n
		}
	}
	of := func(sense Sense, form Form) int { return dark[[2]uint8{uint8(sense), uint8(form)}] }
	plain := of(SeparationSense, ClosedForm)
	for _, form := range []Form{HornForm, OpenForm} {
		if of(SeparationSense, form) < plain+20 {
			t.Errorf("form %d: %d dark pixels, plain line %d", form, of(SeparationSense, form), plain)
		}
	}
	if c := of(SeparationSense, CycleForm); c == plain || c == of(SeparationSense, OpenForm) {
		t.Errorf("closed orbit: %d dark pixels, plain line %d", c, plain)
	}
	if of(NeutralSense, HornForm) != of(NeutralSense, ClosedForm) {
		t.Errorf("neutral line with a form: %d dark pixels, without %d", of(NeutralSense, HornForm), of(NeutralSense, ClosedForm))
	}
	l := topology.Line{Locs: arc, Type: topology.Horn, Reaches: []topology.Reach{{First: 0, Last: 50},
		{First: 50, Last: 150, Kind: topology.SeparationLine}, {First: 150, Last: 199, Kind: topology.AttachmentLine}}}
	if cut := LinesOf(&l); len(cut) != 3 || cut[1].Sense != SeparationSense || cut[1].Form != HornForm || len(cut[1].Locs) != 101 ||
		cut[2].Sense != AttachmentSense {
		t.Errorf("a line of neither kind in three reaches is drawn as %d", len(cut))
	}
	l.Kind = topology.SeparationLine
	if whole := LinesOf(&l); len(whole) != 1 || whole[0].Sense != SeparationSense || len(whole[0].Locs) != len(arc) {
		t.Errorf("a separation line is drawn as %d", len(whole))
	}
}

// islands counts the connected areas of a colour in the overlay.
func islands(fr *Frame, c rgb) int {
	w, h := fr.W, fr.H
	in := make([]bool, w*h)
	for i := range in {
		o := fr.Layers.Overlay[4*i:]
		in[i] = o[3] > 200 && int(o[0]) < int(c[0])+90
	}
	n := 0
	var stack []int
	for i := range in {
		if !in[i] {
			continue
		}
		size := 0
		stack = append(stack[:0], i)
		in[i] = false
		for len(stack) > 0 {
			k := stack[len(stack)-1]
			stack = stack[:len(stack)-1]
			size++
			for dy := -1; dy <= 1; dy++ {
				for dx := -1; dx <= 1; dx++ {
					x, y := k%w+dx, k/w+dy
					if x >= 0 && y >= 0 && x < w && y < h && in[y*w+x] {
						in[y*w+x] = false
						stack = append(stack, y*w+x)
					}
				}
			}
		}
		if size >= 4 {
			n++
		}
	}
	return n
}

// Evenly spaced streamlines leave no wide gap and keep their distance.
func TestStreamlinesAreEven(t *testing.T) {
	f := strained(3000)
	const apart = 0.12
	lines, err := Streamlines(context.Background(), f, apart)
	if err != nil || len(lines) < 40 {
		t.Fatalf("%d lines, %v", len(lines), err)
	}
	type point struct {
		at   r3.Vec
		line int
	}
	var points []point
	for i, line := range lines {
		for k, l := range line {
			p := f.Position(l)
			points = append(points, point{p, i})
			if k > 0 { // along tau
				step := p.Sub(f.Position(line[k-1]))
				if step.Norm() > 1e-3 && step.Dot(f.At(l).Tau3) < 0 {
					t.Fatalf("line %d runs against tau", i)
				}
			}
		}
	}
	tooNear := 0
	for _, p := range points {
		for _, q := range points {
			// Between its recorded points, a sixteenth of the distance apart at most, a line may come a little nearer.
			if p.line < q.line && p.at.Sub(q.at).Norm() < 0.5*apart-apart/8 {
				tooNear++
			}
		}
	}
	if tooNear > 0 {
		t.Errorf("%d pairs of points are too near", tooNear)
	}
	gaps, places := 0, 0
	for tri := 0; tri < len(f.Tris); tri += 7 {
		p := f.Corner(int32(tri)).At([3]float64{1. / 3, 1. / 3, 1. / 3})
		nearest := math.Inf(1)
		for _, q := range points {
			nearest = min(nearest, q.at.Sub(p).Norm())
		}
		places++
		if nearest > 1.3*apart {
			gaps++
		}
	}
	if gaps > places/25 {
		t.Errorf("%d of %d places are far from any line", gaps, places)
	}
	again, _ := Streamlines(context.Background(), f, apart)
	if len(again) != len(lines) {
		t.Errorf("%d lines, then %d", len(lines), len(again))
	}
}

// A comet grows towards its head: its direction shows.
func TestCometsShowTheirDirection(t *testing.T) {
	var c canvas
	c.reset(make([]byte, 4*100*20), 100, 20)
	var curve []vertex
	for x := 10.0; x <= 90; x += 5 {
		curve = append(curve, vertex{x, 10, 1, 1})
	}
	c.comet(curve, Light.colors(), 1)
	width := func(x int) (sum int) {
		for y := range 20 {
			sum += int(c.pix[4*(y*100+x)+3])
		}
		return sum
	}
	if tail, middle, head := width(15), width(50), width(85); !(tail < middle && middle < head) {
		t.Errorf("widths %d, %d, %d", tail, middle, head)
	}
}

// Isobars lie where the value is round: on a sphere with p = z seen from the side, at heights known in advance.
func TestIsobarsLieAtTheirValues(t *testing.T) {
	f := mustField(exact.Sphere(1, 20000))
	s := &Scene{Field: f, Bare: true, Flow: NoFlow, Isobars: 4, Quantity: Pressure,
		Range: Range{Span: Fixed, Min: -1, Max: 1}}
	cam := NamedView("front", f)
	cam.Ortho = true
	cam = cam.Fit(f, 1)
	r := NewRenderer()
	fr := shoot(t, r, s, cam, 400, 400, Still)
	lens := r.Lens()
	dark := func(z float64) bool {
		_, y, _ := lens.Project(r3.Vec{Z: z})
		x, _, _ := lens.Project(r3.Vec{Y: 0.35})
		best := uint8(0)
		for dy := -1; dy <= 1; dy++ {
			best = max(best, fr.Layers.Overlay[4*((int(y)+dy)*fr.W+int(x))+3])
		}
		return best > 60
	}
	for _, z := range []float64{-0.5, 0, 0.5} {
		if !dark(z) {
			t.Errorf("no line at p = %g", z)
		}
	}
	for _, z := range []float64{-0.25, 0.25, 0.7} {
		if dark(z) {
			t.Errorf("a line at p = %g", z)
		}
	}
}

func TestSceneOfASkeleton(t *testing.T) {
	f := strained(5000)
	sk, err := topology.Find(context.Background(), f, topology.Options{Lines: true})
	if err != nil {
		t.Fatal(err)
	}
	s := SceneOf(f, sk)
	if len(s.Marks) != len(sk.Points) || len(s.Lines) != len(sk.Lines) || len(s.Marks) == 0 {
		t.Fatalf("%d marks of %d points, %d lines of %d", len(s.Marks), len(sk.Points), len(s.Lines), len(sk.Lines))
	}
	shapes := map[topology.Type]Shape{topology.Node: NodeMark, topology.Focus: FocusMark, topology.Saddle: SaddleMark}
	for i, p := range sk.Points {
		m := s.Marks[i]
		if p.Type != topology.Degenerate && m.Shape != shapes[p.Type] || m.Weak == p.Resolved ||
			(p.Sense == topology.Separation) != (m.Sense == SeparationSense) {
			t.Errorf("%s became %+v", p.ID, m)
		}
	}
	if got := SceneOf(f, nil); got.Field != f || got.Marks != nil {
		t.Errorf("without a skeleton: %+v", got)
	}
}
