package trace

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// visit remembers where a curve crossed a half-edge.
type visit struct {
	share float64 // of the half-edge, from its tail
	at    int     // index in the path
	miss  float64 // by how much it missed the crossing before that
	ratio float64 // of the last two misses
	turns int
}

// cross takes the curve over edge k of its cell into the neighbour, along the edge where both sides flow into it, or
// ends it.
func (w *walk) cross(k int32) {
	if w.done {
		return
	}
	w.hops++
	switch {
	case w.hops > maxHops:
		w.finish(TooLong)
		return
	case w.s-w.idleS > idleLength*w.long:
		w.idle, w.idleS = 0, w.s
	default:
		w.idle++
		if w.idle > idleHops {
			w.finish(Stuck)
			return
		}
	}
	h := 3*w.tri + k
	share := w.edgeShare(k)
	if w.returned(h, share) {
		return
	}
	w.over(h, share)
}

// edgeShare returns the curve's place on edge k as a share of the edge, off its ends.
func (w *walk) edgeShare(k int32) float64 {
	a := w.corner[k]
	e := w.corner[(k+1)%3].Sub(a)
	share := w.p.Sub(a).Dot(e) / e.Dot(e)
	return math.Min(1-cornerShare, math.Max(cornerShare, share))
}

// over continues behind half-edge h, which the curve has reached from the inside.
func (w *walk) over(h int32, share float64) {
	g := w.f.Twin[h]
	if g < 0 {
		w.finish(Rim)
		return
	}
	w.enterAt(g, 1-share)
	if w.flow(w.p).Dot(w.inward(g%3)) > 0 {
		return
	}
	w.slide(h, share)
}

// enterAt puts the curve on half-edge g, seen from g's triangle.
func (w *walk) enterAt(g int32, share float64) {
	w.enter(g / 3)
	k := g % 3
	w.p = w.corner[k].Lerp(w.corner[(k+1)%3], share)
}

// side is one triangle beside an edge along which a curve slides, with tau at the edge's ends: along the edge, and
// away from it into the triangle.
type side struct {
	h           int32
	along, away [2]float64
	length      float64
	unit        bool // directions count, not sizes
	swings      bool
	swing       Swing
	size        [3]float64
	turned      float64 // what is to be added to the swing's angle to have it from the edge's direction [rad]
	forward     bool    // the edge is measured from the tail of h
}

// at returns what the share u of the edge has of tau, or of its direction: along the edge and away from it.
func (s *side) at(u float64) (along, away float64) {
	if !s.swings {
		t := r3.Vec2{X: s.along[0] + float64(u*(s.along[1]-s.along[0])), Y: s.away[0] + float64(u*(s.away[1]-s.away[0]))}
		if s.unit {
			t = t.Unit()
		}
		return t.X, t.Y
	}
	if !s.forward {
		u = 1 - u
	}
	var b [3]float64
	b[s.h%3], b[(s.h+1)%3] = 1-u, u
	away, along = r3.SinCos(s.swing.at(b, s.size) + s.turned)
	if !s.forward {
		along = -along
	}
	return along, away
}

// sideOf looks at half-edge h from its own triangle; forward tells whether the edge is measured from the tail of h.
func (w *walk) sideOf(h int32, forward bool) side {
	w.enter(h / 3)
	k := h % 3
	e := w.corner[(k+1)%3].Sub(w.corner[k])
	d, n := e.Unit(), w.inward(k)
	a, b := w.tau[k], w.tau[(k+1)%3]
	s := side{h: h, along: [2]float64{a.Dot(d), b.Dot(d)}, away: [2]float64{a.Dot(n), b.Dot(n)}, length: e.Norm(),
		swings: w.swings, swing: w.swing, size: w.size, forward: forward}
	if w.swings {
		s.turned = r3.Atan2(s.away[0], s.along[0]) - w.swing.Angle[k] // of the curve's direction, along tau or against it
	}
	if !forward {
		s.along = [2]float64{-s.along[1], -s.along[0]}
		s.away = [2]float64{s.away[1], s.away[0]}
	}
	return s
}

// slide moves the curve along edge h, into which both sides flow, in the direction of the sides' mean tau, until one
// side flows away from it or its end is reached.
func (w *walk) slide(h int32, share float64) {
	a, b := w.sideOf(h, true), w.sideOf(w.f.Twin[h], false)
	a.unit = a.swings || b.swings
	b.unit = a.unit
	speed := meanAlong(&a, &b, share)
	if math.Abs(speed) <= field.ZeroFraction*w.f.MaxTau {
		w.leaveAt(h, share)
		w.stick()
		return
	}
	end, goal := slideEnd(&a, &b, share, speed)
	w.s += float64(math.Abs(end-share) * a.length)
	switch goal {
	case intoFirst:
		w.leaveAt(h, end)
	case intoSecond:
		w.leaveAt(w.f.Twin[h], 1-end)
	case atRest:
		w.leaveAt(h, end)
		w.stick()
	default:
		w.turnCorner(h, speed > 0)
	}
}

