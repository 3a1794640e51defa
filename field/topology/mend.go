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

// mended is a field without its cancelled points: what the lines are traced on. It differs from the field in the regions
// below the level at which each group of points cancels: a component of {|tau| <= level} whose indices sum to zero, so
// that a field without zeros fits into it. There the direction of tau is interpolated from around the region, as evenly
// as may be; no streamline can end in it.
//
// That the disturbance which cancels a group stays in its component and below its level is the theorem behind
// robustness (Chazal, Skraba and Patel 2012; the way to use it for simplification: Skraba, Wang, Chen and Rosen 2015; both from
// memory). The construction by angles is our own: the turns along edges are lifted by whole turns, along the faintest
// shear between the points of the group, until no triangle has an index, and evened out by least squares, which changes
// no index.
type mended struct {
	f        *field.Field
	swings   map[int32]trace.Swing // of the triangles that need one; for looking up only
	in       []bool                // per triangle, whether it is in a region; nil if there is none
	regions  int
	left     int    // groups that could not be mended
	leftNear string // where the first of them is
}

// mender makes a mended field.
type mender struct {
	turner      // with the angles of the mended field
	c           *count
	out         mended
	size        []float64
	changed     []int32 // vertices
	local       []int32 // per triangle of the region at work, its number in it; -1 elsewhere
	unknown     []int32 // per vertex to be turned in the region at work, its number; -1 elsewhere
	tris        []int32 // the region at work
	index       []int   // per triangle of the region
	lift        []int   // per half-edge of the region, whole turns to add to its turn
	level       float64 // of the region at work, as a share of scale
	scale       float64
	equations   spring
	passageways []keyed
}

// mend takes out the points below the floor [unit of tau].
func (c *count) mend(ctx context.Context, floor float64) (*mended, error) {
	m := mender{turner: turner{f: c.f, angle: c.angle}, c: c, scale: c.f.MaxTau}
	m.out.f, m.out.swings = c.f, map[int32]trace.Swing{}
	var gone []int32
	for i := range c.seeds {
		if c.level(c.seeds[i].robust) < floor {
			gone = append(gone, int32(i))
		}
	}
	if m.scale == 0 {
		return &m.out, nil
	}
	if len(gone) == 0 {
		return &m.out, m.bend(ctx)
	}
	m.begin()
	// A region that grew out of another holds it as a whole.
	slices.SortStableFunc(gone, func(a, b int32) int { return cmp.Compare(c.seeds[b].robust, c.seeds[a].robust) })
	members := map[int32][]int32{} // seeds per group; for looking up only
	for _, i := range gone {
		if g := c.seeds[i].group; g >= 0 {
			members[g] = append(members[g], i)
		}
	}
	for _, i := range gone {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		s := &c.seeds[i]
		if m.out.in[s.tris[0]] {
			continue
		}
		group := members[s.group]
		if s.group < 0 {
			group = []int32{i}
		}
		m.gather(group)
		m.out.regions++
		if !m.mendRegion(ctx) {
			if m.out.left == 0 {
				m.out.leftNear = place(c.f.Corner(s.tris[0])[0])
			}
			m.out.left++
		}
		m.endRegion()
	}
	slices.Sort(m.changed)
	m.changed = slices.Compact(m.changed)
	m.out.f = m.f.Redirected(m.changed, func(v int32) (size, angle float64) { return m.size[v], m.angle[v] })
	return &m.out, m.bend(ctx)
}

func (m *mender) begin() {
	f := m.f
	m.angle = slices.Clone(m.angle)
	m.size = make([]float64, len(f.Points))
	m.local, m.unknown = make([]int32, len(f.Tris)), make([]int32, len(f.Points))
	for v := range m.size {
		m.size[v] = f.Size(int32(v))
		m.unknown[v] = -1
	}
	for t := range m.local {
		m.local[t] = -1
	}
	m.out.in = make([]bool, len(f.Tris))
}

