package format

import (
	"strings"
	"unicode"
)

// label is the name of a column, property or attribute, taken apart: "Wall Shear Stress[i] (Pa)" is component 0 of
// "wallshearstress" in Pa.
type label struct {
	name   string  // as the file has it
	plain  string  // without unit and without component in brackets
	bare   string  // without unit
	unit   string  // words in the trailing brackets; "" where there are none
	splits []split // readings as component and base, the most explicit first
}

// split is one reading of a name as a component of a vector. Components count from 0; onesBased marks a number that may
// count from 1.
type split struct {
	base string // lower case, letters and digits only
	comp int
	num  bool // the component was told by a number
}

func parseLabel(name string) label {
	l := label{name: name}
	s := strings.TrimSpace(strings.Trim(strings.TrimSpace(name), `"`))
	comp := -1
	num := false
	unitPart := ""
	for range 2 { // a component and a unit at most, in either order
		inner, rest, ok := trailingBracket(s)
		if !ok {
			break
		}
		c, n := component(inner)
		if n && inner == "1" && len(splitName(rest)) > 0 {
			c = -1 // "cf_x [1]": the unit of a pure number
		}
		if c >= 0 && comp < 0 {
			comp, num = c, n
		} else if l.unit == "" && rest != "" {
			l.unit, unitPart = inner, s[len(rest):]
		} else {
			break
		}
		s = rest
	}
	l.plain = s
	l.bare = strings.TrimSpace(strings.Replace(name, unitPart, "", 1))
	if comp >= 0 {
		l.splits = []split{{normal(s), comp, num}}
		return l
	}
	l.splits = splitName(s)
	return l
}

// trailingBracket takes a last (..) or [..] off.
func trailingBracket(s string) (inner, rest string, ok bool) {
	if s == "" {
		return "", s, false
	}
	var open string
	switch s[len(s)-1] {
	case ')':
		open = "("
	case ']':
		open = "["
	default:
		return "", s, false
	}
	at := strings.LastIndex(s, open)
	if depth := strings.Count(s[max(at, 0):], s[len(s)-1:]); at >= 0 && depth > 1 { // kg/(m s^2) within round brackets
		at = strings.Index(s, open)
	}
	if at < 0 {
		return "", s, false
	}
	return strings.TrimSpace(s[at+1 : len(s)-1]), strings.TrimSpace(s[:at]), true
}

// component reads a direction: x y z, i j k, or a number from 0 to 3; -1 for anything else.
func component(s string) (comp int, num bool) {
	switch strings.ToLower(s) {
	case "x", "i":
		return 0, false
	case "y", "j":
		return 1, false
	case "z", "k":
		return 2, false
	case "0", "1", "2", "3":
		return int(s[0] - '0'), true
	}
	return -1, false
}

// splitName reads NAME_x, NAME:0, NAME x, x-NAME and NAMEX.
func splitName(s string) []split {
	var out []split
	const separators = "_:.- "
	if at := strings.LastIndexAny(s, separators); at >= 0 {
		if c, num := component(s[at+1:]); c >= 0 {
			out = append(out, split{normal(s[:at]), c, num})
		}
	}
	if at := strings.IndexAny(s, separators); at >= 0 {
		if c, num := component(s[:at]); c >= 0 && !num {
			out = append(out, split{normal(s[at+1:]), c, false})
		}
	}
	if s != "" {
		if c, num := component(s[len(s)-1:]); c >= 0 {
			out = append(out, split{normal(s[:len(s)-1]), c, num})
		}
	}
	return out
}

// normal reduces a name to lower-case letters and digits, so that spellings compare equal.
func normal(s string) string {
	return strings.Map(func(r rune) rune {
		if unicode.IsLetter(r) || unicode.IsDigit(r) {
			return unicode.ToLower(r)
		}
		return -1
	}, s)
}
