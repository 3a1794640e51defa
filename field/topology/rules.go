package topology

import (
	"fmt"
	"math"
)

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
