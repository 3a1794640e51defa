// Command check runs every check of the project, one line each with its seconds; .ci/run calls it after installing what
// the tests need. Words on the command line choose checks by name: `go run ./.ci/check imports docs`.
package main

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"os"
	"os/exec"
	"slices"
	"strings"
	"time"
)

// step is one check: a name, why it is there, and what to run.
type step struct {
	name string
	why  string
	run  func() error
}

var steps = []step{
	{"gofmt", "one layout of the source", gofmt},
	{"words", "nothing left undone, no machine's paths, lines that fit a screen", checkWords},
	{"imports", "imports run downward only", checkImports},
	{"docs", "every exported name is explained", checkDocs},
	{"vet", "the toolchain's own doubts, native and in the browser", vet},
	{"staticcheck", "what a second reader of the source finds", staticcheck},
	{"build", "every command and both browser programs", build},
	{"test", "all tests, in random order", test},
	{"race", "no data race where goroutines split work", race},
	{"wasm-test", "the core's tests in WebAssembly", wasmTest},
	{"same-bytes", "JSON and pictures from WebAssembly equal the native ones", sameBytes},
	{"size", "the browser programs stay small", checkSize},
	{"fuzz", "a few seconds of hostile input for every reader", fuzz},
}

func main() {
	want := os.Args[1:]
	start := time.Now()
	var failed []string
	for _, s := range steps {
		if len(want) > 0 && !slices.Contains(want, s.name) {
			continue
		}
		fmt.Printf("== %s: %s\n", s.name, s.why)
		begin := time.Now()
		err := s.run()
		verdict := "ok"
		if err != nil {
			verdict = "FAILED: " + err.Error()
			failed = append(failed, s.name)
		}
		fmt.Printf("== %s: %.1f s, %s\n", s.name, time.Since(begin).Seconds(), verdict)
	}
	fmt.Printf("== all: %.1f s\n", time.Since(start).Seconds())
	if len(failed) > 0 {
		fmt.Println("failed:", strings.Join(failed, ", "))
		os.Exit(1)
	}
}

// browser is the environment of a build for the browser.
var browser = []string{"GOOS=js", "GOARCH=wasm"}

// do runs a command with its output shown.
func do(env []string, name string, args ...string) error {
	cmd := exec.Command(name, args...)
	cmd.Env = append(os.Environ(), env...)
	cmd.Stdout, cmd.Stderr = os.Stdout, os.Stderr
	return cmd.Run()
}

// output runs a command and returns what it prints.
func output(env []string, name string, args ...string) (string, error) {
	cmd := exec.Command(name, args...)
	cmd.Env = append(os.Environ(), env...)
	cmd.Stderr = os.Stderr
	out, err := cmd.Output()
	return string(out), err
}

// sources lists the files under version control that match the patterns.
func sources(patterns ...string) ([]string, error) {
	out, err := output(nil, "git", append([]string{"ls-files", "-z", "--"}, patterns...)...)
	if err != nil {
		return nil, err
	}
	return strings.Split(strings.TrimRight(out, "\x00"), "\x00"), nil
}

func gofmt() error {
	files, err := sources("*.go")
	if err != nil {
		return err
	}
	out, err := output(nil, "gofmt", append([]string{"-l"}, files...)...)
	if err != nil {
		return err
	}
	if out != "" {
		return fmt.Errorf("to be formatted: %s", strings.Join(strings.Fields(out), " "))
	}
	return nil
}

func vet() error {
	return errors.Join(
		do(nil, "go", "vet", "./...", "./.ci/check"),
		do(browser, "go", "vet", "./wasm/...", "./field/...", "./render/..."),
	)
}

// staticcheck is built for this machine first: for the browser it must still run here.
func staticcheck() error {
	dir, err := os.MkdirTemp("", "check")
	if err != nil {
		return err
	}
	defer os.RemoveAll(dir)
	tool := dir + "/staticcheck"
	if err := do(nil, "go", "build", "-o", tool, "honnef.co/go/tools/cmd/staticcheck"); err != nil {
		return err
	}
	return errors.Join(do(nil, tool, "./...", "./.ci/check"), do(browser, tool, "./wasm/..."))
}

func test() error { return do(nil, "go", "test", "-shuffle=on", "./...") }

// race leaves out the readers: they run on one goroutine, and their tests measure memory, of which the detector takes
// its own share.
func race() error {
	return do(nil, "go", "test", "-race", "-short", "./field", "./field/trace", "./field/topology", "./field/study",
		"./render/...")
}

// fuzz finds the fuzz targets by asking every package, and gives each a few seconds.
func fuzz() error {
	const readers = "shearprint/field/format" // hostile files come in here: these get longer
	list, err := output(nil, "go", "test", "-run=^$", "-list=^Fuzz", "./...")
	if err != nil {
		return err
	}
	var targets []string
	var errs []error
	for line := range strings.Lines(list) {
		words := strings.Fields(line)
		switch {
		case len(words) == 0:
		case strings.HasPrefix(words[0], "Fuzz"):
			targets = append(targets, words[0])
		case words[0] == "ok" && len(words) > 1:
			for _, name := range targets {
				seconds := "3s"
				if strings.HasPrefix(words[1], readers) {
					seconds = "15s"
				}
				errs = append(errs, fuzzOne(name, seconds, words[1]))
			}
			targets = nil
		default: // a package without tests
			targets = nil
		}
	}
	return errors.Join(errs...)
}

// fuzzOne gives one target its time. Go's fuzzing may report its own deadline as a failure, without an input that fails
// (golang/go issue 75804): such a run is made again, once.
func fuzzOne(name, seconds, pkg string) error {
	args := []string{"test", "-run=^$", "-fuzz=^" + name + "$", "-fuzztime=" + seconds, "-fuzzminimizetime=1s", pkg}
	var said bytes.Buffer
	cmd := exec.Command("go", args...)
	cmd.Stdout, cmd.Stderr = io.MultiWriter(os.Stdout, &said), os.Stderr
	err := cmd.Run()
	if err == nil || !strings.Contains(said.String(), "context deadline exceeded") ||
		strings.Contains(said.String(), "Failing input") {
		return err
	}
	fmt.Println("   that was the deadline, no input: once more")
	return do(nil, "go", args...)
}

// firstDifference tells where two outputs part.
func firstDifference(a, b []byte) string {
	n := min(len(a), len(b))
	for i := range n {
		if a[i] != b[i] {
			line := 1 + bytes.Count(a[:i], []byte("\n"))
			return fmt.Sprintf("first at byte %d (line %d)", i, line)
		}
	}
	return fmt.Sprintf("one has %d bytes, the other %d", len(a), len(b))
}
