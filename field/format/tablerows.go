package format

import (
	"bytes"
	"fmt"
)

// rows reads all rows in one pass over the bytes.
func (t *tableReader) rows() error {
	t.plan()
	data, at := t.data, t.body
	t.line = t.dialect.line
	row := 0
	for at < len(data) {
		switch c := data[at]; {
		case c == '\n':
			t.line++
			at++
			continue
		case c == '\r':
			if at+1 == len(data) || data[at+1] != '\n' {
				t.line++
			}
			at++
			continue
		case c == ' ' || c == '\t' && t.sep != '\t':
			at++
			continue
		case c == '#' || c == '%':
			for at < len(data) && data[at] != '\n' && data[at] != '\r' {
				at++
			}
			continue
		}
		if row >= len(t.raw.Points) {
			return t.fail(t.place(), "export less, or a surface with its values", "a table may have %d rows", row)
		}
		next, err := t.row(at, row)
		if err != nil {
			return err
		}
		at = next
		row++
	}
	t.cut(row)
	return nil
}

func (t *tableReader) place() string { return fmt.Sprintf("line %d", t.line) }

// row reads the row at offset at and returns the offset of its line's end.
func (t *tableReader) row(at, row int) (int, error) {
	data := t.data
	for col := range t.action {
		a := &t.action[col]
		if a.three == nil && a.one == nil {
			at = t.skipCell(at)
		} else {
			x, next, ok := t.cell(at)
			if !ok {
				return 0, t.badCell(at, col)
			}
			at = next
			switch {
			case a.one != nil:
				(*a.one)[row] = x
			case a.k == 0:
				(*a.three)[row].X = x
			case a.k == 1:
				(*a.three)[row].Y = x
			default:
				(*a.three)[row].Z = x
			}
		}
		at = t.afterCell(at)
		if col+1 == len(t.action) {
			break
		}
		if at >= len(data) || data[at] == '\n' || data[at] == '\r' {
			return 0, t.fail(t.place(), "fill or drop the row", "the row has %d cells, the header %d", col+1, len(t.action))
		}
		if t.sep != ' ' {
			at++ // the separator
		}
	}
	return t.endOfRow(at)
}

// afterCell skips the blanks after a cell.
func (t *tableReader) afterCell(at int) int {
	for at < len(t.data) && (t.data[at] == ' ' || t.data[at] == '\t' && t.sep != '\t') {
		at++
	}
	return at
}

// endOfRow allows empty cells after the last column.
func (t *tableReader) endOfRow(at int) (int, error) {
	for at < len(t.data) {
		switch c := t.data[at]; {
		case c == '\n' || c == '\r':
			return at, nil
		case c != t.sep && c != ' ' && c != '\t':
			return 0, t.fail(t.place(), "name every column", "the row has more cells than the header names (%d)", len(t.action))
		}
		at++
	}
	return at, nil
}

// cell reads the number at offset at and returns where the cell ends.
func (t *tableReader) cell(at int) (x float64, next int, ok bool) {
	data := t.data
	for at < len(data) && (data[at] == ' ' || data[at] == '\t' && t.sep != '\t') {
		at++
	}
	x, next, ok = scanNumber(data, at, t.point)
	if ok && (next == len(data) || data[next] == t.sep || data[next] == '\n' || data[next] == '\r' || data[next] == ' ' ||
		data[next] == '\t') {
		return x, next, true
	}
	next = t.skipCell(at)
	s := bytes.TrimSpace(data[at:next])
	if len(s) >= 2 && s[0] == '"' && s[len(s)-1] == '"' {
		s = bytes.TrimSpace(s[1 : len(s)-1])
	}
	x, ok = parseNumber(s, t.point)
	return x, next, ok
}

// skipCell returns the end of the cell at offset at.
func (t *tableReader) skipCell(at int) int {
	data, sep := t.data, t.sep
	inside := false
	for ; at < len(data); at++ {
		switch c := data[at]; {
		case c == '"':
			inside = !inside
		case c == '\n' || c == '\r':
			return at
		case !inside && (c == sep || sep == ' ' && c == '\t'):
			return at
		}
	}
	return at
}

func (t *tableReader) badCell(at, col int) error {
	cell := bytes.TrimSpace(t.data[at:t.skipCell(at)])
	return t.fail(fmt.Sprintf("%s, column %s", t.place(), quote(t.header[col])), "correct the cell or drop the row",
		"%s is not a number", quote(string(cell)))
}
