package topology

import (
	"cmp"
	"context"
	"fmt"
	"math"
	"slices"

	"shearprint/field"
	"shearprint/field/r3"
	"shearprint/field/trace"
)

const (
	// leastRidge is the length in mean edges of the shortest chain that is looked at: shorter ones are noise.
	leastRidge = 6
	// leastLine is the length of the shortest open line, as a share of the diagonal of the box around the surface.
	leastLine = 0.04
	// ridgeExponent is the power of e by which a chain must collect its neighbours to be followed.
	ridgeExponent = 0.5
	// mostRidges bounds the chains that are followed, the strongest first: a body has a few open lines, noise has thousands.
	mostRidges = 400
	// bundleEdges is how many mean edges to either side of a line the bundle starts that confirms it.
	bundleEdges = 4
	// ownShare is the share of an open line that must not run along another line: what joins one early is a part of it.
	ownShare = 0.3
	// joined is how many mean edges from another line of its kind a line runs along that one.
	joined = 3
)

// addOpenLines finds the lines onto which streamlines converge, or from which they part, without a saddle: the local
// criterion gives chains of pieces; from the end of a chain where the bundle is wide a streamline follows it, which
// is drawn onto the line itself; a bundle traced beside it confirms it.
func (b *builder) addOpenLines(ctx context.Context) error {
	cells, err := b.findRidges(ctx)
	if err != nil {
		return err
	}
	list := b.joinRidges(cells)
	list = slices.DeleteFunc(list, func(r ridge) bool {
		return r.length < float64(leastRidge*b.edge) || r.exponent < ridgeExponent
	})
	slices.SortStableFunc(list, func(p, q ridge) int { return cmp.Compare(q.exponent, p.exponent) })
	list = list[:min(len(list), mostRidges)]
	found := make([]openLine, len(list))
	if err := inBlocks(ctx, len(list), 1, func(from, to int) {
		for i := from; i < to; i++ {
			found[i] = b.follow(ctx, &list[i])
		}
	}); err != nil {
		return err
	}
	slices.SortStableFunc(found, func(p, q openLine) int { return cmp.Compare(q.gain(), p.gain()) })
	near := map[Kind]*nearness{SeparationLine: newNearness(b), AttachmentLine: newNearness(b)}
	for i := range b.s.Lines {
		l := &b.s.Lines[i]
		if n := near[separatrixKind(b.s, l)]; n != nil {
			n.add(l.Locs)
		}
	}
	var lines []Line
	for i := range found {
		o := &found[i]
		if len(o.locs) < 2 || !b.own(o, near[o.kind]) {
			continue
		}
		if !b.confirm(ctx, o) {
			continue
		}
		l := b.openLine(o)
		near[o.kind].add(l.Locs)
		lines = append(lines, l)
	}
	slices.SortStableFunc(lines, func(p, q Line) int { return cmp.Compare(q.Strength, p.Strength) })
	b.s.Lines = append(b.s.Lines, lines...)
	return ctx.Err()
}

// separatrixKind returns the kind that a line of the skeleton has by its place: separatrices that leave a saddle collect
// streamlines, whether or not they do so clearly, and those that run into one part them.
func separatrixKind(s *Skeleton, l *Line) Kind {
	switch {
	case l.Type == Cycle:
		return l.Kind
	case l.From >= 0 && s.Points[l.From].Index < 0:
		return SeparationLine
	}
	return AttachmentLine
}

// openLine is a candidate, in the direction in which it collects: separation lines along the flow, attachment lines
// against it.
type openLine struct {
	kind     Kind
	locs     []field.Loc
	exponent []float64 // power of e by which neighbours have come closer since the beginning
	end      int       // number of the point at which it ends; -1 for none
	words    string    // why it ends, if at none
	bundle   float64   // power of e by which the bundle came closer
}

func (o *openLine) gain() float64 {
	if len(o.exponent) == 0 {
		return 0
	}
	return o.exponent[len(o.exponent)-1]
}

// follow traces from the end of the chain at which the bundle is wide, as long as neighbours come closer on the whole.
func (b *builder) follow(ctx context.Context, r *ridge) openLine {
	backward := r.kind == AttachmentLine
	first := r.tris[0]
	if backward {
		first = r.tris[len(r.tris)-1]
	}
	from := field.Loc{Tri: first, Bary: [3]float64{1. / 3, 1. / 3, 1. / 3}}
	path := b.t.Trace(ctx, from, trace.Options{Backward: backward})
	o := openLine{kind: r.kind, locs: path.Locs, end: b.arrival(&path), words: b.endWords(&path)}
	o.exponent = b.rates.exponents(path.Locs)
	most := 0
	for i := range o.exponent {
		if !backward {
			o.exponent[i] = -o.exponent[i]
		}
		if o.exponent[i] > o.exponent[most] {
			most = i
		}
	}
	last := len(o.locs) - 1
	if last < 0 || path.End == trace.Cycle || path.End == trace.TooLong || o.exponent[last] < o.exponent[most]-clearExponent {
		o.locs, o.exponent = o.locs[:most+1], o.exponent[:most+1]
		o.end, o.words = -1, "where its neighbours stop coming closer"
		if backward {
			o.words = "where its neighbours stop parting"
		}
	} else if o.end >= 0 {
		o.locs = append(o.locs, b.s.Points[o.end].Loc)
		o.exponent = append(o.exponent, o.exponent[last])
	}
	return o
}

