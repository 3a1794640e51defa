package main

import (
	"bytes"
	"compress/gzip"
	"errors"
	"fmt"
	"io"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strings"

	"shearprint/field/exact"
)

// programs are what the browser loads.
var programs = []string{"./wasm/view", "./wasm/worker"}

// sizeBudget is the largest size of both programs together as gzip sends them [bytes].
const sizeBudget = 5 << 20

func build() error {
	errs := []error{do(nil, "go", "build", "./...")}
	for _, p := range programs {
		errs = append(errs, do(browser, "go", "build", "-o", os.DevNull, p))
	}
	return errors.Join(errs...)
}

// nodeEnv is a near-empty environment: Go's start-up in Node copies it, with the arguments, into one small block.
func nodeEnv() []string {
	env := append([]string{}, browser...)
	for _, name := range []string{"PATH", "HOME", "TMPDIR", "GOPROXY", "GOFLAGS", "GOCACHE", "GOMODCACHE", "GOPATH",
		"GOTOOLCHAIN", "GONOSUMDB", "GOSUMDB", "GOROOT"} {
		if v, ok := os.LookupEnv(name); ok {
			env = append(env, name+"="+v)
		}
	}
	return env
}

// starter returns the script with which Go's distribution runs a WebAssembly program in Node.
func starter() (string, error) {
	root, err := output(nil, "go", "env", "GOROOT")
	return filepath.Join(strings.TrimSpace(root), "lib", "wasm", "go_js_wasm_exec"), err
}

func wasmTest() error {
	script, err := starter()
	if err != nil {
		return err
	}
	cmd := exec.Command("go", "test", "-short", "-exec="+script, "./field/...", "./render/...", "./wasm/session/...")
	cmd.Env = nodeEnv()
	cmd.Stdout, cmd.Stderr = os.Stdout, os.Stderr
	return cmd.Run()
}

// sameRuns are runs, and sameCommands what is asked of each, for the comparison of native and WebAssembly output.
var (
	sameRuns     = []string{"testdata/demo/*.glb", "testdata/runs/*.ply", "testdata/runs/*.cgns.gz"}
	sameCommands = [][]string{
		{"inspect", "--json"},
		{"topology", "--json"},
		{"topology", "--json", "--min-robustness", "1%"},
		{"topology", "--json", "--min-robustness", "20%"},
		{"picture", "--view", "iso", "--size", "640x360"},
	}
)

// sameBytes runs the command line natively and in Node and compares what comes out.
func sameBytes() error {
	dir, err := os.MkdirTemp("", "check")
	if err != nil {
		return err
	}
	defer os.RemoveAll(dir)
	native, wasm := filepath.Join(dir, "native"), filepath.Join(dir, "program.wasm")
	if err := errors.Join(do(nil, "go", "build", "-o", native, "./cmd/shearprint"),
		do(browser, "go", "build", "-o", wasm, "./cmd/shearprint")); err != nil {
		return err
	}
	script, err := starter()
	if err != nil {
		return err
	}
	var runs []string
	for _, pattern := range sameRuns {
		found, err := filepath.Glob(pattern)
		if err != nil {
			return err
		}
		if len(found) == 0 {
			return fmt.Errorf("no run is called %s", pattern)
		}
		runs = append(runs, found...)
	}
	noise := filepath.Join(dir, "noise.ply")
	if err := os.WriteFile(noise, noisyRun(), 0o600); err != nil {
		return err
	}
	runs = append(runs, noise)
	var errs []error
	for _, run := range runs {
		for _, command := range sameCommands {
			args := append([]string{command[0], run, "--quiet"}, command[1:]...)
			a, errA := result(dir, []string{native}, args)
			b, errB := result(dir, []string{script, wasm}, args)
			switch {
			case errA != nil || errB != nil:
				errs = append(errs, errA, errB)
			case !bytes.Equal(a, b):
				errs = append(errs, fmt.Errorf("%s: native and WebAssembly differ, %s", strings.Join(args, " "),
					firstDifference(a, b)))
			default:
				fmt.Printf("   %s: %d bytes, the same\n", strings.Join(args, " "), len(a))
			}
		}
	}
	return errors.Join(errs...)
}

// noisyRun returns a run of white noise, in which everything that is rare in computed runs happens many times over.
func noisyRun() []byte {
	raw := exact.Sphere(1, 2000)
	rng := rand.New(rand.NewPCG(3, 5))
	var b bytes.Buffer
	fmt.Fprintf(&b, "ply\nformat ascii 1.0\nelement vertex %d\n", len(raw.Points))
	for _, name := range []string{"x", "y", "z", "tau_x", "tau_y", "tau_z", "p"} {
		fmt.Fprintf(&b, "property double %s\n", name)
	}
	fmt.Fprintf(&b, "element face %d\nproperty list uchar int vertex_indices\nend_header\n", len(raw.Tris))
	for _, p := range raw.Points {
		fmt.Fprintln(&b, p.X, p.Y, p.Z, rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64())
	}
	for _, t := range raw.Tris {
		fmt.Fprintln(&b, 3, t[0], t[1], t[2])
	}
	return b.Bytes()
}

// result runs a command of shearprint and returns its standard output, or the picture that it writes. A ledger that does
// not balance (exit status 3) is a result.
func result(dir string, program, args []string) ([]byte, error) {
	picture := filepath.Join(dir, "picture.png")
	if args[0] == "picture" {
		args = append(args, "--force", "-o", picture)
	}
	cmd := exec.Command(program[0], append(program[1:], args...)...)
	cmd.Env = nodeEnv()
	var out, errOut bytes.Buffer
	cmd.Stdout, cmd.Stderr = &out, &errOut
	if err := cmd.Run(); err != nil && cmd.ProcessState.ExitCode() != 3 {
		return nil, fmt.Errorf("%s: %w: %s", strings.Join(args, " "), err, errOut.String())
	}
	if args[0] == "picture" {
		return os.ReadFile(picture)
	}
	return out.Bytes(), nil
}

// checkSize compares the browser programs, compressed, with the budget.
func checkSize() error {
	total := 0
	for _, p := range programs {
		dir, err := os.MkdirTemp("", "check")
		if err != nil {
			return err
		}
		defer os.RemoveAll(dir)
		file := filepath.Join(dir, "program.wasm")
		if err := do(browser, "go", "build", "-trimpath", "-ldflags=-s -w", "-o", file, p); err != nil {
			return err
		}
		n, err := gzipped(file)
		if err != nil {
			return err
		}
		fmt.Printf("   %s: %.2f MB compressed\n", p, float64(n)/1e6)
		total += n
	}
	if total > sizeBudget {
		return fmt.Errorf("together %d bytes compressed, more than %d", total, sizeBudget)
	}
	return nil
}

func gzipped(file string) (int, error) {
	data, err := os.ReadFile(file)
	if err != nil {
		return 0, err
	}
	var n counter
	z, err := gzip.NewWriterLevel(&n, gzip.BestCompression)
	if err != nil {
		return 0, err
	}
	_, err = io.Copy(z, bytes.NewReader(data))
	return int(n), errors.Join(err, z.Close())
}

// counter counts what is written to it.
type counter int

// Write implements io.Writer.
func (c *counter) Write(p []byte) (int, error) {
	*c += counter(len(p))
	return len(p), nil
}