// gather collects the region of a group: what is joined to its triangles at its level.
func (m *mender) gather(group []int32) {
	f := m.f
	m.level = m.c.seeds[group[0]].robust
	m.tris = m.tris[:0]
	add := func(t int32) {
		if m.local[t] < 0 {
			m.local[t] = int32(len(m.tris))
			m.tris = append(m.tris, t)
		}
	}
	for _, i := range group {
		for _, t := range m.c.seeds[i].tris {
			add(t)
			if m.c.seeds[i].knot == nil {
				continue
			}
			for _, v := range f.Tris[t] { // the triangles of a knot need not touch
				for h := range f.Fan(v) {
					add(h / 3)
				}
			}
		}
	}
	for i := 0; i < len(m.tris); i++ {
		for h := 3 * m.tris[i]; h < 3*m.tris[i]+3; h++ {
			if g := f.Twin[h]; g >= 0 && m.joins(min(h, g)) {
				add(g / 3)
			}
		}
	}
	for _, t := range m.tris {
		m.out.in[t] = true
	}
}

// joins tells whether the triangles beside an edge are one component at the region's level.
func (m *mender) joins(h int32) bool {
	return m.c.least(h, m.scale) <= m.level || math.Abs(m.c.turn(h)) > math.Pi-antiparallel
}

func (m *mender) endRegion() {
	for _, t := range m.tris {
		m.local[t] = -1
	}
	for _, v := range m.equations.vertices {
		m.unknown[v] = -1
	}
	m.equations.vertices = m.equations.vertices[:0]
}

// mendRegion takes the points out of the region at work; false, with nothing changed, where it cannot.
func (m *mender) mendRegion(ctx context.Context) bool {
	flipped, ok := m.flips()
	if !ok {
		return false
	}
	for _, v := range flipped {
		m.angle[v] += math.Pi
	}
	sum := 0
	m.index = m.index[:0]
	for _, t := range m.tris {
		i, _ := m.faceIndex(t)
		m.index = append(m.index, i)
		sum += i
	}
	if sum != 0 || !m.liftTurns() {
		for _, v := range flipped {
			m.angle[v] -= math.Pi
		}
		return false
	}
	m.changed = append(m.changed, flipped...)
	m.even(ctx)
	m.findSwings()
	return true
}

// flips lists the vertices on planes of symmetry at which tau must turn round for the half points of the region to
// vanish: those between two of them. False where what lies between is not in the region.
func (m *mender) flips() ([]int32, bool) {
	f := m.f
	var out []int32
	for i := range m.c.rims {
		r, edges := &m.c.rims[i], f.Rims[i].Edges
		if len(r.reversals) == 0 {
			continue
		}
		turns := make(map[int32]bool, len(r.reversals)) // half-edges; for looking up only
		for _, rev := range r.reversals {
			turns[rev.h] = true
		}
		for _, s := range r.stretches {
			flipping := false
			for k := range s.count {
				h := edges[(s.first+k)%len(edges)]
				if flipping {
					v := f.Tail(h)
					for g := range f.Fan(v) {
						if m.local[g/3] < 0 {
							return nil, false
						}
					}
					out = append(out, v)
				}
				if turns[h] && m.local[h/3] >= 0 {
					flipping = !flipping
				}
			}
			if flipping {
				return nil, false
			}
		}
	}
	return out, true
}

// liftTurns finds whole turns that leave no triangle of the region an index: along the tree of the least |tau|, from its
// leaves to its root. False where the region does not hang together.
func (m *mender) liftTurns() bool {
	f, n := m.f, len(m.tris)
	m.passageways = m.passageways[:0]
	for _, t := range m.tris {
		for h := 3 * t; h < 3*t+3; h++ {
			if g := f.Twin[h]; g > h && m.local[g/3] >= 0 {
				m.passageways = append(m.passageways, keyed{math.Float64bits(m.c.least(h, m.scale)), h})
			}
		}
	}
	slices.SortFunc(m.passageways, func(a, b keyed) int {
		return cmp.Or(cmp.Compare(a.key, b.key), cmp.Compare(a.half, b.half))
	})
	set := newSets(n)
	tree := make([]bool, 3*n) // per half-edge of the region
	m.lift = append(m.lift[:0], make([]int, 3*n)...)
	joined := 1
	for _, e := range m.passageways {
		h, g := e.half, f.Twin[e.half]
		if a, b := set.union(m.local[h/3], m.local[g/3]); a != b {
			tree[m.at(h)], tree[m.at(g)] = true, true
			joined++
		}
	}
	if joined < n {
		return false
	}
	order, parent := []int32{0}, make([]int32, n) // parent: the half-edge that leads to it
	parent[0] = -1
	for i := 0; i < len(order); i++ {
		t := m.tris[order[i]]
		for h := 3 * t; h < 3*t+3; h++ {
			if !tree[m.at(h)] || h == parent[order[i]] {
				continue
			}
			g := f.Twin[h]
			child := m.local[g/3]
			parent[child] = g
			order = append(order, child)
		}
	}
	for i := n - 1; i > 0; i-- {
		child := order[i]
		h, x := parent[child], m.index[child]
		g := f.Twin[h]
		m.lift[m.at(h)] -= x
		m.lift[m.at(g)] += x
		m.index[m.local[g/3]] += x
		m.index[child] = 0
	}
	return true
}

