package trace

import (
	"context"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// Stop is a critical point that catches curves: one that comes within Radius of the place, in space, ends there.
type Stop struct {
	ID     int
	Loc    field.Loc
	Radius float64
}

// Tracer traces curves on one field. It may be used by several goroutines at once.
type Tracer struct {
	f       *field.Field
	stops   []Stop
	at      []r3.Vec          // position of each stop
	around  map[int32][]int32 // numbers of the stops that a curve may meet in a triangle
	swings  map[int32]Swing
	maximal float64 // default length limit
}

// lengthLimit is the default length limit, as a multiple of the diagonal of the box around the surface: a streamline
// that crosses a body takes one or two, one that winds around it on its way down a few more.
const lengthLimit = 20

// New returns a tracer. Stops may be nil, and so may swings: the triangles, by number, in which interpolated vectors do not
// tell how tau turns.
func New(f *field.Field, stops []Stop, swings map[int32]Swing) *Tracer {
	t := &Tracer{f: f, stops: stops, swings: swings, around: map[int32][]int32{}, maximal: lengthLimit * f.Diagonal()}
	for i, s := range stops {
		t.at = append(t.at, f.Position(s.Loc))
		t.register(int32(i), s)
	}
	return t
}

// maxStopTriangles bounds the triangles that one stop is looked for in: a disc much larger than the mesh's spacing is
// a mistake, not a critical point.
const maxStopTriangles = 4096

// register notes the stop in all triangles that its disc meets, from its own outward.
func (t *Tracer) register(i int32, s Stop) {
	seen := map[int32]bool{s.Loc.Tri: true}
	queue := []int32{s.Loc.Tri}
	for n := 0; n < len(queue) && n < maxStopTriangles; n++ {
		tri := queue[n]
		t.around[tri] = append(t.around[tri], i)
		for h := 3 * tri; h < 3*tri+3; h++ {
			g := t.f.Twin[h]
			if g < 0 || seen[g/3] {
				continue
			}
			c := t.f.Corner(g / 3)
			if c.At(c.Nearest(t.at[i])).Sub(t.at[i]).Norm() <= s.Radius {
				seen[g/3] = true
				queue = append(queue, g/3)
			}
		}
	}
}

// Options say how to trace; the zero value traces along tau.
type Options struct {
	Backward  bool    // against tau
	MaxLength float64 // arc length at which to give up; 0 for 20 diagonals of the surface's box
	// Tolerance is the error allowed to a step, as a share of the triangle's longest edge; 0 for 1e-6.
	Tolerance float64
}

const defaultTolerance = 1e-6

// Trace follows tau from a place until the curve ends.
func (t *Tracer) Trace(ctx context.Context, from field.Loc, opt Options) Path {
	w := walk{t: t, f: t.f, cell: cell{sign: 1}, limit: opt.MaxLength, tolerance: opt.Tolerance, last: map[int32]visit{}}
	w.path = Path{Stop: -1, Loop: -1}
	if opt.Backward {
		w.sign = -1
	}
	if w.limit <= 0 {
		w.limit = t.maximal
	}
	if w.tolerance <= 0 {
		w.tolerance = defaultTolerance
	}
	w.run(ctx, from)
	return w.path
}

// Through traces both ways from a place. Both directions use the same options; Backward is of no account.
func (t *Tracer) Through(ctx context.Context, from field.Loc, opt Options) Both {
	opt.Backward = true
	back := t.Trace(ctx, from, opt)
	opt.Backward = false
	return join(back, t.Trace(ctx, from, opt))
}

// cell is the triangle that a curve is in, in its flat frame.
type cell struct {
	tri    int32
	corner [3]r3.Vec2
	tau    [3]r3.Vec2
	twice  float64 // twice the area
	long   float64 // longest edge
	still  float64 // |tau| below which the flow has come to rest
	swings bool    // the direction is that of swing, and tau holds for the corners only
	swing  Swing
	size   [3]float64 // |tau| at the corners, of a cell that swings
	sign   float64    // +1 along tau, -1 against it
}

// restShare is the share of a triangle's largest |tau| below which a curve has arrived at the triangle's zero: it is then
// within this share of an edge of it.
const restShare = 1e-7

func (w *walk) enter(tri int32) {
	c := &w.cell
	c.tri = tri
	c.corner = w.f.Flat(tri)
	c.tau = w.f.CornerTau(tri)
	for k := range c.tau {
		c.tau[k] = c.tau[k].Scale(w.sign)
	}
	c.twice = c.corner[1].Sub(c.corner[0]).Cross(c.corner[2].Sub(c.corner[0]))
	c.long = 0
	c.still = 0
	for k := range 3 {
		c.still = math.Max(c.still, restShare*c.tau[k].Norm())
		c.long = math.Max(c.long, c.corner[(k+1)%3].Sub(c.corner[k]).Norm())
	}
	c.still = math.Max(c.still, field.ZeroFraction*w.f.MaxTau)
	if c.swing, c.swings = w.t.swings[tri]; c.swings {
		c.still = 0 // it has a direction everywhere
		for k := range c.size {
			c.size[k] = c.tau[k].Norm()
		}
	}
}

// bary returns the barycentric weights of a point of the frame; a negative one lies beyond the opposite edge.
func (c *cell) bary(p r3.Vec2) [3]float64 {
	var b [3]float64
	for k := range 3 {
		a := c.corner[(k+1)%3]
		b[k] = c.corner[(k+2)%3].Sub(a).Cross(p.Sub(a)) / c.twice
	}
	b[0] = 1 - b[1] - b[2]
	return b
}

func (c *cell) point(b [3]float64) r3.Vec2 {
	return c.corner[0].Scale(b[0]).AddScaled(b[1], c.corner[1]).AddScaled(b[2], c.corner[2])
}

// flow returns tau at p, also beyond the edges, where the linear field goes on; in a cell that swings, its direction.
func (c *cell) flow(p r3.Vec2) r3.Vec2 {
	b := c.bary(p)
	if c.swings {
		return r3.Polar(c.sign, c.swing.at(b, c.size))
	}
	return c.tau[0].Scale(b[0]).AddScaled(b[1], c.tau[1]).AddScaled(b[2], c.tau[2])
}

// inward returns the unit normal of edge k that points into the triangle.
func (c *cell) inward(k int32) r3.Vec2 {
	return c.corner[(k+1)%3].Sub(c.corner[k]).Unit().Left()
}
