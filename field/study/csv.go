package study

import (
	"encoding/csv"
	"fmt"
	"io"
	"strconv"

	"shearprint/field/topology"
)

// cell prints a number for a table file, with the digits of the JSON; nothing where it is infinite or unknown.
func cell[T ~float64](x T) string {
	b, _ := Number(x).MarshalJSON() // never fails
	if string(b) == "null" {
		return ""
	}
	return string(b)
}

// units returns headings with the unit in brackets behind each.
func units(names []string, unit Word) []string {
	out := make([]string, len(names))
	for i, n := range names {
		out[i] = n + bracket(unit)
	}
	return out
}

// tableWriter writes comment lines and rows, and keeps the first error.
type tableWriter struct {
	w   io.Writer
	csv *csv.Writer
	err error
}

func newTable(w io.Writer) *tableWriter { return &tableWriter{w: w, csv: csv.NewWriter(w)} }

func (t *tableWriter) comment(format string, args ...any) {
	t.flush()
	if t.err == nil {
		_, t.err = fmt.Fprintf(t.w, "# "+format+"\n", args...)
	}
}

func (t *tableWriter) row(cells ...string) {
	if t.err == nil {
		t.err = t.csv.Write(cells)
	}
}

func (t *tableWriter) flush() error {
	t.csv.Flush()
	if t.err == nil {
		t.err = t.csv.Error()
	}
	return t.err
}

// WriteCSV writes three tables, each after a comment that names it: the points, the lines, and the points of the lines.
func (t *Topology) WriteCSV(w io.Writer) error {
	c := newTable(w)
	c.comment("points of %s", t.Run.Name)
	t.csvPoints(c)
	c.comment("lines of %s", t.Run.Name)
	t.csvLines(c)
	c.comment("points of the lines of %s, along the flow", t.Run.Name)
	c.row(append([]string{"line"}, units([]string{"x", "y", "z"}, t.Run.LengthUnit)...)...)
	for _, l := range t.Lines {
		for _, p := range l.Points {
			c.row(l.ID, cell(p[0]), cell(p[1]), cell(p[2]))
		}
	}
	return c.flush()
}

func (t *Topology) csvPoints(c *tableWriter) {
	u, tau := t.Run.LengthUnit, t.Run.TauUnit
	slope := per(tau, u)
	head := []string{"id", "type", "sense", "index", "half", "part"}
	head = append(head, units([]string{"x", "y", "z"}, u)...)
	head = append(head, "nx", "ny", "nz", "e1x", "e1y", "e1z", "e2x", "e2y", "e2z")
	head = append(head, units([]string{"J11", "J12", "J21", "J22", "lambda1 re", "lambda1 im", "lambda2 re", "lambda2 im",
		"trace"}, slope)...)
	head = append(head, "determinant"+bracket(square(parens(slope))), "robustness"+bracket(tau), "confidence", "resolved",
		"note")
	c.row(head...)
	for _, p := range t.Points {
		row := []string{p.ID, p.Type.String(), p.Sense.String(), strconv.Itoa(p.Index), strconv.FormatBool(p.Half),
			strconv.Itoa(p.Part)}
		for _, v := range []Vec{p.Position, p.Normal, p.Frame[0], p.Frame[1]} {
			row = append(row, cell(v[0]), cell(v[1]), cell(v[2]))
		}
		for _, m := range [][2][2]Number{p.Jacobian, p.Eigenvalues} {
			row = append(row, cell(m[0][0]), cell(m[0][1]), cell(m[1][0]), cell(m[1][1]))
		}
		row = append(row, cell(p.Trace), cell(p.Determinant), cell(p.Robustness), cell(p.Confidence),
			strconv.FormatBool(p.Resolved), p.Note)
		c.row(row...)
	}
}

func (t *Topology) csvLines(c *tableWriter) {
	c.row("id", "kind", "type", "from", "to", "length"+bracket(t.Run.LengthUnit), "strength", "stable",
		"separates"+bracket(t.Run.LengthUnit), "attaches"+bracket(t.Run.LengthUnit), "reason")
	for _, l := range t.Lines {
		stable := ""
		if l.Stable != nil {
			stable = strconv.FormatBool(*l.Stable)
		}
		c.row(l.ID, l.Kind.String(), l.Type.String(), string(l.From), string(l.To), cell(l.Length), cell(l.Strength), stable,
			l.spans(topology.SeparationLine), l.spans(topology.AttachmentLine), l.Reason)
	}
}

func parens(unit Word) Word {
	if unit == "" {
		return ""
	}
	return "(" + unit + ")"
}
