package study

import (
	"cmp"
	"fmt"
	"io"
	"math"
	"slices"
	"strings"

	"shearprint/field/topology"
)

// WriteText writes the reading as a surveyor's report: what there is, what separates where and how, what is doubtful.
func (t *Topology) WriteText(w io.Writer) error {
	s := &sheet{w: w}
	s.title("the surface pattern of wall shear", t.Run)
	s.line("")
	s.para("", t.verdict())
	t.Ledger.write(s)
	t.writePoints(s)
	t.writeLines(s, topology.SeparationLine, "What separates")
	t.writeLines(s, topology.AttachmentLine, "What attaches")
	t.writeOthers(s)
	t.writeDoubts(s)
	return s.err
}

func (t *Topology) verdict() string {
	words := t.Ledger.verdict()
	if t.CancelledPoints > 0 {
		words += fmt.Sprintf(" %s weaker than %s, cancelled in balanced groups.",
			count(t.CancelledPoints, "point is left out as", "points are left out as"), with(t.Floor, t.Run.TauUnit))
	}
	return words
}

func (c *Count) verdict() string {
	things := []string{count(c.Nodes, "node", "nodes"), count(c.Foci, "focus", "foci"), count(c.Saddles, "saddle", "saddles")}
	for _, x := range []struct {
		n         int
		one, many string
	}{
		{c.HalfNodes, "half node", "half nodes"}, {c.HalfSaddles, "half saddle", "half saddles"},
		{c.Degenerate, "degenerate point", "degenerate points"},
		{c.HalfDegenerate, "degenerate half point", "degenerate half points"},
	} {
		if x.n > 0 {
			things = append(things, count(x.n, x.one, x.many))
		}
	}
	verdict := "The ledger balances"
	if !c.Balanced {
		verdict = "THE LEDGER DOES NOT BALANCE"
	}
	last := len(things) - 1
	return fmt.Sprintf("%s: %s and %s. The indices sum to %s, the surface demands %s.", verdict,
		strings.Join(things[:last], ", "), things[last], num(c.IndexSum), num(c.Expected))
}

// signed prints a number with its sign, zero without.
func signed(x float64) string {
	if x == 0 {
		return "0"
	}
	return fmt.Sprintf("%+g", x)
}

// write writes the account: what the points add up to, what the surface demands and why, part by part.
func (l *Ledger) write(s *sheet) {
	s.heading("Ledger")
	rows := [][]string{{"", "number", "each", "sum"}}
	for _, r := range []struct {
		name string
		n    int
		each float64
	}{
		{"nodes", l.Nodes, 1}, {"foci", l.Foci, 1}, {"half nodes", l.HalfNodes, 0.5},
		{"saddles", l.Saddles, -1}, {"half saddles", l.HalfSaddles, -0.5},
	} {
		if r.n > 0 || math.Abs(r.each) == 1 {
			rows = append(rows, []string{r.name, fmt.Sprint(r.n), signed(r.each),
				signed(float64(r.n) * r.each)})
		}
	}
	if n := l.Degenerate + l.HalfDegenerate; n > 0 {
		simple := float64(l.Nodes+l.Foci-l.Saddles) + float64(l.HalfNodes-l.HalfSaddles)/2
		rows = append(rows, []string{"degenerate", fmt.Sprint(n), "", signed(float64(l.IndexSum) - simple)})
	}
	rows = append(rows, []string{"sum of indices", "", "", signed(float64(l.IndexSum))},
		[]string{"demanded", "", "", signed(float64(l.Expected))})
	s.table(rows)
	if len(l.Parts) < 2 {
		s.para("  ", l.Rule)
		return
	}
	parts := [][]string{{"part", "nodes", "foci", "saddles", "half", "sum", "demanded", "verdict"}}
	for _, p := range l.Parts {
		verdict := "balances"
		if !p.Balanced {
			verdict = "DOES NOT BALANCE"
		}
		parts = append(parts, []string{fmt.Sprint(p.Part), fmt.Sprint(p.Nodes), fmt.Sprint(p.Foci), fmt.Sprint(p.Saddles),
			fmt.Sprint(p.HalfNodes + p.HalfSaddles + p.HalfDegenerate), num(p.IndexSum), num(p.Expected), verdict})
	}
	s.table(limited(parts))
	for _, p := range l.Parts[:min(len(l.Parts), longestTable)] {
		s.para(fmt.Sprintf("  part %d: ", p.Part), p.Rule)
	}
}

func (t *Topology) writePoints(s *sheet) {
	s.heading("What there is")
	if len(t.Points) == 0 {
		s.line("  no critical points")
		return
	}
	rows := [][]string{{"id", "type", "sense", "robustness" + bracket(t.Run.TauUnit), "of max |tau|", "confidence", "",
		"position" + bracket(t.Run.LengthUnit)}}
	marked := false
	for _, p := range t.Points {
		kind := p.Type.String()
		if p.Half {
			kind = "half " + kind
		}
		if p.Type == topology.Degenerate {
			kind += fmt.Sprintf(" (%+d)", p.Index)
		}
		mark := ""
		if !p.Resolved || p.Confidence < unsure && p.Type != topology.Degenerate {
			mark, marked = "?", true
		}
		rows = append(rows, []string{p.ID, kind, p.Sense.String(), robustness(p.Robustness), t.share(p.Robustness),
			fmt.Sprintf("%.2f", float64(p.Confidence)), mark, place(p.Position)})
	}
	s.table(rows)
	if marked {
		s.line("  ? see: what is doubtful")
	}
}

