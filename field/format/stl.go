package format

import (
	"bytes"

	"math"
	"strings"

	"shearprint/field"
	"shearprint/field/r3"
)

// STL holds triangles without shared points and without values: it serves as --surface. Binary: 80 bytes of comment,
// the number of triangles, then 50 bytes for each. Its comment may begin with "solid" as the text form does; the size
// decides.

const (
	stlHeader   = 84
	stlTriangle = 50
)

func isBinarySTL(data []byte) bool {
	return len(data) >= stlHeader && int64(len(data)) == stlHeader+stlTriangle*int64(little.Uint32(data[80:]))
}

func isTextSTL(data []byte) bool {
	head := bytes.TrimLeft(data[:min(len(data), 1<<12)], " \t\r\n")
	if !bytes.HasPrefix(bytes.ToLower(head[:min(len(head), 5)]), []byte("solid")) {
		return false
	}
	_, rest, _ := bytes.Cut(head, []byte("\n"))
	next := strings.Fields(strings.ToLower(string(rest)))
	return len(next) > 0 && (next[0] == "facet" || next[0] == "endsolid")
}

// looksCutSTL recognises a binary file that was cut short or lengthened, to say so.
func looksCutSTL(data []byte) bool {
	return len(data) >= stlHeader && bytes.HasPrefix(data, []byte("solid")) && bytes.IndexByte(data, 0) >= 0
}

func readBinarySTL(name string, data []byte, _ Options) (field.Raw, error) {
	n := (len(data) - stlHeader) / stlTriangle
	if !isBinarySTL(data) {
		return field.Raw{}, source{name}.fail("byte 80", "copy the file again",
			"the header promises %d triangles, the file has room for %d",
			little.Uint32(data[80:]), n)
	}
	if n == 0 {
		return field.Raw{}, source{name}.fail("", "export the surface again", "there is not one triangle")
	}
	raw := field.Raw{Points: make([]r3.Vec, 3*n), Tris: make([][3]int32, n)}
	for t := range n {
		at := stlHeader + stlTriangle*t + 12 // after the normal, which the corners tell better
		for k := range 3 {
			i := 3*t + k
			number := func(c int) float64 { return float64(math.Float32frombits(little.Uint32(data[at+12*k+4*c:]))) }
			raw.Points[i] = r3.Vec{X: number(0), Y: number(1), Z: number(2)}
			raw.Tris[t][k] = int32(i)
		}
	}
	return raw, nil
}

func readTextSTL(name string, data []byte, _ Options) (field.Raw, error) {
	t := &tokens{source: source{name}, rest: data, line: 1}
	var raw field.Raw
	corners := 0
	for {
		w := strings.ToLower(string(t.word()))
		switch w {
		case "":
			if corners != 0 {
				return raw, t.fail(t.place(), "copy the file again", "the file ends within a facet")
			}
			if len(raw.Tris) == 0 {
				return raw, t.fail("", "export the surface again", "there is not one triangle")
			}
			return raw, nil
		case "solid", "endsolid":
			t.skipLine()
		case "facet", "outer", "loop", "endloop":
		case "normal":
			for range 3 {
				t.word() // the corners tell the normal better
			}
		case "vertex":
			p := r3.Vec{X: t.number(), Y: t.number(), Z: t.number()}
			if t.err != nil {
				return raw, t.err
			}
			raw.Points = append(raw.Points, p)
			corners++
		case "endfacet":
			if corners != 3 {
				return raw, t.fail(t.place(), "export the surface again", "a facet has %d corners, not 3", corners)
			}
			i := int32(len(raw.Points))
			raw.Tris = append(raw.Tris, [3]int32{i - 3, i - 2, i - 1})
			corners = 0
		default:
			return raw, t.fail(t.place(), "export the surface again", "unknown word %s", quote(w))
		}
	}
}

func (t *tokens) skipLine() {
	end := bytes.IndexByte(t.rest, '\n')
	if end < 0 {
		t.rest = nil
		return
	}
	t.rest = t.rest[end:]
}
