package topology

import (
	"fmt"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

const (
	// clearExponent is the power of e by which neighbours must come closer, or part, along a line for it to have a kind: at
	// less than a factor of e nobody would see a line in the pattern of streamlines.
	clearExponent = 1
	// clearShare is the share of a line's length along which its kind must rule.
	clearShare = 0.5
	// nearPoint is how many edges from a critical point are left out: all lines converge at a stable node, and nothing
	// follows from that for one of them.
	nearPoint = 2
	// mostExponent bounds the strength that is told: e^20 is beyond what double precision can follow.
	mostExponent = 20
)

// contraction is what a line does to the streamlines beside it.
type contraction struct {
	total    float64 // power of e by which neighbours part (positive) or come closer (negative) on the whole line
	part     float64 // share of the length on which neighbours part, and do so faster than the flow along the line grows
	approach float64 // share of the length on which they come closer, likewise
}

// contraction measures what the line does to its neighbours, away from critical points.
func (b *builder) contraction(locs []field.Loc, from, to int) contraction {
	var c contraction
	e := b.rates.exponents(locs)
	whole := 0.0
	for i := 1; i < len(locs); i++ {
		p := b.f.Position(locs[i])
		ds := p.Sub(b.f.Position(locs[i-1])).Norm()
		if b.close(p, from) || b.close(p, to) {
			continue
		}
		whole += ds
		c.total += e[i] - e[i-1]
		across, along := b.rates.at(b.rates.across, locs[i]), b.rates.at(b.rates.along, locs[i])
		switch {
		case across > math.Max(0, along):
			c.part += ds
		case across < math.Min(0, along):
			c.approach += ds
		}
	}
	if whole > 0 {
		c.part /= whole
		c.approach /= whole
	}
	return c
}

func (b *builder) close(p r3.Vec, point int) bool {
	if point < 0 {
		return false
	}
	q := &b.s.Points[point]
	return p.Sub(q.Position).Norm() < float64(nearPoint*q.Size)
}

// setKind gives the line the kind that rules along it: by what its neighbours do on the whole, and on most of its length.
func (b *builder) setKind(l *Line) contraction {
	c := b.contraction(l.Locs, l.From, l.To)
	l.Strength = math.Min(math.Abs(c.total), mostExponent)
	l.Kind = NoKind
	switch {
	case c.total <= -clearExponent && c.approach >= clearShare:
		l.Kind = SeparationLine
	case c.total >= clearExponent && c.part >= clearShare:
		l.Kind = AttachmentLine
	}
	return c
}

// words tells in words why the line has its kind.
func (c contraction) words(k Kind) string {
	factor := fold(c.total)
	switch k {
	case SeparationLine:
		return fmt.Sprintf("neighbouring streamlines close in on it %s, along %.0f %% of its length", factor, 100*c.approach)
	case AttachmentLine:
		return fmt.Sprintf("neighbouring streamlines part from it %s, along %.0f %% of its length", factor, 100*c.part)
	}
	if c.approach == 0 && c.part == 0 {
		return "its neighbours neither close in nor part clearly"
	}
	what := "close in"
	if c.total > 0 {
		what = "part"
	}
	return fmt.Sprintf("neither kind is clear: its neighbours close in along %.0f %% of its length and part along %.0f %%, "+
		"and %s %s in all", 100*c.approach, 100*c.part, what, factor)
}

// fold tells in words the factor whose natural logarithm is given: how many times neighbours come closer or part.
func fold(exponent float64) string {
	e := math.Abs(exponent)
	if e > mostExponent {
		return "beyond measure"
	}
	return fmt.Sprintf("%.2g-fold", r3.Exp(e))
}

// explain tells type and kind of a separatrix in words.
func (b *builder) explain(l *Line, c contraction, st start, end string) {
	saddle := b.s.Points[st.point].ID
	other := l.To
	if st.backward {
		other = l.From
	}
	to := end
	if other >= 0 {
		p := &b.s.Points[other]
		to = fmt.Sprintf("%s %s", p.Type, p.ID)
	}
	way := fmt.Sprintf("from saddle %s to %s", saddle, to)
	if st.backward {
		way = fmt.Sprintf("to saddle %s from %s", saddle, to)
	}
	l.Reason = fmt.Sprintf("%s, %s; %s", l.Type, way, c.words(l.Kind))
}