func robustness(x Number) string {
	if math.IsInf(float64(x), 1) {
		return "all"
	}
	return num(x)
}

// share prints a stress as a share of the largest |tau|; nothing for an infinite one.
func (t *Topology) share(x Number) string {
	if math.IsInf(float64(x), 0) || t.maxTau == 0 {
		return ""
	}
	return fmt.Sprintf("%.3g %%", 100*float64(x)/t.maxTau)
}

func (t *Topology) writeLines(s *sheet, kind topology.Kind, title string) {
	first := true
	for _, l := range t.Lines {
		if l.Kind != kind {
			continue
		}
		if first {
			s.heading(title)
			first = false
		}
		s.para(fmt.Sprintf("  %-4s ", l.ID), l.describe(t.Run))
	}
	if first {
		s.heading(title)
		s.line("  no line was found")
	}
}

// writeOthers lists the lines that neither separate nor attach clearly.
func (t *Topology) writeOthers(s *sheet) {
	rows := [][]string{{"id", "type", "from", "to", "length" + bracket(t.Run.LengthUnit), "separates", "attaches"}}
	for _, l := range t.Lines {
		if l.Kind == topology.NoKind {
			rows = append(rows, []string{l.ID, l.Type.String(), cmp.Or(string(l.From), "none"), cmp.Or(string(l.To), "none"),
				num(l.Length), l.spans(topology.SeparationLine), l.spans(topology.AttachmentLine)})
		}
	}
	if len(rows) > 1 {
		s.heading("Other lines of the skeleton: neither separating nor attaching on the whole")
		s.table(rows)
	}
}

// describe tells of one line: type and kind with their reason, length, place, angle of the separation surface.
func (l *Line) describe(run Run) string {
	words := cmp.Or(l.Reason, l.Type.String()) + ". " + with(l.Length, run.LengthUnit) + " long"
	if n := len(l.Points); n > 0 && l.Type != topology.Cycle {
		words += fmt.Sprintf(", from %s to %s", place(l.Points[0]), place(l.Points[n-1]))
	} else if n > 0 {
		words += ", through " + place(l.Points[0])
	}
	if on, off := l.spans(l.Kind), l.spans(opposite[l.Kind]); on != "" && (off != "" || len(l.Reaches) > 3) {
		words += fmt.Sprintf("; it %s from %s", verbs[l.Kind], on)
		if off != "" {
			words += fmt.Sprintf(", but %s from %s", verbs[opposite[l.Kind]], off)
		}
		words += " along its length"
	}
	if angles := l.knownAngles(); len(angles) > 0 {
		words += fmt.Sprintf("; the surface that leaves the wall stands at %.0f degrees to it (median; from %.0f to %.0f)",
			angles[len(angles)/2], angles[0], angles[len(angles)-1])
	}
	return words + "."
}

// opposite holds the kind of lines that do the contrary.
var opposite = map[topology.Kind]topology.Kind{
	topology.SeparationLine: topology.AttachmentLine, topology.AttachmentLine: topology.SeparationLine,
}

var verbs = map[topology.Kind]string{topology.SeparationLine: "separates", topology.AttachmentLine: "attaches"}

// mostSpans bounds the reaches that are listed in words.
const mostSpans = 3

// spans lists where along the line it has the kind; "" for nowhere.
func (l *Line) spans(kind topology.Kind) string {
	var list []string
	for _, r := range l.Reaches {
		if r.Kind == kind && kind != topology.NoKind {
			list = append(list, fmt.Sprintf("%.3g to %.3g", float64(r.Begin), float64(r.End)))
		}
	}
	if n := len(list) - mostSpans; n > 0 {
		list = append(list[:mostSpans], fmt.Sprintf("%d more", n))
	}
	return strings.Join(list, ", ")
}

// knownAngles returns the angles of the separation surface in ascending order [degrees].
func (l *Line) knownAngles() []float64 {
	var known []float64
	for _, a := range l.Angle {
		if x := float64(a); x == x {
			known = append(known, x)
		}
	}
	slices.Sort(known)
	return known
}

// unsure is the confidence below which a type is called doubtful: one chance in ten that it is another.
const unsure = 0.9

// writeDoubts lists every reason for doubt once, with the points that it concerns.
func (t *Topology) writeDoubts(s *sheet) {
	s.heading("What is doubtful")
	reasons, points := t.doubtfulPoints()
	for _, r := range reasons {
		s.para("  - ", r+": "+strings.Join(points[r], ", "))
	}
	for _, f := range t.Findings {
		words := f.Text
		if f.Where != "" {
			words += " (first: " + f.Where + ")"
		}
		s.para("  - ", words)
	}
	if len(reasons)+len(t.Findings) == 0 {
		s.line("  nothing that the tool can see; it certifies nothing all the same")
	}
}

// doubtfulPoints returns the reasons in the order in which they first appear, and per reason the points.
func (t *Topology) doubtfulPoints() (reasons []string, points map[string][]string) {
	points = map[string][]string{}
	add := func(reason, point string) {
		if points[reason] == nil {
			reasons = append(reasons, reason)
		}
		points[reason] = append(points[reason], point)
	}
	for _, p := range t.Points {
		if p.Confidence < unsure && p.Type != topology.Degenerate {
			add("the type may be another (confidence in brackets)", fmt.Sprintf("%s (%.2f)", p.ID, float64(p.Confidence)))
		}
		for _, note := range strings.Split(p.Note, "; ") {
			if note != "" {
				add(note, p.ID)
			}
		}
		if !p.Resolved && p.Note == "" {
			add("not resolved by this mesh", p.ID)
		}
	}
	return reasons, points
}
