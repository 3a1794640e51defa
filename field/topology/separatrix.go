package topology

import (
	"context"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
	"shearprint/field/trace"
)

// start is where a separatrix leaves its saddle.
type start struct {
	point    int // number of the saddle
	loc      field.Loc
	backward bool        // the separatrix runs into the saddle
	path     *trace.Path // the separatrix itself, where it is known without tracing
}

const (
	// startShare is the radius of the circle around a saddle on which its separatrices start, as a share of the edges around
	// it: outside the triangle that holds the zero of the linear interpolation, which may be off the fitted place, and close
	// enough for the linear part to rule.
	startShare = 1
	// sectors is the number of directions in which the surroundings of a degenerate point are looked at.
	sectors = 256
)

// mostSeparatrices bounds the separatrices that are traced: those of two thousand saddles, more than any flow has that
// somebody could read, and as many as noise may cost.
const mostSeparatrices = 8000

// addSeparatrices traces the separatrices of all saddles: those of unstable directions along the flow, those of stable ones
// against it.
func (b *builder) addSeparatrices(ctx context.Context) error {
	var starts []start
	halves := b.findHalves()
	for i := range b.s.Points {
		p := &b.s.Points[i]
		switch {
		case p.Type == Saddle && p.Half:
			starts = append(starts, b.atHalfSaddle(i, halves)...)
		case p.Type == Saddle:
			starts = append(starts, b.byEigenvectors(p, i)...)
		case p.Index < 0:
			starts = append(starts, b.bySectors(p, i)...)
		}
	}
	if left := len(starts) - mostSeparatrices; left > 0 {
		starts = starts[:mostSeparatrices] // saddles come in the order of falling robustness
		b.s.tell(field.Doubtful, "separatrices-left-out", left, "", "%d separatrices of the weakest saddles were not traced: so "+
			"many points are noise; give a noise floor", left)
	}
	lines, paths := make([]Line, len(starts)), make([]trace.Path, len(starts))
	if err := inBlocks(ctx, len(starts), 1, func(from, to int) {
		for i := from; i < to; i++ {
			if starts[i].path != nil {
				paths[i] = *starts[i].path
				continue
			}
			paths[i] = b.t.Trace(ctx, starts[i].loc, trace.Options{Backward: starts[i].backward})
		}
	}); err != nil {
		return err
	}
	for i := range lines {
		lines[i] = b.separatrix(paths[i], starts[i])
	}
	if err := ctx.Err(); err != nil {
		return err
	}
	for i := range lines {
		if !b.twice(lines[:i], &lines[i]) {
			b.s.Lines = append(b.s.Lines, lines[i])
		}
	}
	for i, p := range paths {
		if p.End == trace.Cycle {
			b.winding = append(b.winding, winding{p, starts[i].backward})
		}
	}
	return nil
}

// twiceEdges is the distance in mean edges within which the middles of two lines from saddle to saddle are one.
const twiceEdges = 2

// twice tells whether a line from saddle to saddle is among the lines already: it is traced from both its ends.
func (b *builder) twice(lines []Line, l *Line) bool {
	if l.From < 0 || l.To < 0 || b.s.Points[l.From].Index >= 0 || b.s.Points[l.To].Index >= 0 {
		return false
	}
	for i := range lines {
		k := &lines[i]
		if k.From == l.From && k.To == l.To &&
			b.distance(k.Locs, b.f.Position(l.Locs[len(l.Locs)/2])) < float64(twiceEdges*b.edge) {
			return true
		}
	}
	return false
}

// separatrix makes a line of the path traced from one start.
func (b *builder) separatrix(path trace.Path, st start) Line {
	path.Locs = append([]field.Loc{b.s.Points[st.point].Loc}, path.Locs...)
	other := b.arrival(&path)
	if other >= 0 && (path.End != trace.Captured || b.s.Points[other].Type != Saddle || st.path != nil) {
		path.Locs = append(path.Locs, b.s.Points[other].Loc)
	}
	l := Line{From: st.point, To: other, Locs: ahead(&path, st.backward)}
	if st.backward {
		l.From, l.To = other, st.point
	}
	l.Length = lengthOf(b.f, l.Locs)
	l.Type = Closed
	if other >= 0 && b.s.Points[other].Type == Focus {
		l.Type = Horn
	}
	b.explain(&l, b.setKind(&l), st, b.endWords(&path))
	return l
}

// byEigenvectors starts at both sides of both eigenvectors of the fitted Jacobian: the unstable ones first.
func (b *builder) byEigenvectors(p *Point, i int) []start {
	var out []start
	for k, e := range p.Eigenvalues {
		if e[1] != 0 {
			return b.bySectors(p, i)
		}
		v := eigenvector(p.Jacobian, e[0])
		for _, sign := range [2]float64{1, -1} {
			d := p.Frame[0].Scale(sign*v.X).AddScaled(sign*v.Y, p.Frame[1])
			loc, _ := straight(b.f.Mesh, p.Loc, d, float64(startShare*p.Size))
			out = append(out, start{point: i, loc: loc, backward: k == 1})
		}
	}
	return out
}

// eigenvector returns the unit eigenvector of j to a real eigenvalue, in the right half plane.
func eigenvector(j [2][2]float64, value float64) r3.Vec2 {
	// Both rows of j - value are perpendicular to it; the longer one is the more accurate.
	a := r3.Vec2{X: j[0][0] - value, Y: j[0][1]}
	if c := (r3.Vec2{X: j[1][0], Y: j[1][1] - value}); c.Norm() > a.Norm() {
		a = c
	}
	v := a.Left().Unit()
	if v.X < 0 || v.X == 0 && v.Y < 0 {
		v = v.Scale(-1)
	}
	return v
}

// bySectors looks around half saddles and degenerate points of negative index on a circle: a separatrix leaves where tau
// is radial and its neighbours turn towards it. Directions that leave the surface are passed over.
func (b *builder) bySectors(p *Point, i int) []start {
	radius := p.Size * startShare
	for _, t := range p.Patch {
		for _, c := range b.f.Corner(t) {
			radius = math.Max(radius, c.Sub(p.Position).Norm()*patchClear)
		}
	}
	var out []start
	var before, first sample
	for n := range sectors + 1 {
		s := first
		if n < sectors {
			s = b.sampleAt(p, radius, 2*math.Pi*float64(n)/sectors)
		}
		if n == 0 {
			first = s
		} else if before.ok && s.ok && (before.around > 0) != (s.around > 0) {
			// Radial outflow that collects (the tangential part falls through zero), or inflow that parts.
			outward := before.radial+s.radial > 0
			if outward == (before.around > 0) {
				nearest := s
				if math.Abs(before.around) < math.Abs(s.around) {
					nearest = before
				}
				out = append(out, start{point: i, loc: nearest.loc, backward: !outward})
			}
		}
		before = s
	}
	return out
}

// patchClear is how far outside a patch its surroundings are looked at, as a multiple of its radius.
const patchClear = 1.2

// sample is tau on the circle around a point: its parts away from the point and around it.
type sample struct {
	loc            field.Loc
	radial, around float64
	ok             bool
}

func (b *builder) sampleAt(p *Point, radius, angle float64) sample {
	sin, cos := r3.SinCos(angle)
	d := p.Frame[0].Scale(cos).AddScaled(sin, p.Frame[1])
	loc, ok := straight(b.f.Mesh, p.Loc, d, radius)
	tau := b.f.At(loc).Tau3
	out := b.f.Position(loc).Sub(p.Position).Reject(p.Normal).Unit()
	return sample{loc, tau.Dot(out), tau.Dot(p.Normal.Cross(out)), ok}
}
