package main

import (
	"errors"
	"fmt"
	"slices"
	"strings"
)

const module = "shearprint"

// allowed lists, per package of ours, the packages of ours that it may import outside its tests. A folder stands for the
// packages below it too.
var allowed = map[string][]string{
	"field/r3":          {},
	"field":             {"field/r3"},
	"field/format/hdf5": {},
	"field/format":      {"field", "field/r3", "field/format"},
	"field/exact":       {"field", "field/r3"},
	"field/trace":       {"field", "field/r3"},
	"field/topology":    {"field", "field/r3", "field/trace"},
	"field/study":       {"field", "field/r3", "field/trace", "field/topology"},
	"render":            {"field", "field/r3", "field/trace", "field/topology"},
	"wasm/session":      {"field", "field/r3", "field/trace", "field/topology", "field/study", "render"},
	"wasm/view":         {"wasm/session"},
	"wasm/worker": {
		"field", "field/r3", "field/trace", "field/topology", "field/study", "field/format", "field/exact", "render",
		"wasm/session",
	},
	"web":           {"testdata/demo"},
	"testdata/demo": {},
	"cmd/shearprint": {
		"field", "field/r3", "field/trace", "field/topology", "field/study", "field/format", "field/exact", "render", "web",
		"testdata/demo", "wasm/session",
	},
}

// restricted lists, per foreign package or module, the only packages of ours that may import it outside tests.
var restricted = map[string][]string{
	"syscall/js":                        {"wasm/worker", "wasm/view"},
	"github.com/hajimehoshi/ebiten/v2":  {"wasm/view"},
	"github.com/spf13/cobra":            {"cmd/shearprint"},
	"github.com/schollz/progressbar/v3": {"cmd/shearprint"},
	"gonum.org/v1/gonum":                {}, // its sums differ between targets: a reference in tests only
	"github.com/chromedp/chromedp":      {},
	"pgregory.net/rapid":                {},
	"github.com/google/go-cmp":          {},
}

func checkImports() error {
	const form = `{{.ImportPath}} {{join .Imports " "}}`
	var errs []error
	for _, env := range [][]string{nil, browser} {
		list, err := output(env, "go", "list", "-e", "-f", form, "./...")
		if err != nil {
			return err
		}
		for line := range strings.Lines(list) {
			words := strings.Fields(line)
			errs = append(errs, checkPackage(strings.TrimPrefix(words[0], module+"/"), words[1:]))
		}
	}
	return errors.Join(errs...)
}

func checkPackage(name string, imports []string) error {
	may, ok := lookup(name)
	if !ok {
		return fmt.Errorf("%s: the layout has no place for this package", name)
	}
	var errs []error
	for _, imp := range imports {
		if ours, ok := strings.CutPrefix(imp, module+"/"); ok {
			if !slices.Contains(may, ours) && !slices.ContainsFunc(may, func(m string) bool {
				return m == "field/format" && strings.HasPrefix(ours, m+"/")
			}) {
				errs = append(errs, fmt.Errorf("%s must not import %s", name, ours))
			}
			continue
		}
		for foreign, users := range restricted {
			if (imp == foreign || strings.HasPrefix(imp, foreign+"/")) && !slices.Contains(users, name) {
				errs = append(errs, fmt.Errorf("%s must not import %s", name, imp))
			}
		}
	}
	return errors.Join(errs...)
}

// lookup returns the row of the package, or of the nearest folder above it.
func lookup(name string) ([]string, bool) {
	for {
		if may, ok := allowed[name]; ok {
			return may, true
		}
		i := strings.LastIndexByte(name, '/')
		if i < 0 {
			return nil, false
		}
		name = name[:i]
	}
}
