package format

import (
	"fmt"
	"strings"
)

// SyntaxError says why a file cannot be used. It prints as one line.
type SyntaxError struct {
	File   string // name of the file, as the caller gave it
	Place  string // line, byte, element or column; "" where the whole file is meant
	What   string // what is wrong
	Remedy string // what the reader of the message can do; "" where nothing helps
}

// Error returns "file: place: what; remedy" without line breaks.
func (e *SyntaxError) Error() string {
	var b strings.Builder
	b.WriteString(e.File)
	if e.Place != "" {
		b.WriteString(": " + e.Place)
	}
	b.WriteString(": " + e.What)
	if e.Remedy != "" {
		b.WriteString("; " + e.Remedy)
	}
	return oneLine(b.String())
}

// maxMessage keeps a message readable where a file's own words are quoted in it.
const maxMessage = 600

// oneLine replaces control characters, so that words quoted from a file cannot break the line or the terminal.
func oneLine(s string) string {
	s = strings.Map(func(r rune) rune {
		if r < ' ' || r == 0x7f || r >= 0x80 && r < 0xa0 || r == 0x2028 || r == 0x2029 {
			return ' '
		}
		return r
	}, strings.ToValidUTF8(s, "?"))
	if len(s) > maxMessage {
		s = strings.ToValidUTF8(s[:maxMessage], "") + " ..."
	}
	return s
}

// quote shortens words of a file for a message.
func quote(s string) string {
	const most = 40
	if len(s) > most {
		s = strings.ToValidUTF8(s[:most], "") + "..."
	}
	return fmt.Sprintf("%q", s)
}

// source names the file in errors; every reader carries one.
type source struct{ name string }

func (s source) fail(place, remedy, what string, args ...any) error {
	return &SyntaxError{File: s.name, Place: place, What: fmt.Sprintf(what, args...), Remedy: remedy}
}
