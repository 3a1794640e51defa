package trace

import (
	"context"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// walk is one curve while it is traced.
type walk struct {
	t         *Tracer
	f         *field.Field
	limit     float64
	tolerance float64

	cell
	p    r3.Vec2 // where the curve is, in the cell's frame
	s    float64 // arc length so far
	step float64 // the step to try next, as a share of the cell's longest edge
	path Path
	done bool

	last  map[int32]visit // the last crossings of each half-edge; for looking up only
	hops  int             // edges crossed
	steps int
	idle  int // edges crossed since the curve last made way
	idleS float64
}

const (
	// maxHops bounds the edges that one curve may cross. A curve of the greatest length on a mesh of four million
	// triangles crosses some ten thousand.
	maxHops = 400_000
	// maxSteps bounds the steps of a curve.
	maxSteps = 400_000
	// cellSteps bounds the steps within one triangle: passing takes some ten, a curve that takes thousands winds around
	// a zero of tau in it.
	cellSteps = 3000
	// idleHops edges crossed within idleLength of a longest edge mean that the curve runs on the spot around a vertex.
	idleHops   = 200
	idleLength = 1e-6
	// cornerShare keeps crossings this share of the edge away from its ends, so that a curve through a vertex goes on in
	// one triangle, always the same.
	cornerShare = 1e-9
)

func (w *walk) run(ctx context.Context, from field.Loc) {
	w.enter(from.Tri)
	w.p = w.point(inside(from.Bary))
	w.step = 0.5
	w.note()
	for !w.done {
		if w.hops%256 == 0 && ctx.Err() != nil {
			w.finish(Halted)
			return
		}
		w.cross(w.flowThrough())
	}
}

// inside pulls barycentric weights off the edges by the least amount, so that the start has a triangle on all sides.
func inside(b [3]float64) [3]float64 {
	sum := 0.0
	for k := range b {
		b[k] = math.Max(b[k], cornerShare)
		sum += b[k]
	}
	for k := range b {
		b[k] /= sum
	}
	return b
}

func (w *walk) finish(e End) {
	w.path.End = e
	w.done = true
}

// note appends the place where the curve is, unless it has not moved.
func (w *walk) note() {
	n := len(w.path.S)
	if n > 0 && !(w.s > w.path.S[n-1]) {
		return
	}
	w.path.Locs = append(w.path.Locs, field.Loc{Tri: w.tri, Bary: clamp(w.bary(w.p))})
	w.path.S = append(w.path.S, w.s)
}

// clamp moves weights that rounding left outside [0, 1] back.
func clamp(b [3]float64) [3]float64 {
	sum := 0.0
	for k := range b {
		b[k] = math.Max(b[k], 0)
		sum += b[k]
	}
	for k := range b {
		b[k] /= sum
	}
	return b
}

// caught tells whether the straight piece from a to b in the cell's frame meets a stop, and ends the curve there.
func (w *walk) caught(a, b r3.Vec2) bool {
	for _, i := range w.t.around[w.tri] {
		pa, pb := w.inSpace(a), w.inSpace(b)
		d := pb.Sub(pa)
		u := 0.0
		if dd := d.Dot(d); dd > 0 {
			u = math.Min(1, math.Max(0, w.t.at[i].Sub(pa).Dot(d)/dd))
		}
		if pa.AddScaled(u, d).Sub(w.t.at[i]).Norm() > w.t.stops[i].Radius {
			continue
		}
		w.s += float64(u * b.Sub(a).Norm())
		w.p = a.Lerp(b, u)
		w.note()
		w.path.Stop = w.t.stops[i].ID
		w.finish(Captured)
		return true
	}
	return false
}

func (w *walk) inSpace(p r3.Vec2) r3.Vec { return w.f.Corner(w.tri).At(w.bary(p)) }

// flowThrough integrates to the edge of the cell and returns the number of the edge crossed; -1 where the curve ends.
func (w *walk) flowThrough() int32 {
	k1, ok := w.unit(w.p)
	entered := w.steps
	allowed := w.tolerance * w.long
	if w.swings {
		allowed = math.Max(allowed, float64(swingTolerance*w.long))
	}
	for ok {
		h := w.step * w.long
		next, k4, err, fine := w.rungeKutta(h, k1)
		if !fine { // a stage met a zero of tau or passed it: smaller steps, until the zero itself is reached
			w.step /= 4
			if w.step < minStep {
				break
			}
			continue
		}
		if err > allowed {
			w.step *= math.Max(0.2, 0.9*cubeRoot(allowed/err))
			if w.step < minStep {
				break
			}
			continue
		}
		edge, share := w.exit(w.p, next, k1, k4, h)
		end, run := next, h
		if edge >= 0 {
			end, run = hermite(w.p, next, k1, k4, h, share), float64(share*h)
		}
		if w.caught(w.p, end) {
			return -1
		}
		w.s += run
		w.p = end
		if edge < 0 {
			grow := 5.0
			if err > 0 {
				grow = math.Min(grow, 0.9*cubeRoot(allowed/err))
			}
			w.step = math.Min(1, w.step*math.Max(1, grow))
		}
		w.note()
		w.steps++
		if w.s > w.limit || w.steps > maxSteps {
			w.finish(TooLong)
			return -1
		}
		if edge >= 0 {
			return edge
		}
		if w.steps-entered > cellSteps {
			w.finish(Stuck)
			return -1
		}
		if !w.swings && k1.Dot(k4) <= 0 { // an accurate step that turns back has gone over a zero
			break
		}
		k1 = k4
	}
	if w.done {
		return -1
	}
	w.finish(Stagnant)
	return -1
}

// swingTolerance is the error allowed to a step in a triangle that swings, as a share of its longest edge: the direction in it
// is made up, and may turn round within a tiny distance, at which accurate steps would be as tiny.
const swingTolerance = 1e-3

// minStep is the step, as a share of the longest edge, at which the curve has arrived at a zero of tau.
const minStep = 1e-9

// unit returns the direction of the flow; false where it has come to rest.
func (w *walk) unit(p r3.Vec2) (r3.Vec2, bool) {
	v := w.flow(p)
	n := v.Norm()
	if !(n > w.still) {
		return r3.Vec2{}, false
	}
	return v.Scale(1 / n), true
}

// rungeKutta makes one step of Bogacki and Shampine's pair of length h and returns the new place, the direction there,
// and the estimated error.
func (w *walk) rungeKutta(h float64, k1 r3.Vec2) (next, k4 r3.Vec2, err float64, ok bool) {
	k2, ok2 := w.unit(w.p.AddScaled(h/2, k1))
	k3, ok3 := w.unit(w.p.AddScaled(float64(0.75*h), k2))
	if !ok2 || !ok3 {
		return next, k4, 0, false
	}
	// A stage that turns back has passed a zero, and the estimate says nothing: steps as short as the tolerance would pass it
	// again and again. In a triangle that swings the direction may turn round anywhere.
	if !w.swings && (k1.Dot(k2) <= 0 || k1.Dot(k3) <= 0) {
		return next, k4, 0, false
	}
	next = w.p.AddScaled(float64(h*2)/9, k1).AddScaled(h/3, k2).AddScaled(float64(h*4)/9, k3)
	k4, ok = w.unit(next)
	e := k1.Scale(-5./72).AddScaled(1./12, k2).AddScaled(1./9, k3).AddScaled(-1./8, k4)
	return next, k4, e.Norm() * h, ok
}

func cubeRoot(x float64) float64 { return r3.Exp(r3.Log(x) / 3) }

// hermite returns the place at the share u of a step, by the cubic through its ends with the directions there.
func hermite(a, b, da, db r3.Vec2, h, u float64) r3.Vec2 {
	uu, v := u*u, 1-u
	p := a.Scale(float64((1+2*u)*v*v)).AddScaled(float64(uu*(3-float64(2*u))), b)
	return p.AddScaled(float64(u*v*v*h), da).AddScaled(-float64(uu*v*h), db)
}

// maxPasses bounds the search for an earlier crossing: a cubic crosses each of the two other edges out and back once.
const maxPasses = 4

// exit returns the edge through which the step leaves the cell first, and the share of the step at which it does; -1
// where it stays inside.
func (w *walk) exit(a, b, da, db r3.Vec2, h float64) (edge int32, share float64) {
	edge, share = -1, 1
	end, below, found := w.bary(b), 0.0, true
	for pass := 0; found && pass < maxPasses; pass++ {
		found = false
		top := share
		for k := range int32(3) {
			if end[k] >= below || edge == (k+1)%3 {
				continue
			}
			// Bisection on the weight that turns negative: it is positive, or nought at an edge just entered, at the beginning.
			lo, hi := 0.0, top
			for range 60 {
				mid := (lo + hi) / 2
				if w.bary(hermite(a, b, da, db, h, mid))[k] >= 0 {
					lo = mid
				} else {
					hi = mid
				}
				if hi-lo < 1e-14 {
					break
				}
			}
			if hi <= share {
				edge, share, found = (k+1)%3, hi, true // the edge opposite to corner k begins at corner k+1
			}
		}
		// The step may have left over another edge before, over which it is back at its end: near a corner.
		if found {
			end, below = w.bary(hermite(a, b, da, db, h, share)), -cornerShare
		}
	}
	return edge, share
}
