package format

import (
	"bytes"
	"fmt"
	"strconv"
	"strings"
)

// maxHeader bounds the header: real ones have a few kilobytes.
const maxHeader = 1 << 20

func (h *plyHeader) parse(data []byte) error {
	seenFormat := false
	for {
		line, next, ok := h.nextLine(data)
		if !ok {
			return h.fail(fmt.Sprintf("line %d", h.lines), "copy the file again", "the header does not end with end_header")
		}
		h.body = next
		h.lines++
		word := strings.Fields(line)
		if len(word) == 0 {
			continue
		}
		var err error
		switch word[0] {
		case "ply", "obj_info":
		case "comment":
			h.comments = append(h.comments, strings.TrimSpace(strings.TrimPrefix(strings.TrimSpace(line), "comment")))
		case "format":
			seenFormat = true
			err = h.parseFormat(word)
		case "element":
			err = h.parseElement(word, len(data))
		case "property":
			err = h.parseProperty(word)
		case "end_header":
			if !seenFormat {
				return h.fail("header", "add the line: format ascii 1.0", "there is no format line")
			}
			return nil
		default:
			err = h.bad("unknown word %s", quote(word[0]))
		}
		if err != nil {
			return err
		}
	}
}

// nextLine returns the line at h.body and where the one after it starts. Lines end with LF, CR LF or CR.
func (h *plyHeader) nextLine(data []byte) (line string, next int, ok bool) {
	rest := data[h.body:min(len(data), maxHeader)]
	end := bytes.IndexAny(rest, "\r\n")
	if end < 0 {
		return "", 0, false
	}
	next = end + 1
	if rest[end] == '\r' && next < len(rest) && rest[next] == '\n' {
		next++
	}
	return string(rest[:end]), h.body + next, true
}

func (h *plyHeader) bad(what string, args ...any) error {
	return h.fail(fmt.Sprintf("line %d of the header", h.lines), "correct the header", what, args...)
}

func (h *plyHeader) parseFormat(word []string) error {
	if len(word) != 3 {
		return h.bad("a format line has three words")
	}
	orders := map[string]plyOrder{"ascii": plyASCII, "binary_little_endian": plyLittle, "binary_big_endian": plyBig}
	order, ok := orders[word[1]]
	if !ok || word[2] != "1.0" {
		return h.bad("format %s %s is not known", quote(word[1]), quote(word[2]))
	}
	h.order = order
	return nil
}

func (h *plyHeader) parseElement(word []string, size int) error {
	if len(word) != 3 {
		return h.bad("an element line has three words")
	}
	n, err := strconv.ParseUint(word[2], 10, 62)
	if err != nil {
		return h.bad("%s is not a count", quote(word[2]))
	}
	// Every element that has a property takes a byte at least; elements without properties take none, and no memory.
	if n > uint64(size) {
		return h.bad("%d elements %s cannot be in a file of %d bytes", n, quote(word[1]), size)
	}
	h.elements = append(h.elements, plyElement{name: word[1], count: int(n)})
	return nil
}

func (h *plyHeader) parseProperty(word []string) error {
	if len(h.elements) == 0 {
		return h.bad("a property comes before any element")
	}
	e := &h.elements[len(h.elements)-1]
	p := plyProp{offset: e.size}
	var ok bool
	switch {
	case len(word) == 5 && word[1] == "list":
		p.list, e.list = true, true
		if p.length, ok = plyTypeNames[word[2]]; !ok || p.length >= plyFloat32 {
			return h.bad("%s cannot be the type of a length", quote(word[2]))
		}
		if p.typ, ok = plyTypeNames[word[3]]; !ok {
			return h.bad("type %s is not known", quote(word[3]))
		}
		p.name = word[4]
	case len(word) == 3 && word[1] != "list":
		if p.typ, ok = plyTypeNames[word[1]]; !ok {
			return h.bad("type %s is not known", quote(word[1]))
		}
		p.name = word[2]
		e.size += plySizes[p.typ]
	default:
		return h.bad("a property line reads: property TYPE NAME, or: property list TYPE TYPE NAME")
	}
	for _, other := range e.props {
		if other.name == p.name {
			return h.bad("property %s comes twice", quote(p.name))
		}
	}
	if len(e.props) >= maxColumns {
		return h.bad("more than %d properties", maxColumns)
	}
	e.props = append(e.props, p)
	return nil
}
