package format

import (
	"fmt"

	"shearprint/field/r3"
)

// tokens cuts text into words between blanks and counts lines for messages.
type tokens struct {
	source
	rest []byte
	line int
	err  error // the first error; after it, numbers are zero
}

func (t *tokens) word() []byte {
	i := 0
	for i < len(t.rest) && t.rest[i] <= ' ' {
		if t.rest[i] == '\n' {
			t.line++
		}
		i++
	}
	j := i
	for j < len(t.rest) && t.rest[j] > ' ' {
		j++
	}
	w := t.rest[i:j]
	t.rest = t.rest[j:]
	return w
}

func (t *tokens) number() float64 {
	w := t.word()
	if t.err != nil {
		return 0
	}
	if len(w) == 0 {
		t.err = t.fail(t.place(), "copy the file again", "the file ends too early")
		return 0
	}
	x, ok := parseNumber(w, '.')
	if !ok {
		t.err = t.fail(t.place(), "correct or export again", "%s is not a number", quote(string(w)))
		return 0
	}
	return x
}

// count reads a whole number between 0 and most.
func (t *tokens) count(what string, most int) int {
	x := t.number()
	if t.err == nil && !(x >= 0 && x <= float64(most) && x == float64(int(x))) {
		t.err = t.fail(t.place(), "correct or export again", "%s %g is not a whole number from 0 to %d", what, x, most)
	}
	if t.err != nil {
		return 0
	}
	return int(x)
}

func (t *tokens) place() string { return fmt.Sprintf("line %d", t.line) }

// readText reads the body of an ascii file.
func (r *plyReader) readText(data []byte) error {
	t := &tokens{source: r.source, rest: data[r.body:], line: r.lines + 1}
	for i := range r.elements {
		e := &r.elements[i]
		// A value takes a digit and a separator at least.
		if most := len(t.rest)/2 + 1; e.count > 0 && len(e.props) > most/e.count {
			return r.tooShort(e, len(t.rest))
		}
		switch e {
		case r.vertex:
			r.textVertices(t)
		case r.face:
			r.textFaces(t)
		default:
			skipText(t, e)
		}
		if t.err != nil {
			return t.err
		}
	}
	return nil
}

func (r *plyReader) tooShort(e *plyElement, have int) error {
	return r.fail(fmt.Sprintf("element %s", quote(e.name)), "copy the file again",
		"the header promises %d of them, the %d bytes that are left cannot hold them", e.count, have)
}

func skipText(t *tokens, e *plyElement) {
	if len(e.props) == 0 {
		return
	}
	for range e.count {
		for _, p := range e.props {
			n := 1
			if p.list {
				n = t.count("the length of a list", len(t.rest))
			}
			for range n {
				t.number()
			}
		}
		if t.err != nil {
			return
		}
	}
}

func (r *plyReader) textVertices(t *tokens) {
	e := r.vertex
	row := make([]float64, len(e.props))
	r.allocatePoints(e.count)
	for i := range e.count {
		for k := range row {
			row[k] = t.number()
		}
		if t.err != nil {
			return
		}
		r.raw.Points[i] = vectorAt(row, r.atPoint.x)
		if r.raw.Tau != nil {
			r.raw.Tau[i] = vectorAt(row, r.atPoint.tau)
		}
		if r.raw.P != nil {
			r.raw.P[i] = row[r.atPoint.p]
		}
		if r.raw.Cp != nil {
			r.raw.Cp[i] = row[r.atPoint.cp]
		}
	}
}

// vectorAt takes a vector out of a row; a component without a column is zero.
func vectorAt(row []float64, cols [3]int) r3.Vec {
	var v [3]float64
	for k, c := range cols {
		if c >= 0 {
			v[k] = row[c]
		}
	}
	return r3.Vec{X: v[0], Y: v[1], Z: v[2]}
}

func (r *plyReader) textFaces(t *tokens) {
	e := r.face
	row := make([]float64, len(e.props))
	var corners []int32
	for i := range e.count {
		corners = corners[:0]
		for k, p := range e.props {
			if !p.list {
				row[k] = t.number()
				continue
			}
			n := t.count("the length of a list", len(t.rest))
			for range n {
				if k != r.index {
					t.number()
				} else if c := t.count("corner", r.vertex.count-1); t.err == nil {
					corners = append(corners, int32(c))
				}
			}
		}
		if t.err != nil {
			return
		}
		r.addFace(i, corners, row)
	}
}
