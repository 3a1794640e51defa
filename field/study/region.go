package study

import (
	"context"
	"fmt"
	"io"
	"strings"

	"shearprint/field/r3"
	"shearprint/field/topology"
)

// Region is the balance of a part of the surface: "shearprint/region/1". Its boundary term is what tau turns along the region's
// edge, less what the edge itself does.
type Region struct {
	Schema    string `json:"schema"`
	Run       Run    `json:"run"`
	Chosen    string `json:"chosen"` // in words
	Triangles int    `json:"triangles"`
	Area      Number `json:"area"`
	Euler     int    `json:"euler_characteristic"`
	Count
	Inside []string `json:"inside"` // points whose triangles are all in the region
	Across []string `json:"across"` // points of which the region's edge cuts the triangles: it is no edge to balance by
}

// Parts returns the balance of connected parts of the surface, by their numbers in inspect. It fails with a *RegionError.
func (s *Study) Parts(ctx context.Context, parts []int32) (*Region, error) {
	for _, p := range parts {
		if n := len(s.f.Parts); int(p) >= n || p < 0 {
			return nil, &RegionError{fmt.Sprintf("there is no part %d: the last is part %d", p, n-1)}
		}
	}
	if len(parts) == 0 {
		return nil, &RegionError{"no part is named: give their numbers, as 0,2"}
	}
	words := "part "
	if len(parts) > 1 {
		words = "parts "
	}
	words += strings.Trim(fmt.Sprint(parts), "[]")
	return s.region(ctx, words, func(sk *topology.Skeleton) func(int32) bool { return sk.InParts(parts...) })
}

// Box returns the balance of the triangles whose middles lie in the box with the two given corners. It fails with
// a *RegionError where there are none.
func (s *Study) Box(ctx context.Context, a, b r3.Vec) (*Region, error) {
	box := r3.EmptyBox().Include(a).Include(b)
	words := fmt.Sprintf("the box from %s to %s", place(vecOf(box.Min)), place(vecOf(box.Max)))
	return s.region(ctx, words, func(sk *topology.Skeleton) func(int32) bool { return sk.InBox(box) })
}

func (s *Study) region(ctx context.Context, chosen string, choose func(*topology.Skeleton) func(int32) bool) (*Region, error) {
	sk, err := s.allPoints(ctx)
	if err != nil {
		return nil, err
	}
	in := choose(sk)
	r := sk.RegionOf(in)
	if r.Triangles == 0 {
		whole := r3.BoxOf(s.f.Points)
		return nil, &RegionError{fmt.Sprintf("no triangle is in %s: the surface is in the box from %s to %s", chosen,
			place(vecOf(whole.Min)), place(vecOf(whole.Max)))}
	}
	out := &Region{Schema: "shearprint/region/1", Run: s.run(), Chosen: chosen, Triangles: r.Triangles, Euler: r.Euler,
		Count: countOf(r.Count), Inside: []string{}, Across: []string{}}
	area := 0.0
	for t := range int32(len(s.f.Tris)) {
		if in(t) {
			area += s.f.Area(t)
		}
	}
	out.Area = Number(area)
	for _, i := range r.Inside {
		out.Inside = append(out.Inside, sk.Points[i].ID)
	}
	for _, i := range r.Across {
		out.Across = append(out.Across, sk.Points[i].ID)
	}
	return out, nil
}

// RegionError says why there is no such region.
type RegionError struct{ what string }

// Error tells what is wrong and what there is.
func (e *RegionError) Error() string { return e.what }

// WriteText writes the balance in a few lines.
func (r *Region) WriteText(w io.Writer) error {
	s := &sheet{w: w}
	s.title("a region of the surface", r.Run)
	s.line("")
	s.para("  region         ", r.Chosen)
	s.line("  triangles      %d", r.Triangles)
	s.line("  area           %s", with(r.Area, square(r.Run.LengthUnit)))
	s.line("  Euler number   %d", r.Euler)
	inside := "no critical point"
	if len(r.Inside) > 0 {
		inside = strings.Join(r.Inside, ", ")
	}
	s.para("  inside         ", inside)
	s.line("  indices sum to %s", num(r.IndexSum))
	s.line("  demanded       %s, of which %s by what tau does along the region's edge", num(r.Expected), num(r.BoundaryTerm))
	switch {
	case len(r.Across) > 0:
		s.para("  ?              ", "the edge cuts through the triangles of "+strings.Join(r.Across, ", ")+
			": choose a region that leaves them in or out")
	case r.Balanced:
		s.line("  The region balances.")
	default:
		s.line("  THE REGION DOES NOT BALANCE.")
	}
	return s.err
}
