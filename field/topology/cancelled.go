package topology

import (
	"cmp"
	"context"
	"slices"

	"shearprint/field"
	"shearprint/field/trace"
)

const (
	// ghostShare is the radius of the disc in which a cancelled node or focus ends a curve, as a share of the edges around.
	ghostShare = 0.25
	// mostDetours bounds the cancelled points that are looked at for one line.
	mostDetours = 64
	// mostPartners bounds the cancelled saddles, the nearest first, among which the one that feeds a cancelled sink is looked
	// for.
	mostPartners = 8
)

// ghostWay is a cancelled point that is reached along the flow or against it.
type ghostWay struct {
	ghost    int
	backward bool
}

// escape is how a curve goes on that came to a cancelled node or focus: back along the separatrix of the saddle that it
// cancels with, and on along that saddle's other branch. This is what is left of the lines when the pair is gone (the
// cancellation of Morse theory; Forman 1998, from memory, for the discrete case).
type escape struct {
	locs []field.Loc // from the cancelled point on
	path trace.Path  // of the last piece, for its end
}

// findGhosts places the cancelled points and returns the stops for their nodes and foci.
func (b *builder) findGhosts(ctx context.Context) ([]trace.Stop, error) {
	c := b.s.count
	var seeds []seed
	for i := range c.seeds {
		if c.level(c.seeds[i].robust) < b.s.Floor {
			seeds = append(seeds, c.seeds[i])
			b.groups = append(b.groups, c.seeds[i].group)
		}
	}
	b.escape = map[ghostWay][]*escape{}
	if len(seeds) == 0 {
		return nil, nil
	}
	var err error
	if b.ghosts, err = c.placeAll(ctx, seeds); err != nil {
		return nil, err
	}
	var stops []trace.Stop
	for i := range b.ghosts {
		if p := &b.ghosts[i]; p.Index > 0 {
			stops = append(stops, trace.Stop{ID: len(b.s.Points) + i, Loc: p.Loc, Radius: float64(ghostShare * p.Size)})
		}
	}
	return stops, nil
}

// ghostOf returns the cancelled node or focus at which the path ends; -1 for none.
func (b *builder) ghostOf(p *trace.Path) int {
	if p.End == trace.Captured && p.Stop >= len(b.s.Points) {
		return p.Stop - len(b.s.Points)
	}
	if (p.End == trace.Stagnant || p.End == trace.Stuck) && b.arrival(p) < 0 && len(p.Locs) > 0 {
		end := p.Locs[len(p.Locs)-1].Tri
		for i := range b.ghosts {
			if b.ghosts[i].Index > 0 && slices.Contains(b.ghosts[i].Patch, end) {
				return i
			}
		}
	}
	return -1
}

// goOn lengthens a path that ends at cancelled points until it ends at something that counts, by the fewest pairs, and
// returns the number of pairs that it passed. Where no way on is found the path stays as it is.
func (b *builder) goOn(ctx context.Context, p *trace.Path, backward bool) int {
	g := b.ghostOf(p)
	if g < 0 {
		return 0
	}
	type stage struct {
		ghost int
		by    *escape // that led here
		from  int     // number of the stage before
		depth int
	}
	queue := []stage{{ghost: g, from: -1}}
	seen := map[int]bool{g: true}
	for i := 0; i < len(queue) && i < mostDetours && ctx.Err() == nil; i++ {
		for _, e := range b.escapesFrom(ctx, ghostWay{queue[i].ghost, backward}) {
			next := b.ghostOf(&e.path)
			if next >= 0 {
				if !seen[next] {
					seen[next] = true
					queue = append(queue, stage{next, e, i, queue[i].depth + 1})
				}
				continue
			}
			pieces := []*escape{e}
			for k := i; queue[k].by != nil; k = queue[k].from {
				pieces = append(pieces, queue[k].by)
			}
			for k := len(pieces) - 1; k >= 0; k-- {
				p.Locs = append(p.Locs, pieces[k].locs...)
			}
			p.End, p.Stop, p.Loop = e.path.End, e.path.Stop, -1
			if p.End == trace.Cycle {
				p.Loop = len(p.Locs) - len(e.path.Locs) + e.path.Loop
			}
			return len(pieces)
		}
	}
	return 0
}

// escapesFrom lists the ways on from a cancelled point, by the nearest saddles first.
func (b *builder) escapesFrom(ctx context.Context, way ghostWay) []*escape {
	if list, ok := b.escape[way]; ok {
		return list
	}
	var list []*escape
	for _, i := range b.partners(way.ghost) {
		saddle := &b.ghosts[i]
		var branches []trace.Path
		for _, st := range b.byEigenvectors(saddle, i) {
			if st.backward == way.backward {
				branches = append(branches, b.t.Trace(ctx, st.loc, trace.Options{Backward: way.backward}))
			}
		}
		if len(branches) != 2 {
			continue
		}
		first, second := b.ghostOf(&branches[0]) == way.ghost, b.ghostOf(&branches[1]) == way.ghost
		if first == second { // neither, or a loop that leads nowhere else
			continue
		}
		to, on := branches[0], branches[1]
		if second {
			to, on = on, to
		}
		e := &escape{locs: []field.Loc{b.ghosts[way.ghost].Loc}, path: on}
		for k := len(to.Locs) - 1; k >= 0; k-- {
			e.locs = append(e.locs, to.Locs[k])
		}
		e.locs = append(append(e.locs, saddle.Loc), on.Locs...)
		list = append(list, e)
	}
	b.escape[way] = list
	return list
}

// partners lists the cancelled saddles that cancel together with a cancelled point, the nearest first.
func (b *builder) partners(ghost int) []int {
	var out []int
	at := b.ghosts[ghost].Position
	for i := range b.ghosts {
		if p := &b.ghosts[i]; p.Index < 0 && !p.Half && p.Type == Saddle && b.groups[i] == b.groups[ghost] {
			out = append(out, i)
		}
	}
	distance := func(i int) float64 { return b.ghosts[i].Position.Sub(at).Norm() }
	slices.SortStableFunc(out, func(i, k int) int { return cmp.Compare(distance(i), distance(k)) })
	return out[:min(len(out), mostPartners)]
}
