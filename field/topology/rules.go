package topology

import (
	"fmt"
	"math"
)

// rule says in words what the part's topology demands.
func (s *Skeleton) rule(p *PartLedger) string {
	if len(p.Rims) == 0 {
		return fmt.Sprintf("%s: nodes + foci - saddles = %s", closedRule(s.Field.Parts[p.Part].Genus), number(p.Expected))
	}
	in, out, along, reversals := 0, 0, 0, 0
	for _, r := range p.Rims {
		in += r.Interior
		out += r.Exterior
		reversals += r.Reversals
		if r.Streamline {
			along++
		}
	}
	sum := "nodes + foci - saddles"
	if reversals > 0 {
		sum = "nodes + foci + half nodes/2 - saddles - half saddles/2"
	}
	kind := fmt.Sprintf("patch with %s (Euler characteristic %d), ", plural(len(p.Rims), "rim"), p.Euler)
	if along == len(p.Rims) {
		kind += "tau runs along the whole rim"
	} else {
		kind += fmt.Sprintf("tau touches the rim %s from inside and %s from outside", howOften(in), howOften(out))
	}
	if p.Euler == 1 && len(p.Rims) == 1 {
		kind = bodyOf(p.BoundaryTerm, reversals > 0, in > 0) + kind
	}
	return fmt.Sprintf("%s: %s = %s", kind, sum, number(p.Expected))
}

// bodyOf names what a patch without holes may be a picture of, by the term of its rim; "" if nothing in particular.
func bodyOf(term float64, half, back bool) string {
	switch {
	case half && term == 0:
		return "half of an isolated body, cut along its plane of symmetry; "
	case half && term == -1:
		return "half of a body on a wall, cut along its plane of symmetry (Hunt, Abell, Peterka and Woo 1978); "
	case half:
		return "cut along a plane of symmetry; "
	case term == -1:
		return "body on a wall, or any patch, with a stream across (Hunt, Abell, Peterka and Woo 1978); "
	case term > -1 && back:
		return "a body on a wall would have 0 (Hunt, Abell, Peterka and Woo 1978), but here the flow turns back across the " +
			"rim; "
	}
	return ""
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
