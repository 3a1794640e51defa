package trace

import "math"

const (
	// closeShare is the share of an edge within which a curve that returns to it has closed on itself.
	closeShare = 1e-6
	// limitShare is the share of an edge within which the limit of a contracting sequence of returns must be: the error of
	// the mesh itself is of this size, and a slowly contracting orbit would take a hundred turns to come much nearer.
	limitShare = 0.02
	// steadyRatio is by how much of its distance from 1 the ratio of successive misses may change from one return to the
	// next where the sequence is geometric.
	steadyRatio = 0.2
	// minTurns is the number of returns that must contract before their limit is believed.
	minTurns = 3
	// mostTurns is the number of returns after which a curve that winds without end is given up: its spiral changes by less
	// than a hundredth of itself in a turn, which no mesh and no computed flow resolves.
	mostTurns = 500
	// spotEdges is the length of the last turn, in longest edges, up to which such a curve winds around one spot.
	spotEdges = 8
)

// returned notes the crossing of half-edge h and tells whether the curve has closed on itself. The half-edge is
// a section of the flow, and the shares at which the curve crosses it are iterates of its return map: the curve is
// a closed orbit where it comes back to the same share, and runs into one where the distances between successive
// returns shrink in a geometric sequence whose limit, by Aitken's rule, is on the edge and near.
func (w *walk) returned(h int32, share float64) bool {
	old, ok := w.last[h]
	now := visit{share: share, at: len(w.path.Locs) - 1}
	near := false
	if ok {
		now.miss, now.turns = share-old.share, old.turns+1
		near = math.Abs(now.miss) < closeShare
	}
	if !near && now.turns >= minTurns && old.miss != 0 {
		q := now.miss / old.miss
		now.ratio = q
		if q > 0 && q < 1 && math.Abs(q-old.ratio) < float64(steadyRatio*(1-q)) {
			rest := float64(now.miss*q) / (1 - q)
			limit := share + rest
			near = math.Abs(rest) < limitShare && limit > 0 && limit < 1
		}
	}
	w.last[h] = now
	switch {
	case near:
		w.path.Loop, w.path.Drift = old.at, math.Abs(now.miss)
		w.finish(Cycle)
	case now.turns >= mostTurns && w.s-w.path.S[old.at] < float64(spotEdges*w.long):
		w.finish(Stuck)
	case now.turns >= mostTurns:
		w.finish(TooLong)
	}
	return w.done
}