// own tells whether enough of the candidate is its own: not along another line of its kind, long, and collecting.
func (b *builder) own(o *openLine, near *nearness) bool {
	whole, own, gain := 0.0, 0.0, 0.0
	for i := 1; i < len(o.locs); i++ {
		ds := b.f.Position(o.locs[i]).Sub(b.f.Position(o.locs[i-1])).Norm()
		whole += ds
		p := b.f.Position(o.locs[i])
		if !near.has(o.locs[i].Tri) && !b.close(p, o.end) {
			own += ds
			gain += o.exponent[i] - o.exponent[i-1]
		}
	}
	return gain >= clearExponent && own >= float64(ownShare*whole) && own >= float64(leastLine*b.f.Diagonal())
}

// confirm traces a bundle: one curve on either side from the beginning, as far as the line goes. Both must come closer
// to it, by a factor of e together.
func (b *builder) confirm(ctx context.Context, o *openLine) bool {
	locs := o.locs
	for len(locs) > 2 && b.close(b.f.Position(locs[len(locs)-1]), o.end) { // everything meets at a node
		locs = locs[:len(locs)-1]
	}
	width := float64(bundleEdges * b.edge)
	sides, ok := b.bothSides(locs[0], width)
	for least := len(locs) / 2; !ok && len(locs) > max(least, 2); { // beside a rim there is no room for a bundle
		locs = locs[1:]
		sides, ok = b.bothSides(locs[0], width)
	}
	if !ok {
		return false
	}
	length := lengthOf(b.f, locs)
	o.bundle = 0
	for _, side := range sides {
		p := b.t.Trace(ctx, side, trace.Options{Backward: o.kind == AttachmentLine, MaxLength: length})
		least := width
		for _, l := range p.Locs[max(0, len(p.Locs)-lookBack):] {
			least = math.Min(least, b.distance(locs, b.f.Position(l)))
		}
		e := r3.Log(width / math.Max(least, float64(leastGap*b.edge)))
		if e < clearExponent/2. {
			return false
		}
		o.bundle += e / 2
	}
	return o.bundle >= clearExponent
}

// bothSides returns the places at the given distance to the left and the right of the flow; false where a rim is nearer.
func (b *builder) bothSides(at field.Loc, width float64) (sides [2]field.Loc, ok bool) {
	ok = true
	tau := b.f.At(at).Tau
	for i, sign := range [2]float64{1, -1} {
		var inside bool
		sides[i], inside = straight(b.f.Mesh, at, b.f.Lift(at.Tri, tau.Left().Scale(sign)), width)
		ok = ok && inside
	}
	return sides, ok
}

const (
	// lookBack is the number of places at the end of a bundle's curve that are measured.
	lookBack = 8
	// leastGap is the least distance in mean edges that is measured between curves.
	leastGap = 1e-3
)

// distance returns the distance of p from the polyline.
func (b *builder) distance(locs []field.Loc, p r3.Vec) float64 {
	least := math.Inf(1)
	q := b.f.Position(locs[0])
	for _, l := range locs[1:] {
		next := b.f.Position(l)
		d := next.Sub(q)
		u := footShare(q, d, p)
		least = math.Min(least, p.Sub(q.AddScaled(u, d)).Norm())
		q = next
	}
	return least
}

// footShare returns the share of the way d from a at which p is nearest, from 0 to 1.
func footShare(a, d, p r3.Vec) float64 {
	dd := d.Dot(d)
	if !(dd > 0) {
		return 0
	}
	return math.Min(1, math.Max(0, p.Sub(a).Dot(d)/dd))
}

// openLine makes a line of a confirmed candidate.
func (b *builder) openLine(o *openLine) Line {
	backward := o.kind == AttachmentLine
	path := trace.Path{Locs: o.locs}
	l := Line{Kind: o.kind, Type: Open, From: -1, To: o.end, Locs: ahead(&path, backward)}
	l.Length = lengthOf(b.f, l.Locs)
	l.Strength = math.Min(o.bundle, mostExponent)
	to := o.words
	if o.end >= 0 {
		to = fmt.Sprintf("%s %s", b.s.Points[o.end].Type, b.s.Points[o.end].ID)
	}
	factor := fold(l.Strength) + " or more" // the bundle's last gap is the least that is measured
	if backward {
		l.From, l.To = o.end, -1
		l.Reason = fmt.Sprintf("open: from %s, taken up by no saddle; the streamlines of a bundle across it part %s", to, factor)
		return l
	}
	l.Reason = fmt.Sprintf("open: from where streamlines begin to converge, at no critical point, to %s; a bundle across "+
		"it closes in %s", to, factor)
	return l
}

// nearness marks the triangles along lines.
type nearness struct {
	b    *builder
	mark []bool
}

func newNearness(b *builder) *nearness { return &nearness{b, make([]bool, len(b.f.Tris))} }

func (n *nearness) has(t int32) bool { return n.mark[t] }

// add marks what lies within a few edges of the line.
func (n *nearness) add(locs []field.Loc) {
	f := n.b.f
	reach := float64(joined * n.b.edge)
	seen := map[int32]bool{}
	for i, l := range locs {
		if i > 0 && l.Tri == locs[i-1].Tri {
			continue
		}
		p := f.Position(l)
		clear(seen)
		queue := []int32{l.Tri}
		seen[l.Tri] = true
		for k := 0; k < len(queue) && k < maxStraight; k++ {
			t := queue[k]
			n.mark[t] = true
			for h := 3 * t; h < 3*t+3; h++ {
				g := f.Twin[h]
				if g < 0 || seen[g/3] {
					continue
				}
				c := f.Corner(g / 3)
				if c.At(c.Nearest(p)).Sub(p).Norm() <= reach {
					seen[g/3] = true
					queue = append(queue, g/3)
				}
			}
		}
	}
}
