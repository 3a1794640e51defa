package study

import (
	"fmt"
	"io"
	"math"
	"strings"
	"unicode/utf8"

	"shearprint/field"
)

// textWidth is the width of paragraphs: a terminal's 80 columns.
const textWidth = 80

// sheet writes a text report. It keeps the first error of its writer and then writes no more.
type sheet struct {
	w   io.Writer
	err error
}

func (s *sheet) line(format string, args ...any) {
	if s.err == nil {
		_, s.err = fmt.Fprintf(s.w, format+"\n", args...)
	}
}

// heading writes a blank line and an underlined title.
func (s *sheet) heading(title string) {
	s.line("\n%s\n%s", title, strings.Repeat("-", utf8.RuneCountInString(title)))
}

// para writes words in lines of textWidth: the first begins with lead, the others with as many blanks.
func (s *sheet) para(lead, words string) {
	for _, l := range wrap(words, textWidth-utf8.RuneCountInString(lead)) {
		s.line("%s%s", lead, l)
		lead = strings.Repeat(" ", utf8.RuneCountInString(lead))
	}
}

// wrap breaks words into lines of at most width characters, where no word is longer.
func wrap(words string, width int) []string {
	var lines []string
	var line strings.Builder
	for _, w := range strings.Fields(words) {
		if line.Len() > 0 && utf8.RuneCountInString(line.String())+1+utf8.RuneCountInString(w) > width {
			lines = append(lines, line.String())
			line.Reset()
		}
		if line.Len() > 0 {
			line.WriteByte(' ')
		}
		line.WriteString(w)
	}
	return append(lines, line.String())
}

// table writes rows in columns, numbers to the right; the first row is the heading.
func (s *sheet) table(rows [][]string) {
	width := make([]int, len(rows[0]))
	left := make([]bool, len(rows[0]))
	for i, row := range rows {
		for k, cell := range row {
			width[k] = max(width[k], utf8.RuneCountInString(cell))
			if i > 0 && cell != "" && !strings.ContainsAny(cell[:1], "+-.0123456789") {
				left[k] = true
			}
		}
	}
	for _, row := range rows {
		var b strings.Builder
		for k, cell := range row {
			pad := strings.Repeat(" ", width[k]-utf8.RuneCountInString(cell))
			if left[k] {
				cell += pad
			} else {
				cell = pad + cell
			}
			b.WriteString("  " + cell)
		}
		s.line("%s", strings.TrimRight(b.String(), " "))
	}
}

// findings writes the findings of one level, one paragraph each; nothing where there are none.
func (s *sheet) findings(title string, list []field.Finding, levels ...field.Level) {
	first := true
	for _, level := range levels {
		for _, f := range list {
			if f.Level != level {
				continue
			}
			if first {
				s.heading(title)
				first = false
			}
			words := f.Text
			if f.Where != "" {
				words += " (first: " + f.Where + ")"
			}
			s.para("  - ", words)
		}
	}
}

// num prints a number with four significant digits, as tables and sentences have it.
func num[T ~float64](x T) string {
	switch v := float64(x); {
	case math.IsNaN(v) || math.IsInf(v, 0):
		return "none"
	case v == 0:
		return "0"
	default:
		return fmt.Sprintf("%.4g", v)
	}
}

// with puts a unit behind a number; units that nobody told, and "1", leave the number alone.
func with[T ~float64](x T, unit Word) string {
	if unit == "" || unit == "1" {
		return num(x)
	}
	return num(x) + " " + string(unit)
}

// per returns the unit a/b: "Pa/m"; "" where either is not known.
func per(a, b Word) Word {
	if a == "" || b == "" {
		return ""
	}
	return a + "/" + b
}

// bracket returns " [unit]" for the heading of a column, " [?]" for one that nobody told.
func bracket(unit Word) string {
	switch unit {
	case "":
		return " [?]"
	case "1":
		return " [-]"
	}
	return " [" + string(unit) + "]"
}

// rounding is the share of a number's scale below which it prints as zero.
const rounding = 1e-9

// tidy returns x, or zero where it is rounding beside the scale.
func tidy(x Number, scale float64) Number {
	if math.Abs(float64(x)) < rounding*scale {
		return 0
	}
	return x
}

// place prints a point or a vector. Components that are rounding beside the largest print as zero.
func place(v Vec) string {
	scale := math.Max(math.Abs(float64(v[0])), math.Max(math.Abs(float64(v[1])), math.Abs(float64(v[2]))))
	return "(" + num(tidy(v[0], scale)) + ", " + num(tidy(v[1], scale)) + ", " + num(tidy(v[2], scale)) + ")"
}

// count prints a number of things: "1 saddle", "3 saddles".
func count(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}

// title writes the first two lines of every report.
func (s *sheet) title(what string, run Run) {
	s.line("%s: %s", run.Name, what)
	unit := "lengths in " + string(run.LengthUnit)
	if run.LengthUnit == "" {
		unit = "nobody told the unit of length: lengths are the file's own numbers"
	}
	switch run.TauUnit {
	case "":
		unit += "; nobody told the unit of tau"
	case "1":
		unit += "; tau is a coefficient"
	default:
		unit += "; tau in " + string(run.TauUnit)
	}
	s.line("%s", unit)
}
