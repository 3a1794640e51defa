package format

import (
	"bytes"
	"fmt"
	"strconv"

	"shearprint/field"
	"shearprint/field/r3"
)

// OBJ holds points and polygons as text: it serves as --surface. Lines other than v and f carry nothing that matters
// here.

// isOBJ tells the text by a line of a point, "v 1 2 3", near its beginning: no table's row begins so.
func isOBJ(data []byte) bool {
	const sample = 1 << 16
	head := data[:min(len(data), sample)]
	for at := 0; at < len(head); {
		line, next := cutLine(head, at)
		at = next
		f := bytes.Fields(line)
		if len(f) < 4 || string(f[0]) != "v" {
			continue
		}
		_, number := parseNumber(f[1], '.')
		return number
	}
	return false
}

func readOBJ(name string, data []byte, _ Options) (field.Raw, error) {
	src := source{name}
	var raw field.Raw
	var corners []int32
	at, polygon := 0, 0
	for line := 1; at < len(data); line++ {
		text, next := cutLine(data, at)
		at = next
		place := fmt.Sprintf("line %d", line)
		f := bytes.Fields(text)
		if len(f) == 0 {
			continue
		}
		switch string(f[0]) {
		case "v":
			p, err := objPoint(src, place, f)
			if err != nil {
				return raw, err
			}
			raw.Points = append(raw.Points, p)
		case "f":
			corners = corners[:0]
			for _, w := range f[1:] {
				c, err := objCorner(src, place, w, len(raw.Points))
				if err != nil {
					return raw, err
				}
				corners = append(corners, c)
			}
			if fan(&raw, polygon, corners) == 0 {
				return raw, src.fail(place, "export the surface again", "a face has %d corners", len(corners))
			}
			polygon++
		}
	}
	if len(raw.Tris) == 0 {
		return raw, src.fail("", "export the faces too", "there is not one face")
	}
	return raw, nil
}

func objPoint(src source, place string, f [][]byte) (r3.Vec, error) {
	var x [3]float64
	if len(f) < 4 {
		return r3.Vec{}, src.fail(place, "export the surface again", "a point has %d coordinates", len(f)-1)
	}
	for k := range x {
		v, ok := parseNumber(f[k+1], '.')
		if !ok {
			return r3.Vec{}, src.fail(place, "export the surface again", "%s is not a number", quote(string(f[k+1])))
		}
		x[k] = v
	}
	return r3.Vec{X: x[0], Y: x[1], Z: x[2]}, nil
}

// objCorner reads "7", "7/1", "7//3", "7/1/3"; a negative number counts back from the last point.
func objCorner(src source, place string, w []byte, points int) (int32, error) {
	head, _, _ := bytes.Cut(w, []byte("/"))
	n, err := strconv.Atoi(string(head))
	if n < 0 {
		n += points + 1
	}
	if err != nil || n < 1 || n > points {
		return 0, src.fail(place, "export the surface again", "corner %s is none of the %d points before it",
			quote(string(w)), points)
	}
	return int32(n - 1), nil
}
