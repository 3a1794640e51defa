package topology

import (
	"math"
	"strings"

	"shearprint/field"
	"shearprint/field/r3"
)

// placer finds place and kind of critical points. One belongs to one goroutine.
type placer struct {
	c *count
	around
	normals [][4]float64
}

func (c *count) placer(normals [][4]float64) *placer {
	return &placer{c: c, around: *newAround(c.f), normals: normals}
}

// Why a point could not be placed by a fit.
const (
	noteCrease  = "on a crease: place and type from one triangle"
	noteFew     = "too few vertices around for a fit: place and type from one triangle"
	noteFar     = "the fit has no zero nearby: place and type from one triangle"
	noteIndex   = "the fit contradicts the index: place and type from one triangle"
	noteLinear  = "neither the fit nor the triangle agrees with the index"
	noteFlips   = "not resolved by this mesh: the fit and the triangle give different types"
	noteClose   = "not resolved by this mesh: another point is nearer than three edges"
	noteRegion  = "tau is exactly zero at several vertices: one patch with one index"
	noteTouch   = "tau is exactly zero here but turns around it as if it were not"
	noteCentre  = "a centre: the divergence of tau is below the error"
	noteMany    = "more than a linear zero: the index says so"
	noteKnot    = "a zero of second order, or several points nearer than one edge: the slopes vanish together with tau"
	noteNoSlope = "tau does not vary around the point"
)

// base is the tangent plane in which a point is fitted.
type base struct {
	origin, n r3.Vec
	axes      [2]r3.Vec
	length    float64 // unit of length of the fit
	tau       float64 // unit of tau of the fit
}

// tangentFrame returns two unit vectors perpendicular to n and to one another: the first along x, or along y where n
// runs along x.
func tangentFrame(n r3.Vec) [2]r3.Vec {
	const steep = 0.9 // cosine of the angle to the x axis above which y serves better
	x := r3.Vec{X: 1}
	if math.Abs(n.X) > steep {
		x = r3.Vec{Y: 1}
	}
	e := x.Reject(n).Unit()
	return [2]r3.Vec{e, n.Cross(e)}
}

// place returns the critical point of a seed, without id.
func (p *placer) place(s *seed) Point {
	f := p.c.f
	loc := p.start(s)
	pt := Point{
		Index: s.index, Half: s.half, Part: f.Part[loc.Tri], Loc: loc, Resolved: true, Patch: s.tris,
		Robustness: p.c.level(s.robust), group: s.group, Size: p.meanEdge(loc.Tri),
	}
	why := p.byFit(s, &pt)
	if why != "" {
		pt.Resolved, pt.Note = false, why
		p.byTriangle(s, &pt)
	}
	pt.Position = f.Position(pt.Loc)
	p.special(s, &pt)
	return pt
}

// special marks what the linear part cannot decide: it is degenerate, whatever the fit says.
func (p *placer) special(s *seed, pt *Point) {
	note := ""
	switch {
	case len(s.zeros) > 1:
		note = noteRegion
	case s.index == 0:
		note = noteTouch
	case s.knot != nil:
		note = noteKnot
	case s.index != 1 && s.index != -1:
		note = noteMany
	case pt.Type == Degenerate && pt.Resolved:
		pt.Note = noteCentre
		return
	default:
		return
	}
	// The index is certain; a fit that fails here is no news.
	pt.Type, pt.Sense, pt.Confidence, pt.Resolved, pt.Note = Degenerate, Neutral, 1, true, note
}

// start returns the place from which the fit is made.
func (p *placer) start(s *seed) field.Loc {
	f := p.c.f
	switch {
	case s.knot != nil:
		return *s.knot
	case len(s.zeros) > 0:
		return p.cornerOf(s, p.middle(s.zeros))
	case s.half:
		return p.alongEdge(s.rimEdge)
	case len(s.tris) == 1:
		z, _ := p.linear(s.tris[0])
		return field.Loc{Tri: s.tris[0], Bary: z}
	}
	// Triangles merged across edges along which tau turns round: the edge with the least |tau|.
	best, least := int32(-1), math.Inf(1)
	for _, t := range s.tris {
		for h := 3 * t; h < 3*t+3; h++ {
			if math.Abs(p.c.turn(h)) <= math.Pi-antiparallel {
				continue
			}
			if x := p.c.least(h, f.MaxTau); x < least {
				best, least = h, x
			}
		}
	}
	if best < 0 {
		return field.Loc{Tri: s.tris[0], Bary: [3]float64{1. / 3, 1. / 3, 1. / 3}}
	}
	return p.alongEdge(best)
}

// alongEdge returns the place on half-edge h where tau, turning round, passes zero.
func (p *placer) alongEdge(h int32) field.Loc {
	f := p.c.f
	a, b := f.Size(f.Tail(h)), f.Size(f.Tip(h))
	x := 0.5
	if a+b > 0 {
		x = a / (a + b)
	}
	loc := field.Loc{Tri: h / 3}
	loc.Bary[h%3] = 1 - x
	loc.Bary[field.Next(h)%3] = x
	return loc
}

// middle returns the zero vertex nearest to the mean of all.
func (p *placer) middle(zeros []int32) int32 {
	f := p.c.f
	var sum r3.Vec
	for _, v := range zeros {
		sum = sum.Add(f.Points[v].Scale(1 / float64(len(zeros))))
	}
	best, least := zeros[0], math.Inf(1)
	for _, v := range zeros {
		if d := f.Points[v].Sub(sum).Norm(); d < least {
			best, least = v, d
		}
	}
	return best
}

func (p *placer) cornerOf(s *seed, v int32) field.Loc {
	for _, t := range s.tris {
		for k, w := range p.c.f.Tris[t] {
			if w == v {
				loc := field.Loc{Tri: t}
				loc.Bary[k] = 1
				return loc
			}
		}
	}
	return field.Loc{Tri: s.tris[0], Bary: [3]float64{1. / 3, 1. / 3, 1. / 3}}
}

// addNote appends a remark.
func addNote(pt *Point, note string) {
	if !strings.Contains(pt.Note, note) {
		if pt.Note != "" {
			pt.Note += "; "
		}
		pt.Note += note
	}
}
