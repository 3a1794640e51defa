package study

import (
	"bytes"
	"encoding/json"
	"math"
	"strconv"

	"shearprint/field/r3"
)

// digits is the number of significant digits of every number in a result: single-precision files hold seven, fits and
// traces are good to fewer, and ten keep what a second program needs to rebuild a line.
const digits = 10

// Number is a number in a result. It prints with ten significant digits; what is infinite or unknown (NaN) prints as
// null, and minus zero as zero.
type Number float64

// MarshalJSON implements json.Marshaler.
func (x Number) MarshalJSON() ([]byte, error) {
	switch v := float64(x); {
	case math.IsNaN(v) || math.IsInf(v, 0):
		return []byte("null"), nil
	case v == 0:
		return []byte("0"), nil
	default:
		return strconv.AppendFloat(nil, v, 'g', digits, 64), nil
	}
}

// Vec is a vector or a point in space, as three numbers.
type Vec [3]Number

func vecOf(v r3.Vec) Vec { return Vec{Number(v.X), Number(v.Y), Number(v.Z)} }

func degrees(radians float64) float64 { return radians * 180 / math.Pi }

// Word is a word in a result; it is null where it is empty.
type Word string

// MarshalJSON implements json.Marshaler.
func (s Word) MarshalJSON() ([]byte, error) {
	if s == "" {
		return []byte("null"), nil
	}
	return json.Marshal(string(s))
}

// Encode returns the JSON of a result as the command line prints it and the page receives it: two blanks of indent,
// arrays of plain values on one line, a newline at the end.
func Encode(result any) ([]byte, error) {
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	if err := enc.Encode(result); err != nil {
		return nil, err
	}
	l := layout{in: bytes.TrimSpace(b.Bytes())}
	l.value(0)
	return append(l.out, '\n'), nil
}

// lineWidth is the width up to which an array of arrays stays on one line.
const lineWidth = 100

// layout rewrites compact, valid JSON with line breaks.
type layout struct {
	in  []byte
	at  int
	out []byte
}

func (l *layout) value(depth int) {
	switch l.in[l.at] {
	case '{':
		l.group(depth, '}')
	case '[':
		end, flat := l.flat()
		if flat {
			l.inline(end)
			return
		}
		l.group(depth, ']')
	default:
		l.out = append(l.out, l.in[l.at:l.scalar(l.at)]...)
		l.at = l.scalar(l.at)
	}
}

// group writes an object, or an array with one element on each line.
func (l *layout) group(depth int, closing byte) {
	l.out = append(l.out, l.in[l.at])
	l.at++
	if l.in[l.at] == closing {
		l.out = append(l.out, closing)
		l.at++
		return
	}
	for {
		l.newline(depth + 1)
		if closing == '}' {
			end := l.scalar(l.at)
			l.out = append(l.out, l.in[l.at:end]...)
			l.out = append(l.out, ':', ' ')
			l.at = end + 1
		}
		l.value(depth + 1)
		if l.in[l.at] == closing {
			break
		}
		l.out = append(l.out, ',')
		l.at++
	}
	l.at++
	l.newline(depth)
	l.out = append(l.out, closing)
}

func (l *layout) newline(depth int) {
	l.out = append(l.out, '\n')
	for range depth {
		l.out = append(l.out, ' ', ' ')
	}
}

// flat tells whether the array at hand goes on one line, and where it ends: one of plain values always does, one of
// arrays does if it is short.
func (l *layout) flat() (end int, ok bool) {
	depth, nested, objects := 0, false, false
	for i := l.at; ; {
		switch l.in[i] {
		case '[':
			nested = nested || depth > 0
			depth++
			i++
		case '{':
			objects = true
			depth++
			i++
		case ']', '}':
			depth--
			i++
			if depth == 0 {
				return i, !objects && (!nested || i-l.at <= lineWidth)
			}
		case ',', ':':
			i++
		default:
			i = l.scalar(i)
		}
	}
}

// inline copies the array up to end with a blank after every comma.
func (l *layout) inline(end int) {
	for l.at < end {
		switch c := l.in[l.at]; c {
		case '[', ']':
			l.out = append(l.out, c)
			l.at++
		case ',':
			l.out = append(l.out, ',', ' ')
			l.at++
		default:
			next := l.scalar(l.at)
			l.out = append(l.out, l.in[l.at:next]...)
			l.at = next
		}
	}
}

// scalar returns the end of the string, number or word that begins at i.
func (l *layout) scalar(i int) int {
	if l.in[i] == '"' {
		for i++; l.in[i] != '"'; i++ {
			if l.in[i] == '\\' {
				i++
			}
		}
		return i + 1
	}
	for i < len(l.in) && !bytes.ContainsRune([]byte(",]}:"), rune(l.in[i])) {
		i++
	}
	return i
}
