package study

import (
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"

	"shearprint/field/topology"
)

// Balance is the balance of a reading made by eye: "shearprint/ledger/1".
type Balance struct {
	Schema      string        `json:"schema"`
	Body        topology.Body `json:"body"`
	Nodes       int           `json:"nodes"`
	Foci        int           `json:"foci"`
	Saddles     int           `json:"saddles"`
	HalfNodes   int           `json:"half_nodes"`
	HalfSaddles int           `json:"half_saddles"`
	Holes       int           `json:"holes"`
	Section     bool          `json:"section"`
	IndexSum    Number        `json:"index_sum"`
	Expected    Number        `json:"expected"`
	Balanced    bool          `json:"balanced"`
	Rule        string        `json:"rule"`
	Missing     string        `json:"missing"`    // what would close the gap, in words; empty if balanced
	OtherRule   string        `json:"other_rule"` // another rule that the reading would obey; empty if none
}

// handArguments are the arguments of the call "ledger"; handNames are their names.
type handArguments struct {
	Body        *topology.Body `json:"body"`
	Nodes       int            `json:"nodes"`
	Foci        int            `json:"foci"`
	Saddles     int            `json:"saddles"`
	HalfNodes   int            `json:"half_nodes"`
	HalfSaddles int            `json:"half_saddles"`
	Holes       int            `json:"holes"`
	Section     bool           `json:"section"`
	Rim         string         `json:"rim"` // "across", the default, or "one-way"
	Interior    *int           `json:"interior"`
	Exterior    *int           `json:"exterior"`
}

var handNames = []string{
	"body", "nodes", "foci", "saddles", "half_nodes", "half_saddles", "holes", "section", "rim", "interior", "exterior",
}

// rimWords are the words for the rim of a patch, in the order of topology.Rim.
var rimWords = []string{"across", "one-way"}

// ParseRim reads how the stream meets a patch's rim: "across" or "one-way".
func ParseRim(s string) (topology.Rim, error) {
	i := slices.Index(rimWords, s)
	if i < 0 {
		return 0, fmt.Errorf("%q: give %s", s, strings.Join(rimWords, " or "))
	}
	return topology.Rim(i), nil
}

func (a *handArguments) hand() (topology.Hand, error) {
	if a.Body == nil {
		return topology.Hand{}, errors.New(`the body is missing: give {"body": "isolated"}, "on-wall" or "patch"`)
	}
	h := topology.Hand{
		Body: *a.Body, Nodes: a.Nodes, Foci: a.Foci, Saddles: a.Saddles, HalfNodes: a.HalfNodes, HalfSaddles: a.HalfSaddles,
		Holes: a.Holes, Section: a.Section,
	}
	if a.Rim != "" {
		var err error
		if h.Rim, err = ParseRim(a.Rim); err != nil {
			return h, fmt.Errorf("rim: %w", err)
		}
	}
	for _, n := range []struct {
		given *int
		into  *int
	}{{a.Interior, &h.Interior}, {a.Exterior, &h.Exterior}} {
		if n.given != nil {
			*n.into = *n.given
			h.Rim = topology.Counted
		}
	}
	return h, CheckHand(h)
}

// mostPoints keeps sums of counts within an integer of any machine.
const mostPoints = 1_000_000

// CheckHand refuses numbers that are no counts.
func CheckHand(h topology.Hand) error {
	for _, n := range []int{h.Nodes, h.Foci, h.Saddles, h.HalfNodes, h.HalfSaddles, h.Holes, h.Interior, h.Exterior} {
		if n < 0 || n > mostPoints {
			return fmt.Errorf("%d is no number of points; count again", n)
		}
	}
	return nil
}

// ByHand balances a reading made by eye.
func ByHand(h topology.Hand) *Balance {
	v := topology.Decide(h)
	return &Balance{
		Schema: "shearprint/ledger/1", Body: h.Body, Nodes: h.Nodes, Foci: h.Foci, Saddles: h.Saddles,
		HalfNodes: h.HalfNodes, HalfSaddles: h.HalfSaddles, Holes: h.Holes, Section: h.Section,
		IndexSum: Number(v.Sum), Expected: Number(v.Expected), Balanced: v.Balanced, Rule: v.Rule, Missing: v.Missing,
		OtherRule: v.Other,
	}
}

// WriteText writes the verdict in a few lines.
func (b *Balance) WriteText(w io.Writer) error {
	s := &sheet{w: w}
	verdict := "The ledger balances"
	if !b.Balanced {
		verdict = "THE LEDGER DOES NOT BALANCE"
	}
	s.line("%s: the indices sum to %s, and %s is demanded.", verdict, num(b.IndexSum), num(b.Expected))
	s.para("  rule     ", b.Rule)
	if b.Missing != "" {
		s.para("  missing  ", b.Missing)
	}
	if b.OtherRule != "" {
		s.para("  but      ", "the reading obeys another rule: "+b.OtherRule)
	}
	return s.err
}
