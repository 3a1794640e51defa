// Package web holds the page, serves it with its runs, and compiles the two programs that run in the browser.
package web

import (
	"bytes"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
	"time"

	"github.com/klauspost/compress/gzip"
)

// Program is one of the two programs that run in the browser.
type Program struct {
	Name    string // file name under which the page asks for it
	Package string // its folder in the module
}

// Programs lists what Build compiles: the worker that computes, and the view that presents on a GPU.
var Programs = []Program{
	{"worker.wasm", "wasm/worker"},
	{"view.wasm", "wasm/view"},
}

// supportFile is the part of the Go distribution that starts a program in a browser.
const supportFile = "wasm_exec.js"

// packedEnding is what the compressed twin of a built file has behind its name.
const packedEnding = ".gz"

// builtFiles returns the names of what Build leaves in its folder, without the compressed twins.
func builtFiles() []string {
	names := []string{supportFile}
	for _, p := range Programs {
		names = append(names, p.Name)
	}
	return names
}

// Build compiles the browser's programs, unless they are in the cache already, and returns the folder that holds them.
// Progress is told in short sentences. It needs the Go toolchain and the module's sources.
func Build(ctx context.Context, progress func(string)) (string, error) {
	root, err := moduleRoot(ctx)
	if err != nil {
		return "", err
	}
	sum, err := sourceSum(root)
	if err != nil {
		return "", err
	}
	cache, err := os.UserCacheDir()
	if err != nil {
		return "", fmt.Errorf("no folder for compiled programs: %w; set HOME or XDG_CACHE_HOME", err)
	}
	dir := filepath.Join(cache, "shearprint", sum)
	if complete(dir) {
		return dir, nil
	}
	if err := os.MkdirAll(filepath.Dir(dir), 0o755); err != nil {
		return "", err
	}
	work, err := os.MkdirTemp(filepath.Dir(dir), "building-*")
	if err != nil {
		return "", err
	}
	defer os.RemoveAll(work)
	for i, p := range Programs {
		progress(fmt.Sprintf("compiling the browser's programs: %s (%d of %d)", p.Package, i+1, len(Programs)))
		if err := compile(ctx, root, p, filepath.Join(work, p.Name)); err != nil {
			return "", err
		}
	}
	if err := copySupport(ctx, work); err != nil {
		return "", err
	}
	for _, name := range builtFiles() {
		if err := pack(filepath.Join(work, name)); err != nil {
			return "", err
		}
	}
	// Somebody else may have finished the same build first: theirs is as good.
	if err := os.Rename(work, dir); err != nil && !complete(dir) {
		return "", fmt.Errorf("%s: %w", dir, err)
	}
	prune(filepath.Dir(dir))
	progress("the browser's programs are ready")
	return dir, nil
}

// keepFor is how long builds of other sources stay: a server that was started from them may still be running.
const keepFor = 14 * 24 * time.Hour

// prune removes builds that nobody has made for long. What cannot be removed stays: it only takes room.
func prune(cache string) {
	folders, err := os.ReadDir(cache)
	if err != nil {
		return
	}
	for _, f := range folders {
		if info, err := f.Info(); err == nil && f.IsDir() && time.Since(info.ModTime()) > keepFor {
			os.RemoveAll(filepath.Join(cache, f.Name()))
		}
	}
}

// complete tells whether the folder holds all that the page needs.
func complete(dir string) bool {
	for _, name := range builtFiles() {
		if _, err := os.Stat(filepath.Join(dir, name+packedEnding)); err != nil {
			return false
		}
	}
	return true
}

// moduleRoot finds the module's sources: around the working folder, else where this file was compiled from.
func moduleRoot(ctx context.Context) (string, error) {
	if _, err := exec.LookPath("go"); err != nil {
		return "", errors.New("the Go toolchain is not on the PATH; install Go 1.26 or newer to compile the browser's programs")
	}
	out, err := exec.CommandContext(ctx, "go", "list", "-m", "-f", "{{.Path}} {{.Dir}}").Output()
	if path, dir, _ := strings.Cut(strings.TrimSpace(string(out)), " "); err == nil && path == "shearprint" {
		return dir, nil
	}
	if _, file, _, ok := runtime.Caller(0); ok {
		root := filepath.Dir(filepath.Dir(file))
		if _, err := os.Stat(filepath.Join(root, "go.mod")); err == nil {
			return root, nil
		}
	}
	return "", errors.New("the sources of Shearprint are not here; run it inside its source folder, as go run ./cmd/shearprint")
}

// sourceFolders hold all of the module that the programs are compiled from, embedded files included.
var sourceFolders = []string{"field", "render", "wasm"}

// sourceSum is a digest of all that the programs are compiled from.
func sourceSum(root string) (string, error) {
	h := sha256.New()
	fmt.Fprintln(h, runtime.Version())
	add := func(path string) error {
		file, err := os.Open(path)
		if err != nil {
			return err
		}
		defer file.Close()
		rel, err := filepath.Rel(root, path)
		if err != nil {
			return err
		}
		fmt.Fprintln(h, filepath.ToSlash(rel))
		_, err = io.Copy(h, file)
		return err
	}
	for _, name := range []string{"go.mod", "go.sum"} {
		if err := add(filepath.Join(root, name)); err != nil {
			return "", err
		}
	}
	for _, folder := range sourceFolders {
		err := filepath.WalkDir(filepath.Join(root, folder), func(path string, d fs.DirEntry, err error) error {
			switch {
			case err != nil:
				return err
			case d.IsDir() && d.Name() == "testdata":
				return filepath.SkipDir
			case d.IsDir() || strings.HasSuffix(d.Name(), "_test.go"):
				return nil
			}
			return add(path)
		})
		if err != nil {
			return "", err
		}
	}
	return hex.EncodeToString(h.Sum(nil))[:20], nil
}

func compile(ctx context.Context, root string, p Program, to string) error {
	cmd := exec.CommandContext(ctx, "go", "build", "-trimpath", "-buildvcs=false", "-ldflags=-s -w", "-o", to, "./"+p.Package)
	cmd.Dir = root
	cmd.Env = append(os.Environ(), "GOOS=js", "GOARCH=wasm", "CGO_ENABLED=0")
	if out, err := cmd.CombinedOutput(); err != nil {
		if ctx.Err() != nil {
			return ctx.Err()
		}
		return fmt.Errorf("%s does not compile for the browser: %s", p.Package, strings.Join(strings.Fields(string(out)), " "))
	}
	return nil
}

// pack writes the compressed twin of a file.
func pack(file string) error {
	data, err := os.ReadFile(file)
	if err != nil {
		return err
	}
	var b bytes.Buffer
	z, err := gzip.NewWriterLevel(&b, gzip.BestCompression)
	if err != nil {
		return err
	}
	if _, err := z.Write(data); err != nil {
		return err
	}
	if err := z.Close(); err != nil {
		return err
	}
	return os.WriteFile(file+packedEnding, b.Bytes(), 0o644)
}

func copySupport(ctx context.Context, dir string) error {
	out, err := exec.CommandContext(ctx, "go", "env", "GOROOT").Output()
	if err != nil {
		return fmt.Errorf("go env GOROOT: %w", err)
	}
	from := filepath.Join(strings.TrimSpace(string(out)), "lib", "wasm", supportFile)
	data, err := os.ReadFile(from)
	if err != nil {
		return fmt.Errorf("the Go installation lacks lib/wasm/%s; reinstall Go: %w", supportFile, err)
	}
	return os.WriteFile(filepath.Join(dir, supportFile), data, 0o644)
}
