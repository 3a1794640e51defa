package format

import (
	"bytes"
	"fmt"
	"strings"
)

// dialect is how a table is written: what separates its cells, the decimal mark, its header.
type dialect struct {
	sep    byte // ',', ';', tab, or ' ' for any run of blanks
	point  byte // decimal mark
	header []string
	body   int // offset of the first row
	line   int // its line number, from 1
}

func (d *dialect) String() string {
	sep := map[byte]string{',': "commas", ';': "semicolons", '\t': "tabs", ' ': "blanks"}[d.sep]
	if d.point == ',' {
		return sep + " and decimal commas"
	}
	return sep
}

// maxPreamble bounds the lines before the first row of numbers; exports have up to some dozens.
const maxPreamble = 1000

// maxHeaderLines is how many lines above the first row are asked whether they name its columns.
const maxHeaderLines = 8

// maxLine bounds a line: maxColumns cells of numbers.
const maxLine = 1 << 20

// headerLine is a line of words before the first row of numbers.
type headerLine struct {
	text    string
	line    int
	comment bool
}

// tellDialect finds the first row of numbers and the header before it: the last line above it that names as many
// columns, whether or not it begins with a comment mark.
func tellDialect(src source, data []byte) (dialect, error) {
	var words []headerLine
	at, line := 0, 1
	for ; line <= maxPreamble && at < len(data); line++ {
		text, next := cutLine(data, at)
		if len(text) > maxLine {
			return dialect{}, src.fail(fmt.Sprintf("line %d", line), "export the table with line ends",
				"a line of more than %d bytes", maxLine)
		}
		trimmed := strings.TrimSpace(string(text))
		switch {
		case trimmed == "":
		case isComment(trimmed):
			if h := strings.TrimSpace(strings.TrimLeft(trimmed, "#%/! ")); h != "" {
				words = append(words, headerLine{h, line, true})
			}
		default:
			d, ok, err := chooseHeader(src, trimmed, words, line)
			if ok || err != nil {
				d.body, d.line = at, line
				return d, err
			}
			words = append(words, headerLine{trimmed, line, false})
		}
		words = words[max(0, len(words)-maxHeaderLines):]
		at = next
	}
	return dialect{}, src.fail("", "PLY, glTF, STL, OBJ, CGNS and tables can be read",
		"the kind of file is not known: there is no row of numbers in its first lines")
}

// chooseHeader tells whether the line is a row of numbers, and which of the lines of words before it names its columns.
func chooseHeader(src source, row string, words []headerLine, line int) (d dialect, isRow bool, err error) {
	for k := len(words) - 1; k >= 0; k-- {
		d, ok := rowDialect(row, words[k].text)
		if !ok {
			continue
		}
		d.header = splitHeader(words[k].text, d.sep)
		if len(d.header) != len(splitCells(row, d.sep)) {
			continue
		}
		if k > 0 && isUnits(d.header) { // a line of units below the line of names
			if names := splitHeader(words[k-1].text, d.sep); len(names) == len(d.header) {
				d.header = joinUnits(names, d.header)
			}
		}
		return d, true, nil
	}
	if d, isRow = rowDialect(row, ""); !isRow {
		return d, false, nil
	}
	if len(words) == 0 {
		return d, true, src.fail(fmt.Sprintf("line %d", line), "add a line such as: x y z tau_x tau_y tau_z p",
			"the table has numbers and no header that names its columns")
	}
	last := words[len(words)-1]
	for _, w := range words {
		if !w.comment {
			last = w
		}
	}
	return d, true, src.fail(fmt.Sprintf("line %d", last.line), "give every column a name, in quotes where it has blanks",
		"the header names %d columns, the first row has %d", len(splitHeader(last.text, d.sep)), len(splitCells(row, d.sep)))
}

func isComment(s string) bool {
	return s[0] == '#' || s[0] == '%' || s[0] == '!' || strings.HasPrefix(s, "//")
}

// cutLine returns the line at offset at and where the next one begins. Lines end with LF, CR LF or CR.
func cutLine(data []byte, at int) (line []byte, next int) {
	end := bytes.IndexAny(data[at:], "\r\n")
	if end < 0 {
		return data[at:], len(data)
	}
	next = at + end + 1
	if data[at+end] == '\r' && next < len(data) && data[next] == '\n' {
		next++
	}
	return data[at : at+end], next
}

