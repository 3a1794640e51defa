package main

import (
	"bytes"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"unicode/utf8"
)

// A letter in brackets keeps a pattern from finding itself.
var forbidden = []struct {
	what    string
	files   *regexp.Regexp
	pattern *regexp.Regexp
}{
	{"left undone", regexp.MustCompile(`\.(go|js|mjs|html|css)$`),
		regexp.MustCompile(`[T]ODO|[F]IXME|[X]XX|not [i]mplemented|t\.[S]kip\(\)`)},
	{"a machine's path or a registry's host", regexp.MustCompile(`.`),
		regexp.MustCompile(`/(w[o]rk|f[a]rm|r[o]ot)/|proxy\.g[o]lang\.org|registry\.n[p]mjs|deb\.d[e]bian\.org`)},
	{"words that belong elsewhere", regexp.MustCompile(`.`),
		regexp.MustCompile(`(?i)tr[a]nscript|seed d[o]cument|before-[s]top|this (s[e]ssion|w[o]rkplace)`)},
}

// topLevel lists what may lie at the top of the project, dot files aside.
var topLevel = regexp.MustCompile(
	`^(\..*|cmd|render|field|wasm|web|testdata|go\.mod|go\.sum|README\.md|DEVELOPERS\.md|LICENSE)$`)

const (
	longestLine = 140     // characters in Go source: what review tools show unwrapped
	largestFile = 4 << 20 // bytes
)

func checkWords() error {
	files, err := sources()
	if err != nil {
		return err
	}
	var errs []error
	for _, name := range files {
		if top, _, _ := strings.Cut(filepath.ToSlash(name), "/"); !topLevel.MatchString(top) {
			errs = append(errs, fmt.Errorf("%s: the layout has no place for it", name))
		}
		data, err := os.ReadFile(name)
		if err != nil {
			errs = append(errs, err)
			continue
		}
		if len(data) > largestFile {
			errs = append(errs, fmt.Errorf("%s: larger than %d MiB", name, largestFile>>20))
		}
		if bytes.IndexByte(data, 0) >= 0 {
			continue // no text
		}
		errs = append(errs, checkText(name, string(data)))
	}
	readme, err := os.ReadFile("README.md")
	for _, command := range []string{"go run ./cmd/shearprint", "go test ./..."} {
		if err == nil && !strings.Contains(string(readme), command) {
			err = fmt.Errorf("README.md: the command %q is missing", command)
		}
	}
	return errors.Join(append(errs, err)...)
}

func checkText(name, data string) error {
	var errs []error
	number := 0
	for line := range strings.Lines(data) {
		number++
		for _, f := range forbidden {
			if f.files.MatchString(name) && f.pattern.MatchString(line) {
				errs = append(errs, fmt.Errorf("%s:%d: %s", name, number, f.what))
			}
		}
		width := utf8.RuneCountInString(strings.TrimRight(line, "\r\n"))
		if strings.HasSuffix(name, ".go") && width > longestLine {
			errs = append(errs, fmt.Errorf("%s:%d: %d characters", name, number, width))
		}
	}
	return errors.Join(errs...)
}
