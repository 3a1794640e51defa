package study

import (
	"context"
	"fmt"
	"io"
	"math"
	"strings"

	"shearprint/field/r3"
)

// Loop is the index along a closed loop on the surface and what accounts for it: "shearprint/loop/1".
type Loop struct {
	Schema string `json:"schema"`
	Run    Run    `json:"run"`
	Length Number `json:"length"`
	// Turn is the angle [degrees] by which tau turns along the loop against parallel transport, Curvature what the surface
	// on the left of the loop turns a transported vector by. Together they are 360 degrees times the index.
	Turn      Number `json:"turn"`
	Curvature Number `json:"curvature"`
	Index     Number `json:"index"`  // of the region on the left; null where the loop bounds none
	Bounds    bool   `json:"bounds"` // whether it bounds one
	// Inside lists the critical points in the region, IndexSum sums their indices, half points counted one half.
	Inside   []string `json:"inside"`
	IndexSum Number   `json:"index_sum"`
	Accounts bool     `json:"accounts"` // whether the points inside account for the index
	Note     string   `json:"note"`
	// Hodograph is tau along the loop: the same number of values in each list, one per point of Points.
	Hodograph Hodograph `json:"hodograph"`
	Points    []Vec     `json:"points"`
}

// Hodograph is tau along a loop.
type Hodograph struct {
	S     []Number `json:"s"`     // arc length
	Angle []Number `json:"angle"` // turned so far, against parallel transport [degrees]
	Tau   []Number `json:"tau"`   // |tau|
}

// Loop reads tau along the closed way through the given points, in the order given: a loop that runs counter-clockwise,
// seen from the fluid, has its region inside. It fails with a *PlaceError where a point is far from the surface, and with
// a *LoopError where no way leads along the surface.
func (s *Study) Loop(ctx context.Context, through []r3.Vec) (*Loop, error) {
	for _, p := range through {
		if _, _, err := s.nearest(p); err != nil {
			return nil, err
		}
	}
	sk, err := s.allPoints(ctx)
	if err != nil {
		return nil, err
	}
	l, err := sk.Loop(through)
	if err != nil {
		return nil, &LoopError{err}
	}
	out := &Loop{
		Schema: "shearprint/loop/1", Run: s.run(), Length: Number(l.Length),
		Turn: Number(degrees(l.Turn)), Curvature: Number(degrees(l.Curvature)), Index: Number(l.Index), Bounds: l.Bounds,
		Inside: []string{}, IndexSum: Number(l.IndexSum), Accounts: l.Accounts, Note: l.Note, Points: []Vec{},
		Hodograph: Hodograph{S: []Number{}, Angle: []Number{}, Tau: []Number{}},
	}
	if !l.Bounds {
		out.Index = Number(math.NaN())
	}
	for _, i := range l.Inside {
		out.Inside = append(out.Inside, sk.Points[i].ID)
	}
	for i, h := range l.Hodograph {
		out.Points = append(out.Points, vecOf(s.f.Position(l.Locs[i])))
		out.Hodograph.S = append(out.Hodograph.S, Number(h.S))
		out.Hodograph.Angle = append(out.Hodograph.Angle, Number(degrees(h.Angle)))
		out.Hodograph.Tau = append(out.Hodograph.Tau, Number(h.Size))
	}
	return out, nil
}

// LoopError says why there is no loop through the given points.
type LoopError struct{ error }

// Unwrap returns the reason.
func (e *LoopError) Unwrap() error { return e.error }

// fullTurn [degrees] is the scale of the angles along a loop.
const fullTurn = 360

// WriteText writes the reading in a few sentences.
func (l *Loop) WriteText(w io.Writer) error {
	s := &sheet{w: w}
	s.title("a closed loop on the surface", l.Run)
	s.line("")
	s.line("  length       %s", with(l.Length, l.Run.LengthUnit))
	s.line("  tau turns    %.4g degrees against parallel transport", float64(tidy(l.Turn, fullTurn)))
	if !l.Bounds {
		s.para("  ?            ", l.Note)
		return s.err
	}
	s.line("  curvature    %.4g degrees on the left of the loop", float64(tidy(l.Curvature, fullTurn)))
	s.line("  index        %s", num(l.Index))
	inside := "no critical point"
	if len(l.Inside) > 0 {
		inside = strings.Join(l.Inside, ", ") + fmt.Sprintf(": indices sum to %s", num(l.IndexSum))
	}
	s.para("  inside       ", inside)
	if l.Accounts {
		s.line("  The points inside account for the index.")
	} else {
		s.line("  THE POINTS INSIDE DO NOT ACCOUNT FOR THE INDEX.")
	}
	if l.Note != "" {
		s.para("  ?            ", l.Note)
	}
	return s.err
}