// at returns the number of half-edge h in the region.
func (m *mender) at(h int32) int32 { return 3*m.local[h/3] + h%3 }

// lifted returns how tau turns along half-edge h of the region, the long way round where it has to [rad].
func (m *mender) lifted(h int32) float64 {
	return m.turn(h) + float64(2*math.Pi*float64(m.lift[m.at(h)]))
}

// even turns tau at the vertices inside the region, as far as |tau| is below its level there, so that the squares of all turns
// add up to the least. The vertices get the region's level as |tau|.
func (m *mender) even(ctx context.Context) {
	f := m.f
	e := &m.equations
	least := math.Inf(1)
	for _, t := range m.tris {
		for _, v := range f.Tris[t] {
			if m.unknown[v] >= 0 {
				continue
			}
			if m.free(v) {
				m.unknown[v] = int32(len(e.vertices))
				e.vertices = append(e.vertices, v)
			} else if !f.IsZero(v) {
				least = math.Min(least, m.size[v])
			}
		}
	}
	e.reset()
	before := make([]float64, 0, 6*len(e.vertices)) // the turns along the half-edges that leave each of them
	for _, v := range e.vertices {
		for h := range f.Fan(v) {
			w := m.lifted(h)
			before = append(before, w)
			e.add(m.unknown[f.Tip(h)], w)
		}
		e.endRow()
	}
	e.solve(ctx)
	level := float64(m.level * m.scale)
	if level < float64(leastMended*m.scale) { // a patch of zeros: any size does
		level = math.Min(least, m.scale)
	}
	turned := e.x
	for i, v := range e.vertices {
		m.angle[v] = r3.Wrap(m.angle[v] + turned[i])
		m.size[v] = level
	}
	m.changed = append(m.changed, e.vertices...)
	// The whole turns are those that the new angles leave.
	row := 0
	for i, v := range e.vertices {
		for h := range f.Fan(v) {
			w := before[row] - turned[i]
			if k := m.unknown[f.Tip(h)]; k >= 0 {
				w += turned[k]
			}
			row++
			n := int(math.Round((w - m.turn(h)) / (2 * math.Pi)))
			m.lift[m.at(h)], m.lift[m.at(f.Twin[h])] = n, -n
		}
	}
}

// leastMended is the share of the largest |tau| below which a level is too faint to be given to vertices.
const leastMended = 1e-9

// free tells whether tau may be turned at v: inside the region, and no stronger than its level.
func (m *mender) free(v int32) bool {
	f := m.f
	if f.OnRim(v) || !f.IsZero(v) && f.Size(v)/m.scale > m.level {
		return false
	}
	for h := range f.Fan(v) {
		if m.local[h/3] < 0 {
			return false
		}
	}
	return true
}

// swingOf returns how tau turns in a triangle without an index, given how it turns along its edges, where interpolated vectors
// do not tell: if they give the triangle another index than the turns do, or turn round at once.
func (m *mender) swingOf(t int32, turn [3]float64) (trace.Swing, bool) {
	f := m.f
	var flat, plain, in [3]float64
	sharp, sum := false, 0.0
	for k := range int32(3) {
		flat[k] = f.FlatAngle(3*t+k, m.angle[f.Tris[t][k]])
	}
	for k := range 3 {
		plain[k] = r3.Wrap(flat[(k+1)%3] - flat[k])
		sum += plain[k]
		sharp = sharp || math.Abs(turn[k]) > trace.SharpTurn
	}
	if !sharp && math.Abs(sum) < math.Pi {
		return trace.Swing{}, false
	}
	// In the flat frame tau turns by as much as along the edges but for the angle defects at the corners.
	sum = 0
	worst, most := 0, -1.0
	for k := range 3 {
		in[k] = turn[k] + r3.Wrap(plain[k]-turn[k])
		sum += in[k]
		if d := math.Abs(in[k] - turn[k]); d > most {
			worst, most = k, d
		}
	}
	in[worst] -= sum // a whole number of turns
	return trace.Swing{Angle: [3]float64{flat[0], flat[0] + in[0], flat[0] + in[0] + in[1]}, Turn: turn}, true
}

