package topology

import (
	"cmp"
	"context"
	"fmt"
	"slices"
	"sync"

	"shearprint/field"
	"shearprint/field/r3"
)

// pointBlock is the number of points that one goroutine places at a time.
const pointBlock = 64

// pointsShare is the share of the time that the points take where lines are asked for too.
const pointsShare = 0.3

// Find returns the critical points of f with their ledger, and the lines if asked for. The only error is that of ctx:
// any field on any mesh has an answer.
func Find(ctx context.Context, f *field.Field, opt Options) (*Skeleton, error) {
	progress := opt.Progress
	if progress == nil {
		progress = func(float64) {}
	}
	c, err := readIndices(ctx, f)
	if err != nil {
		return nil, err
	}
	progress(pointsShare / 3)
	if err := c.joinKnots(ctx); err != nil {
		return nil, err
	}
	if err := c.findRobustness(ctx); err != nil {
		return nil, err
	}
	progress(pointsShare)
	s := &Skeleton{Field: f, Floor: opt.MinRobustness, count: c}
	c.set = sets{} // as large as the mesh, and done with
	if opt.Relative {
		s.Floor = float64(opt.MinRobustness * f.MaxTau)
	}
	if !(s.Floor > 0) { // not a number counts as no floor
		s.Floor = 0
	}
	kept := c.seeds[:0:0]
	for _, seed := range c.seeds {
		if c.level(seed.robust) >= s.Floor {
			kept = append(kept, seed)
		}
	}
	s.Cancelled = len(c.seeds) - len(kept)
	if s.Points, err = c.placeAll(ctx, kept); err != nil {
		return nil, err
	}
	s.order()
	if err := s.tellClose(ctx); err != nil {
		return nil, err
	}
	s.makeLedger(c)
	s.tellFindings()
	if opt.Lines {
		err := s.addLines(ctx, func(share float64) { progress(pointsShare + float64((1-pointsShare)*share)) })
		if err != nil {
			return nil, err
		}
	}
	progress(1)
	return s, nil
}

// placeAll finds place and kind of the seeds.
func (c *count) placeAll(ctx context.Context, seeds []seed) ([]Point, error) {
	points := make([]Point, len(seeds))
	z := normals()
	pool := sync.Pool{New: func() any { return c.placer(z) }} // a placer holds arrays of the mesh's size
	err := inBlocks(ctx, len(seeds), pointBlock, func(from, to int) {
		p := pool.Get().(*placer)
		for i := from; i < to; i++ {
			points[i] = p.place(&seeds[i])
		}
		pool.Put(p)
	})
	return points, err
}

// order sorts the points by type, then by falling robustness, the points that nothing cancels first, then by falling
// slope of tau, then by place, and names them.
func (s *Skeleton) order() {
	slices.SortFunc(s.Points, func(a, b Point) int {
		return cmp.Or(
			cmp.Compare(a.Type, b.Type), cmp.Compare(b.Robustness, a.Robustness),
			cmp.Compare(norm(b.Jacobian), norm(a.Jacobian)), compareVec(a.Position, b.Position),
			cmp.Compare(a.Patch[0], b.Patch[0]))
	})
	letters := [...]string{Node: "N", Focus: "F", Saddle: "S", Degenerate: "D"}
	var number [len(letters)]int
	for i := range s.Points {
		p := &s.Points[i]
		number[p.Type]++
		p.ID = fmt.Sprint(letters[p.Type], number[p.Type])
	}
}

func compareVec(a, b r3.Vec) int {
	return cmp.Or(cmp.Compare(a.X, b.X), cmp.Compare(a.Y, b.Y), cmp.Compare(a.Z, b.Z))
}

// closeEdges is the distance in mean edges below which two points cannot be told from one: the fit of each would use
// the other's vertices.
const closeEdges = 3

// tellClose marks the points that have another within closeEdges along the surface.
func (s *Skeleton) tellClose(ctx context.Context) error {
	owner := make([]int32, len(s.Field.Tris)) // number of the point in each triangle, from 1
	for i, p := range s.Points {
		owner[p.Loc.Tri] = int32(i + 1)
	}
	pool := sync.Pool{New: func() any { return newAround(s.Field) }}
	return inBlocks(ctx, len(s.Points), pointBlock, func(from, to int) {
		a := pool.Get().(*around)
		for i := from; i < to; i++ {
			p := &s.Points[i]
			for t := range a.near(closeEdges-1, p.Loc.Tri) {
				k := int(owner[t]) - 1
				if k < 0 || k == i {
					continue
				}
				q := &s.Points[k]
				if q.Position.Sub(p.Position).Norm() < float64(closeEdges*p.Size) {
					p.Resolved = false
					addNote(p, noteClose)
					break
				}
			}
		}
		pool.Put(a)
	})
}
