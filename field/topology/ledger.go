package topology

import (
	"fmt"
	"math"
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

// rule says in words what the part's topology demands.
func (s *Skeleton) rule(p *PartLedger) string {
	part := s.Field.Parts[p.Part]
	sum := "nodes + foci - saddles"
	for _, r := range p.Rims {
		if r.Reversals > 0 {
			sum = "nodes + foci + half nodes/2 - saddles - half saddles/2"
			break
		}
	}
	demand := fmt.Sprintf("%s = %s", sum, number(p.Expected))
	if len(p.Rims) == 0 {
		return closedRule(part.Genus) + ": " + demand
	}
	in, out, streamline, symmetric := 0, 0, 0, false
	for _, r := range p.Rims {
		in += r.Interior
		out += r.Exterior
		if r.Streamline {
			streamline++
		}
		symmetric = symmetric || r.Reversals > 0
	}
	kind := fmt.Sprintf("patch with %s (Euler characteristic %d)", plural(len(p.Rims), "rim"), p.Euler)
	switch {
	case streamline == len(p.Rims) && symmetric:
		kind += ", cut along its plane of symmetry, where tau runs along the rim"
	case streamline == len(p.Rims):
		kind += ", tau runs along the whole rim"
	default:
		kind += fmt.Sprintf(", where tau touches the rim %d times from inside and %d times from outside", in, out)
	}
	if p.Euler == 1 && len(p.Rims) == 1 && p.BoundaryTerm == -1 && !symmetric {
		kind = "body on a wall in a stream (Hunt, Abell, Peterka and Woo 1978), or any " + kind
	}
	return kind + ": " + demand
}

// closedRule names a closed body.
func closedRule(genus int) string {
	switch genus {
	case 0:
		return "isolated body (Davey 1961, Lighthill 1963)"
	case 1:
		return "isolated body with a hole through it (Hunt, Abell, Peterka and Woo 1978)"
	}
	return fmt.Sprintf("isolated body with %d holes through it (Poincare and Hopf)", genus)
}

// number writes a whole number of halves.
func number(x float64) string {
	if x == math.Trunc(x) {
		return fmt.Sprintf("%d", int(x))
	}
	return fmt.Sprintf("%.1f", x)
}

func plural(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}
