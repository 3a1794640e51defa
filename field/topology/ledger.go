package topology

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"
)

// makeLedger fills the balance per part and in all.
func (s *Skeleton) makeLedger(c *count) {
	parts := make([]PartLedger, len(s.Field.Parts))
	for i := range parts {
		parts[i].Part = int32(i)
		parts[i].Euler = s.Field.Parts[i].Euler
	}
	for i := range c.rims {
		p := &parts[s.Field.Rims[i].Part]
		p.Rims = append(p.Rims, c.rims[i].RimLedger)
		p.BoundaryTerm += c.rims[i].Term
	}
	s.Ledger = Ledger{Parts: parts}
	s.Ledger = s.LedgerAt(0)
}

// LedgerAt returns the ledger of the points with robustness of at least floor [unit of tau]: what Find returns for that
// floor, without computing it anew. Points leave in groups whose indices sum to zero, so the balance stays.
func (s *Skeleton) LedgerAt(floor float64) Ledger {
	l := Ledger{Parts: make([]PartLedger, len(s.Ledger.Parts))}
	for i, p := range s.Ledger.Parts {
		l.Parts[i] = PartLedger{Part: p.Part, Euler: p.Euler, Rims: p.Rims}
		l.Parts[i].BoundaryTerm = p.BoundaryTerm
	}
	for i := range s.Points {
		if p := &s.Points[i]; !(p.Robustness < floor) {
			l.Parts[p.Part].add(p)
		}
	}
	l.Balanced = true
	for i := range l.Parts {
		p := &l.Parts[i]
		p.close(p.Euler)
		p.Rule = s.rule(p)
		l.join(&p.Count)
	}
	l.Rule = l.Parts[0].Rule
	if len(l.Parts) > 1 {
		var words []string
		for i := range l.Parts {
			words = append(words, fmt.Sprintf("part %d: %s", i, l.Parts[i].Rule))
		}
		l.Rule = strings.Join(words, "; ")
	}
	return l
}

// add counts a point.
func (c *Count) add(p *Point) {
	full := [...]*int{Node: &c.Nodes, Focus: &c.Foci, Saddle: &c.Saddles, Degenerate: &c.Degenerate}
	half := [...]*int{Node: &c.HalfNodes, Focus: &c.HalfNodes, Saddle: &c.HalfSaddles, Degenerate: &c.HalfDegenerate}
	if p.Half {
		*half[p.Type]++
		c.IndexSum += float64(p.Index) / 2
		return
	}
	*full[p.Type]++
	c.IndexSum += float64(p.Index)
}

// close computes what is expected. All numbers are whole halves, so that they compare exactly.
func (c *Count) close(euler int) {
	c.Expected = float64(euler) + c.BoundaryTerm
	c.Balanced = c.IndexSum == c.Expected
}

// join adds another part's count.
func (c *Count) join(p *Count) {
	c.Nodes += p.Nodes
	c.Foci += p.Foci
	c.Saddles += p.Saddles
	c.Degenerate += p.Degenerate
	c.HalfNodes += p.HalfNodes
	c.HalfSaddles += p.HalfSaddles
	c.HalfDegenerate += p.HalfDegenerate
	c.IndexSum += p.IndexSum
	c.BoundaryTerm += p.BoundaryTerm
	c.Expected += p.Expected
	c.Balanced = c.Balanced && p.Balanced
}

// Level is a robustness at which points cancel one another.
type Level struct {
	Robustness float64 // [unit of tau]
	// Points holds the numbers in Skeleton.Points of those that cancel together, ascending: two as a rule; their indices
	// sum to zero.
	Points []int
}

// Levels lists what cancels as a floor of robustness rises: the points leave the ledger once the floor is above their
// level. Ascending.
func (s *Skeleton) Levels() []Level {
	var levels []Level
	number := map[int32]int{} // of the level by group; for looking up only
	for i, p := range s.Points {
		switch k, ok := number[p.group]; {
		case p.group < 0 && !math.IsInf(p.Robustness, 1): // of index zero: it needs no partner
			levels = append(levels, Level{p.Robustness, []int{i}})
		case p.group < 0:
		case ok:
			levels[k].Points = append(levels[k].Points, i)
		default:
			number[p.group] = len(levels)
			levels = append(levels, Level{p.Robustness, []int{i}})
		}
	}
	slices.SortFunc(levels, func(a, b Level) int {
		return cmp.Or(cmp.Compare(a.Robustness, b.Robustness), cmp.Compare(a.Points[0], b.Points[0]))
	})
	return levels
}
