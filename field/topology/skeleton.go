package topology

import (
	"context"
	"fmt"

	"shearprint/field"
	"shearprint/field/trace"
)

// Capture discs, as shares of the length of the edges around a point. A line that comes within half an edge of a node or
// focus goes there, as far as the mesh can tell; a saddle takes
// only lines that run into it: passing it at less than a quarter of an edge is no passing that a mesh can tell.
const (
	catchShare       = 0.5
	saddleCatchShare = 0.25
)

// builder makes the lines of a skeleton.
type builder struct {
	s       *Skeleton
	f       *field.Field // mended
	mended  *mended
	t       *trace.Tracer
	rates   *rates
	owner   map[int32]int // number of the point per triangle that shares its index; for looking up only
	edge    float64       // mean edge length
	winding []winding     // separatrices that end on closed orbits
	bands   int           // closed orbits that are no cycle: one of a band of them
}

// addLines finds separatrices, cycles, open lines and basins.
func (s *Skeleton) addLines(ctx context.Context, progress func(share float64)) error {
	m, err := s.count.mend(ctx, s.Floor)
	if err != nil {
		return err
	}
	b := builder{s: s, f: m.f, mended: m, owner: map[int32]int{}, edge: s.Field.MeanEdge()}
	var stops []trace.Stop
	for i := range s.Points {
		p := &s.Points[i]
		share := catchShare
		if p.Type == Saddle {
			share = saddleCatchShare
		}
		stops = append(stops, trace.Stop{ID: i, Loc: p.Loc, Radius: float64(share * p.Size)})
		for _, t := range p.Patch {
			b.owner[t] = i
		}
		if _, ok := b.owner[p.Loc.Tri]; !ok {
			b.owner[p.Loc.Tri] = i
		}
	}
	b.t = trace.New(b.f, stops, m.swings)
	if b.rates, err = findRates(ctx, b.f); err != nil {
		return err
	}
	progress(0.2)
	for _, step := range []func(context.Context) error{b.addSeparatrices, b.addCycles, b.addOpenLines, b.addBasins} {
		if err := step(ctx); err != nil {
			return err
		}
	}
	s.addAngles(b.rates)
	for i := range s.Lines {
		s.Lines[i].ID = fmt.Sprint("L", i+1)
		s.Lines[i].Reaches = b.reaches(&s.Lines[i])
	}
	b.tellMended()
	if b.bands > 0 {
		s.tell(field.Note, "closed-bands", b.bands, "", "%s met closed streamlines beside which all others close too: they "+
			"are no cycles, and are not listed", plural(b.bands, "curve"))
	}
	progress(1)
	return nil
}

// arrival tells which point a curve has come to: the one whose disc caught it, or in whose triangles, or beside them, it
// came to rest. -1 for none.
func (b *builder) arrival(p *trace.Path) int {
	if p.End == trace.Captured {
		return p.Stop
	}
	if p.End != trace.Stagnant && p.End != trace.Stuck || len(p.Locs) == 0 {
		return -1
	}
	t := p.Locs[len(p.Locs)-1].Tri
	if i, ok := b.owner[t]; ok {
		return i
	}
	for _, v := range b.f.Tris[t] {
		for h := range b.f.Fan(v) {
			if i, ok := b.owner[h/3]; ok {
				return i
			}
		}
	}
	return -1
}

// endWords tells in words why a curve ended at no point.
func (b *builder) endWords(p *trace.Path) string {
	switch p.End {
	case trace.Rim:
		return "the rim"
	case trace.Cycle:
		return "a closed orbit, onto which it winds"
	case trace.TooLong:
		return "no end within the length limit"
	case trace.Stagnant:
		return "a place where the wall shear stress fades"
	case trace.Stuck:
		return "a sharp corner of the mesh, or rough data, where the flow of neighbouring triangles meets head-on"
	}
	return p.End.String()
}

// ahead returns the places of a path along the flow.
func ahead(p *trace.Path, backward bool) []field.Loc {
	locs := p.Locs
	if !backward {
		return locs
	}
	out := make([]field.Loc, len(locs))
	for i, l := range locs {
		out[len(out)-1-i] = l
	}
	return out
}

// lengthOf returns the length of the polyline through the places.
func lengthOf(f *field.Field, locs []field.Loc) float64 {
	sum := 0.0
	for i := 1; i < len(locs); i++ {
		sum += f.Position(locs[i]).Sub(f.Position(locs[i-1])).Norm()
	}
	return sum
}
