package topology

import (
	"fmt"
	"math"
)

// Body says what a reading made by eye is a reading of.
type Body uint8

// The bodies of Hand.
const (
	Isolated Body = iota // a whole body in the stream
	OnWall               // a body on a wall that runs on to all sides, together with the wall
	Patch                // a piece of a surface, with a rim
)

var bodyWords = words{"body", []string{"isolated", "on-wall", "patch"}}

// String returns the word used on the command line.
func (b Body) String() string { return bodyWords.name(uint8(b)) }

// MarshalText returns the word used on the command line.
func (b Body) MarshalText() ([]byte, error) { return []byte(b.String()), nil }

// UnmarshalText reads the word used on the command line.
func (b *Body) UnmarshalText(text []byte) error {
	i, err := bodyWords.find(text)
	*b = Body(i)
	return err
}

// Rim says how the stream meets the rim of a Patch.
type Rim uint8

// The rims of Hand.
const (
	StreamAcross Rim = iota // the stream enters on one side and leaves on the other: two exterior tangencies
	OneWay                  // it only enters, only leaves, or runs along the rim: no tangency
	Counted                 // Hand tells the tangencies
)

// Hand is a reading made by eye, say of an oil-flow picture.
type Hand struct {
	Body                 Body
	Nodes, Foci, Saddles int // without half points; foci may be counted among the nodes
	HalfNodes            int // on a cut: a plane of symmetry, or the walls of a plane section
	HalfSaddles          int
	Holes                int // right through the body; in a patch, holes in it besides its outer rim
	Section              bool
	Rim                  Rim
	Interior, Exterior   int // tangencies of a Patch whose rim is Counted
}

// Verdict says which rule a reading made by eye must obey, and what is missing.
type Verdict struct {
	Rule     string  // in words
	Sum      float64 // nodes + foci + half nodes/2 - saddles - half saddles/2
	Expected float64
	Balanced bool
	Missing  string // in words; "" if balanced
	Other    string // another rule that the reading would obey, in words; "" if none
}

// Decide balances a reading made by eye.
//
// Whole surfaces: an isolated body has nodes + foci - saddles = 2 (Davey 1961, Lighthill 1963), a body on a wall 0, a
// hole through either takes 2 away (Hunt, Abell, Peterka and Woo, Journal of Fluid Mechanics 86, 1978), a patch has
// its Euler characteristic + (interior - exterior tangencies)/2 (Poincare 1885). With half points and without Section
// the reading is of one half of a symmetric surface, and half of that is expected. With Section it is of the
// streamlines in a plane that cuts bodies and walls, where Hunt and his colleagues expect 1 - n: -1 through an
// isolated body, 0 through a wall with or without a body on it.
func Decide(h Hand) Verdict {
	v := h.byRule(h.Section)
	if !v.Balanced && h.HalfNodes+h.HalfSaddles > 0 {
		if other := h.byRule(!h.Section); other.Balanced {
			v.Other = other.Rule
		}
	}
	if v.Balanced {
		return v
	}
	for _, b := range [...]Body{Isolated, OnWall} {
		if o := h; b != h.Body && v.Other == "" {
			o.Body = b
			if other := o.byRule(o.Section); other.Balanced {
				v.Other = other.Rule
			}
		}
	}
	return v
}

func (h Hand) byRule(section bool) Verdict {
	v := Verdict{Sum: float64(h.Nodes+h.Foci-h.Saddles) + float64(h.HalfNodes-h.HalfSaddles)/2}
	sum := "nodes + foci - saddles"
	halves := h.HalfNodes+h.HalfSaddles > 0
	if halves || section {
		sum = "nodes + foci + half nodes/2 - saddles - half saddles/2"
	}
	if section {
		v.Rule, v.Expected = h.section()
	} else {
		v.Rule, v.Expected = h.surface()
		if halves {
			v.Rule = "half of a symmetric surface, cut along its plane of symmetry: " + v.Rule
			v.Expected /= 2
		}
	}
	v.Rule += fmt.Sprintf(": %s = %s", sum, number(v.Expected))
	v.Balanced = v.Sum == v.Expected
	v.Missing = missing(v.Expected - v.Sum)
	return v
}

// surface returns the rule for the whole surface.
func (h Hand) surface() (string, float64) {
	switch h.Body {
	case Isolated:
		return closedRule(h.Holes), float64(2 - 2*h.Holes)
	case OnWall:
		rule := "body on a wall (Hunt, Abell, Peterka and Woo 1978)"
		if h.Holes > 0 {
			rule = fmt.Sprintf("body with %s through it on a wall (Hunt, Abell, Peterka and Woo 1978)", plural(h.Holes, "hole"))
		}
		return rule, float64(-2 * h.Holes)
	}
	in, out := h.Interior, h.Exterior
	why := fmt.Sprintf("tau touches the rim %s from inside and %s from outside", howOften(in), howOften(out))
	switch h.Rim {
	case StreamAcross:
		in, out, why = 0, 2, "the stream enters on one side and leaves on the other"
	case OneWay:
		in, out, why = 0, 0, "the stream crosses the rim one way only, or runs along it"
	}
	euler := 1 - h.Holes
	return fmt.Sprintf("patch of Euler characteristic %d, where %s (Poincare 1885)", euler, why),
		float64(euler) + float64(in-out)/2
}

// section returns the rule for the streamlines in a plane section.
func (h Hand) section() (string, float64) {
	if h.Body == Isolated {
		return "plane section through an isolated body (Hunt, Abell, Peterka and Woo 1978)", float64(-1 - h.Holes)
	}
	return "plane section through a wall (Hunt, Abell, Peterka and Woo 1978)", float64(-h.Holes)
}

func howOften(n int) string {
	switch n {
	case 0:
		return "never"
	case 1:
		return "once"
	}
	return fmt.Sprintf("%d times", n)
}

// missing says what would close a gap between expected and found.
func missing(gap float64) string {
	if gap == 0 {
		return ""
	}
	what, other := "node or focus", "saddle"
	if gap < 0 {
		what, other = other, what
	}
	n := math.Abs(gap)
	if n == math.Trunc(n) {
		if n == 1 {
			return fmt.Sprintf("one %s is missing, or one %s too many was read", what, other)
		}
		return fmt.Sprintf("%d more of the kind %s are missing, or %d too many of the kind %s were read",
			int(n), what, int(n), other)
	}
	return fmt.Sprintf("%s of the kind %s is missing (half points count one half), or as much of the kind %s is too many",
		number(n), what, other)
}
