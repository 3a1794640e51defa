package study

import (
	"encoding/json"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"shearprint/field/r3"
)

// ParsePoint reads a point as the command line has it: "x,y,z".
func ParsePoint(s string) (r3.Vec, error) {
	parts := strings.Split(s, ",")
	if len(parts) != 3 {
		return r3.Vec{}, fmt.Errorf("%q: a point is three numbers with commas, as 0.1,0,-2", s)
	}
	var x [3]float64
	for k, part := range parts {
		v, err := strconv.ParseFloat(strings.TrimSpace(part), 64)
		if err != nil || math.IsNaN(v) || math.Abs(v) > largestCoordinate {
			return r3.Vec{}, fmt.Errorf("%q: %q is no number that a point can have", s, part)
		}
		x[k] = v
	}
	return r3.Vec{X: x[0], Y: x[1], Z: x[2]}, nil
}

// largestCoordinate keeps squares of distances finite.
const largestCoordinate = 1e100

// ParsePoints reads points with semicolons between them: "x,y,z;x,y,z".
func ParsePoints(s string) ([]r3.Vec, error) {
	var points []r3.Vec
	for _, part := range strings.Split(strings.TrimRight(s, "; "), ";") {
		p, err := ParsePoint(part)
		if err != nil {
			return nil, err
		}
		points = append(points, p)
	}
	return points, nil
}

// ParseRobustness reads a noise floor: a stress in the unit of tau as "0.02", or a share of the largest |tau| as "1.5%".
func ParseRobustness(s string) (value float64, relative bool, err error) {
	words, relative := strings.CutSuffix(s, "%")
	value, err = strconv.ParseFloat(strings.TrimSpace(words), 64)
	if err != nil || !(value >= 0) || math.IsInf(value, 0) {
		return 0, false, fmt.Errorf("%q: give a stress in the unit of tau, as 0.02, or a share of the largest, as 0.5%%", s)
	}
	if relative {
		value /= 100
	}
	return value, relative, nil
}

// ParseParts reads the numbers of parts: "0,2".
func ParseParts(s string) ([]int32, error) {
	var out []int32
	for _, word := range strings.Split(s, ",") {
		p, err := strconv.ParseInt(strings.TrimSpace(word), 10, 32)
		if err != nil {
			return nil, fmt.Errorf("%q: %q is no number of a part; give numbers with commas, as 0,2", s, word)
		}
		out = append(out, int32(p))
	}
	slices.Sort(out)
	return slices.Compact(out), nil
}

// ParseBox reads two opposite corners of a box: "x,y,z:x,y,z".
func ParseBox(s string) ([2]r3.Vec, error) {
	from, to, ok := strings.Cut(s, ":")
	if !ok {
		return [2]r3.Vec{}, fmt.Errorf("%q: a box is two corners with a colon, as -1,-1,0:1,1,2", s)
	}
	a, err := ParsePoint(from)
	if err != nil {
		return [2]r3.Vec{}, err
	}
	b, err := ParsePoint(to)
	return [2]r3.Vec{a, b}, err
}

// parts are numbers of parts in the arguments of a call: [0, 2] or "0,2".
type parts []int32

// UnmarshalJSON implements json.Unmarshaler.
func (p *parts) UnmarshalJSON(b []byte) error {
	words, err := listOrWords(b)
	if err != nil {
		return fmt.Errorf("%s: parts are [0, 2] or \"0,2\"", b)
	}
	*p, err = ParseParts(words)
	return err
}

// box is a box in the arguments of a call: [[x, y, z], [x, y, z]] or "x,y,z:x,y,z".
type box [2]r3.Vec

// UnmarshalJSON implements json.Unmarshaler.
func (x *box) UnmarshalJSON(b []byte) error {
	var words string
	if json.Unmarshal(b, &words) == nil {
		corners, err := ParseBox(words)
		*x = box(corners)
		return err
	}
	var list []point
	if err := json.Unmarshal(b, &list); err != nil {
		return err
	}
	if len(list) != 2 {
		return fmt.Errorf("%s: a box is [[x, y, z], [x, y, z]], two opposite corners", b)
	}
	*x = box{r3.Vec(list[0]), r3.Vec(list[1])}
	return nil
}

// point is a point in the arguments of a call: [x, y, z] or "x,y,z".
type point r3.Vec

// UnmarshalJSON implements json.Unmarshaler.
func (p *point) UnmarshalJSON(b []byte) error {
	s, err := listOrWords(b)
	if err != nil {
		return err
	}
	v, err := ParsePoint(s)
	*p = point(v)
	return err
}

// points are several of them: [[x, y, z], ...] or "x,y,z;x,y,z".
type points []r3.Vec

// UnmarshalJSON implements json.Unmarshaler.
func (p *points) UnmarshalJSON(b []byte) error {
	var words string
	if json.Unmarshal(b, &words) == nil {
		list, err := ParsePoints(words)
		*p = list
		return err
	}
	var list []point
	if err := json.Unmarshal(b, &list); err != nil {
		return err
	}
	*p = nil
	for _, q := range list {
		*p = append(*p, r3.Vec(q))
	}
	return nil
}

// floor is a noise floor: a number or the words of ParseRobustness.
type floor struct {
	value    float64
	relative bool
}

// UnmarshalJSON implements json.Unmarshaler.
func (f *floor) UnmarshalJSON(b []byte) error {
	var words string
	if json.Unmarshal(b, &words) != nil {
		words = string(b)
	}
	var err error
	f.value, f.relative, err = ParseRobustness(words)
	return err
}

// listOrWords returns a string as it is, and a list of numbers as words with commas.
func listOrWords(b []byte) (string, error) {
	var words string
	if json.Unmarshal(b, &words) == nil {
		return words, nil
	}
	var list []json.Number
	if err := json.Unmarshal(b, &list); err != nil {
		return "", fmt.Errorf("%s: a point is [x, y, z] or \"x,y,z\"", b)
	}
	parts := make([]string, len(list))
	for i, n := range list {
		parts[i] = n.String()
	}
	return strings.Join(parts, ","), nil
}
