package render

import (
	"context"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
	"shearprint/field/trace"
)

// Streamlines returns limiting streamlines that cover the surface evenly, about apart from one another [length], for
// Scene.Streamlines. A line is given up where it comes nearer than half of that to another one, and new lines start
// beside those that exist (Jobard and Lefer, Creating evenly-spaced streamlines of arbitrary density, 1997, carried
// from the plane to the surface: distances are those in space between places whose normals agree). The error is the
// context's.
func Streamlines(ctx context.Context, f *field.Field, apart float64) ([][]field.Loc, error) {
	if !(apart > 0) || len(f.Tris) == 0 {
		return nil, ctx.Err()
	}
	// A grid that the surface's size allows: at least a four-hundredth of the diagonal.
	apart = max(apart, f.Diagonal()/400)
	e := evenly{f: f, t: trace.New(f, nil, nil), apart: apart, cells: map[[3]int32][]settled{}}
	// Every part and region is reached: candidates are the triangles themselves, in strides that spread them.
	n := len(f.Tris)
	stride := coprime(n)
	for i := range n {
		if ctx.Err() != nil {
			return nil, ctx.Err()
		}
		t := int32(i * stride % n)
		e.seed(ctx, field.Loc{Tri: t, Bary: [3]float64{1. / 3, 1. / 3, 1. / 3}})
		for len(e.beside) > 0 && ctx.Err() == nil {
			p := e.beside[0]
			e.beside = e.beside[1:]
			if loc, d := f.Nearest(p); d < apart/4 {
				e.seed(ctx, loc)
			}
		}
	}
	return e.lines, ctx.Err()
}

// coprime returns a number near 0.618 n without a common divisor with n.
func coprime(n int) int {
	gcd := func(a, b int) int {
		for b != 0 {
			a, b = b, a%b
		}
		return a
	}
	for k := max(n*618/1000, 1); ; k++ {
		if gcd(k, n) == 1 {
			return k % max(n, 1)
		}
	}
}

// evenly holds the lines that have been laid.
type evenly struct {
	f      *field.Field
	t      *trace.Tracer
	apart  float64
	cells  map[[3]int32][]settled // of size apart
	lines  [][]field.Loc
	beside []r3.Vec // where new lines may start
}

// settled is a point of a line.
type settled struct {
	at, normal r3.Vec
}

func (e *evenly) cell(p r3.Vec) [3]int32 {
	at := func(x float64) int32 { return int32(math.Floor(x / e.apart)) }
	return [3]int32{at(p.X), at(p.Y), at(p.Z)}
}

// free tells whether no other line is nearer to the place than the distance.
func (e *evenly) free(p, normal r3.Vec, distance float64) bool {
	c := e.cell(p)
	for dx := int32(-1); dx <= 1; dx++ {
		for dy := int32(-1); dy <= 1; dy++ {
			for dz := int32(-1); dz <= 1; dz++ {
				for _, s := range e.cells[[3]int32{c[0] + dx, c[1] + dy, c[2] + dz}] {
					if s.at.Sub(p).Norm() < distance && s.normal.Dot(normal) > 0 {
						return false
					}
				}
			}
		}
	}
	return true
}

// The lengths of a line, in distances between lines: shorter ones are clutter, longer ones would cover the surface with
// few lines that tell nothing of their direction.
const (
	shortest = 1.5
	longest  = 9
)

// seed lays the streamline through the place, as far as it keeps its distance from the others.
func (e *evenly) seed(ctx context.Context, loc field.Loc) {
	p, n := e.f.Position(loc), e.f.Normal(loc)
	if !e.free(p, n, e.apart) {
		return
	}
	opt := trace.Options{MaxLength: longest / 2 * e.apart, Tolerance: 1e-4}
	both := e.t.Through(ctx, loc, opt)
	from, to := both.Start, both.Start
	near := func(i int) bool {
		return !e.free(e.f.Position(both.Locs[i]), e.f.Normal(both.Locs[i]), e.apart/2)
	}
	for from > 0 && !near(from-1) {
		from--
	}
	for to+1 < len(both.Locs) && !near(to+1) {
		to++
	}
	if to == from || both.S[to]-both.S[from] < shortest*e.apart {
		return
	}
	line := both.Locs[from : to+1]
	e.lines = append(e.lines, line)
	last := math.Inf(-1)
	for i, l := range line {
		s := both.S[from+i]
		if s-last < e.apart/8 && i+1 < len(line) {
			continue
		}
		last = s
		at, normal := e.f.Position(l), e.f.Normal(l)
		c := e.cell(at)
		e.cells[c] = append(e.cells[c], settled{at, normal})
		side := normal.Cross(e.f.At(l).Tau3).Unit().Scale(e.apart * 1.01)
		e.beside = append(e.beside, at.Add(side), at.Sub(side))
	}
}