// Ways in which a slide along an edge ends.
const (
	intoFirst  = iota // it leaves into the first side
	intoSecond        // or the second
	atRest            // it comes to a place from which the flow goes nowhere
	atTheEnd          // it reaches the end of the edge
)

// swingSteps is the number of places at which the edge of a triangle that swings is looked at.
const swingSteps = 64

// meanAlong returns the mean of what both sides have along the edge.
func meanAlong(a, b *side, u float64) float64 {
	p, _ := a.at(u)
	q, _ := b.at(u)
	return (p + q) / 2
}

// slideEnd finds the place at which a slide ends that begins at the given share of the edge, and how it ends.
func slideEnd(a, b *side, share, speed float64) (end float64, goal int) {
	end, goal = 1, atTheEnd
	if speed < 0 {
		end = 0
	}
	if a.unit {
		for i := 1; i <= swingSteps; i++ {
			u := share + float64(i)*(end-share)/swingSteps
			if _, away := a.at(u); away > 0 {
				return u, intoFirst
			}
			if _, away := b.at(u); away > 0 {
				return u, intoSecond
			}
			if meanAlong(a, b, u)*speed <= 0 {
				return u, atRest
			}
		}
		return end, atTheEnd
	}
	mean := [2]float64{meanAlong(a, b, 0), meanAlong(a, b, 1)}
	for i, v := range [...][2]float64{intoFirst: a.away, intoSecond: b.away, atRest: mean} {
		// The first place ahead where the value changes its sign.
		d := v[1] - v[0]
		if d == 0 {
			continue
		}
		u := -v[0] / d
		if (u-share)*speed > 0 && (end-u)*speed > 0 {
			end, goal = u, i
		}
	}
	return end, goal
}

// leaveAt puts the curve on half-edge h where a slide along it ends.
func (w *walk) leaveAt(h int32, share float64) {
	w.enterAt(h, math.Min(1-cornerShare, math.Max(cornerShare, share)))
	if !w.caught(w.p, w.p) {
		w.note()
	}
}

// stick ends a curve that the flow of all sides leads to where it is.
func (w *walk) stick() {
	if !w.done {
		w.finish(Stuck)
	}
}

// turnCorner continues from the end of half-edge h, at its tip or its tail: into the triangle around that vertex whose
// flow leads away from it most directly.
func (w *walk) turnCorner(h int32, tip bool) {
	v := w.f.Tail(h)
	if tip {
		v = w.f.Tip(h)
	}
	best, bestOut := 0.0, int32(-1)
	var bestFrom r3.Vec2
	for g := range w.f.Fan(v) {
		w.enter(g / 3)
		k := g % 3
		// The corner's two edges bound the directions that lead into the triangle.
		tau := w.tau[k]
		left := w.corner[(k+1)%3].Sub(w.corner[k]).Unit()
		right := w.corner[(k+2)%3].Sub(w.corner[k]).Unit()
		in := math.Min(left.Cross(tau), tau.Cross(right))
		if n := tau.Norm(); n > 0 && in > -cornerTurn*n && (bestOut < 0 || in/n > best) {
			best, bestOut = in/n, g
			b := [3]float64{cornerInset, cornerInset, cornerInset}
			b[k] = 1 - 2*cornerInset
			bestFrom = w.point(b)
		}
	}
	if bestOut < 0 {
		w.enter(h / 3)
		b := [3]float64{cornerShare, cornerShare, cornerShare}
		k := h % 3
		if tip {
			k = (k + 1) % 3
		}
		b[k] = 1 - 2*cornerShare
		w.p = w.point(b)
		w.note()
		w.stick()
		return
	}
	w.enter(bestOut / 3)
	w.p = bestFrom
	w.s += float64(cornerInset * w.long)
	if !w.caught(w.p, w.p) {
		w.note()
	}
}

const (
	// cornerInset is how far inside a triangle a curve goes on that came to one of its corners, as a share of the edges.
	cornerInset = 1e-6
	// cornerTurn is the sine of the angle by which the flow at a corner may miss the triangle and still lead into it:
	// along an edge on which both sides converge neither side claims the flow.
	cornerTurn = 0.05
)
