package trace

import (
	"slices"

	"shearprint/field"
)

// End is the reason why a curve ends.
type End uint8

// The reasons.
const (
	TooLong  End = iota // the length limit was reached
	Captured            // it came within a stop's radius
	Rim                 // it left through a rim
	Cycle               // it runs into, or on, a closed orbit
	Stagnant            // tau vanishes there
	Stuck               // the flow of all triangles around leads to one point or edge that is no stop
	Halted              // the caller's context is done
)

var endWords = [...]string{
	"the length limit was reached", "it reaches a critical point", "it leaves through the rim", "it closes on itself",
	"the wall shear stress vanishes there", "the flow around leads to this place from all sides", "the computation was stopped",
}

// String returns the reason in words.
func (e End) String() string { return endWords[e] }

// Path is a curve on the surface, in the direction in which it was traced.
type Path struct {
	Locs []field.Loc
	S    []float64 // arc length from the first place; strictly increasing
	End  End
	Stop int // Stop.ID where End is Captured; -1 otherwise
	// Loop is, where End is Cycle, the index in Locs at which the last turn begins: from there to the end the curve is one
	// turn of the closed orbit. -1 otherwise.
	Loop int
	// Drift is, where End is Cycle, the distance across the orbit by which the last turn missed its beginning, as
	// a share of the edge on which it was measured.
	Drift float64
}

// Length returns the arc length of the path.
func (p Path) Length() float64 {
	if len(p.S) == 0 {
		return 0
	}
	return p.S[len(p.S)-1]
}

// Both is a curve through a place: Locs run along tau, from the backward end to the forward end.
type Both struct {
	Locs  []field.Loc
	S     []float64 // arc length, 0 at the place itself, negative upstream
	Start int       // index of the place itself
	Back  Path      // as traced, against tau
	Ahead Path
}

// join puts the backward path before the forward path.
func join(back, ahead Path) Both {
	b := Both{Back: back, Ahead: ahead, Start: max(0, len(back.Locs)-1)}
	for i := len(back.Locs) - 1; i > 0; i-- {
		b.Locs = append(b.Locs, back.Locs[i])
		b.S = append(b.S, -back.S[i])
	}
	b.Locs = slices.Concat(b.Locs, ahead.Locs)
	b.S = slices.Concat(b.S, ahead.S)
	return b
}