// findSwings lists the triangles of the region in which interpolated vectors do not tell how tau turns.
func (m *mender) findSwings() {
	for _, t := range m.tris {
		turn := [3]float64{m.lifted(3 * t), m.lifted(3*t + 1), m.lifted(3*t + 2)}
		if s, ok := m.swingOf(t, turn); ok {
			m.out.swings[t] = s
		}
	}
}

// steepTurn is the turn along an edge [rad] from which on the flatness of a triangle may make tau go another way round: the
// angle defects of decent meshes are far below a quarter of a turn.
const steepTurn = math.Pi / 2

// bend finds the swings of all triangles outside regions: where they are missing, lines end at zeros that no point
// accounts for, and that are none on the curved surface.
func (m *mender) bend(ctx context.Context) error {
	f, n := m.f, len(m.f.Tris)
	type found struct {
		t int32
		s trace.Swing
	}
	blocks := make([][]found, (n+faceBlock-1)/faceBlock)
	err := inBlocks(ctx, n, faceBlock, func(from, to int) {
		for t := int32(from); t < int32(to); t++ {
			turn := [3]float64{m.turn(3 * t), m.turn(3*t + 1), m.turn(3*t + 2)}
			if math.Max(math.Abs(turn[0]), math.Max(math.Abs(turn[1]), math.Abs(turn[2]))) < steepTurn ||
				m.out.in != nil && m.out.in[t] || slices.ContainsFunc(f.Tris[t][:], f.IsZero) {
				continue
			}
			if i, _ := m.faceIndex(t); i != 0 {
				continue
			}
			if s, ok := m.swingOf(t, turn); ok {
				blocks[from/faceBlock] = append(blocks[from/faceBlock], found{t, s})
			}
		}
	})
	for _, b := range blocks {
		for _, x := range b {
			m.out.swings[x.t] = x.s
		}
	}
	return err
}

// crossing returns the share of the line's length on which it crosses mended regions.
func (m *mended) crossing(locs []field.Loc) float64 {
	if m.in == nil {
		return 0
	}
	whole, inside := 0.0, 0.0
	for i := 1; i < len(locs); i++ {
		ds := m.f.Position(locs[i]).Sub(m.f.Position(locs[i-1])).Norm()
		whole += ds
		if m.in[locs[i].Tri] && m.in[locs[i-1].Tri] {
			inside += ds
		}
	}
	if whole == 0 {
		return 0
	}
	return inside / whole
}

// tellMended tells how much of the surface lines cross without data, and which lines do.
func (b *builder) tellMended() {
	m := b.mended
	if m.in == nil {
		return
	}
	area, all, where := 0.0, 0.0, ""
	for t, in := range m.in {
		a := b.f.Area(int32(t))
		all += a
		if in {
			area += a
			if where == "" {
				where = place(b.f.Corner(int32(t))[0])
			}
		}
	}
	b.s.tell(field.Doubtful, "mended-regions", m.regions, where, "below the noise floor tau was interpolated from around %s of "+
		"cancelled points, %.2g %% of the surface, so that lines go on across", plural(m.regions, "region"), 100*area/all)
	if m.left > 0 {
		b.s.tell(field.Doubtful, "regions-not-mended", m.left, m.leftNear, "%s of cancelled points could not be interpolated: "+
			"lines may end there", plural(m.left, "region"))
	}
	for i := range b.s.Lines {
		l := &b.s.Lines[i]
		if share := m.crossing(l.Locs); share >= toldCrossing {
			l.Reason += fmt.Sprintf("; %.0f %% of it crosses shear below the noise floor, where its way is interpolated", 100*share)
		}
	}
}

// toldCrossing is the share of a line on interpolated tau from which on it is told.
const toldCrossing = 0.01