// isUnits tells whether all cells are units, bracketed or bare, and at least one cannot be a name.
func isUnits(cells []string) bool {
	sure := false
	for _, c := range cells {
		bracketed := len(c) >= 2 && (c[0] == '[' || c[0] == '(') && strings.ContainsAny(c[len(c)-1:], "])")
		plain := plainUnit(strings.Trim(c, "[]()"))
		_, isLength := lengths[plain]
		_, isStress := stresses[plain]
		if !bracketed && !isLength && !isStress && !kinematic[plain] && plain != "-" && plain != "1" && c != "" {
			return false
		}
		sure = sure || bracketed || isStress
	}
	return sure
}

func joinUnits(names, units []string) []string {
	out := make([]string, len(names))
	for i, n := range names {
		out[i] = n
		if u := strings.Trim(units[i], "[]() "); u != "" {
			out[i] += " [" + u + "]"
		}
	}
	return out
}

// rowDialect tells how a row of numbers is separated; ok is false if the line is no such row. Three numbers make a row.
func rowDialect(row, header string) (dialect, bool) {
	try := []dialect{{sep: ';', point: '.'}, {sep: ';', point: ','}, {sep: '\t', point: '.'}, {sep: '\t', point: ','}}
	// "0,5 1,5 2,5" reads as four cells with commas, as three with blanks: the header decides.
	if len(splitHeader(header, ' ')) == len(strings.Fields(row)) && !strings.Contains(header, ",") {
		try = append(try, dialect{sep: ' ', point: '.'}, dialect{sep: ' ', point: ','})
	}
	try = append(try, dialect{sep: ',', point: '.'}, dialect{sep: ' ', point: '.'},
		dialect{sep: ',', point: ','}) // numbers in quotes
	for _, d := range try {
		cells := splitCells(row, d.sep)
		if len(cells) < 3 || len(cells) > maxColumns {
			continue
		}
		numbers, finite, filled := 0, 0, 0
		for _, c := range cells {
			if c == "" {
				continue
			}
			filled++
			switch x, ok := parseNumber([]byte(c), d.point); {
			case ok && x == x:
				finite++
				numbers++
			case ok:
				numbers++
			case !quoted(c) && !isWord(c):
				numbers = -len(cells)
			}
		}
		if finite >= 3 && 2*numbers > filled {
			return d, true
		}
	}
	return dialect{}, false
}

func quoted(s string) bool { return strings.HasPrefix(s, `"`) }

// isWord accepts cells such as zone names beside numbers.
func isWord(s string) bool {
	c := s[0] | 0x20
	return c >= 'a' && c <= 'z'
}

// splitCells cuts a row; a quoted cell keeps its separators.
func splitCells(row string, sep byte) []string {
	var cells []string
	at := 0
	for {
		if sep == ' ' {
			for at < len(row) && (row[at] == ' ' || row[at] == '\t') {
				at++
			}
			if at == len(row) {
				return cells
			}
		}
		end := cellEnd(row, at, sep)
		cells = append(cells, unquote(strings.TrimSpace(row[at:end])))
		if end >= len(row) {
			break
		}
		at = end + 1
		if at == len(row) {
			break // a separator at the end of the line closes it
		}
	}
	return cells
}

func cellEnd(row string, at int, sep byte) int {
	inside := false
	for ; at < len(row); at++ {
		c := row[at]
		if c == '"' {
			inside = !inside
		}
		if !inside && (c == sep || sep == ' ' && c == '\t') {
			return at
		}
	}
	return at
}

func unquote(s string) string {
	if len(s) >= 2 && s[0] == '"' && s[len(s)-1] == '"' {
		return strings.TrimSpace(strings.ReplaceAll(s[1:len(s)-1], `""`, `"`))
	}
	return s
}

// splitHeader cuts a header line. Between blanks, "x [m]" is one name: a bracket belongs to the word before it.
func splitHeader(header string, sep byte) []string {
	cells := splitCells(header, sep)
	if sep != ' ' {
		return cells
	}
	var out []string
	open := false
	for _, c := range cells {
		if len(out) > 0 && (open || strings.HasPrefix(c, "[") || strings.HasPrefix(c, "(")) {
			out[len(out)-1] += " " + c
		} else {
			out = append(out, c)
		}
		last := out[len(out)-1]
		open = strings.Count(last, "[")+strings.Count(last, "(") > strings.Count(last, "]")+strings.Count(last, ")")
	}
	return out
}
