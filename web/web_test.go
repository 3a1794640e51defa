package web_test

import (
	"bytes"
	"compress/gzip"
	"context"
	"io"
	"net/http"
	"net/http/httptest"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"shearprint/web"
)

// wireBudget is what both compiled programs together may weigh, compressed.
const wireBudget = 5_000_000

// get asks the handler for a path.
func get(h http.Handler, method, path string, headers map[string]string) *http.Response {
	r := httptest.NewRequest(method, path, nil)
	for k, v := range headers {
		r.Header.Set(k, v)
	}
	w := httptest.NewRecorder()
	h.ServeHTTP(w, r)
	return w.Result()
}

func body(t *testing.T, r *http.Response) string {
	t.Helper()
	b, err := io.ReadAll(r.Body)
	if err != nil {
		t.Fatal(err)
	}
	return string(b)
}

// A folder as Build leaves it, without compiling.
func built(t *testing.T) string {
	t.Helper()
	dir := t.TempDir()
	for _, name := range []string{"worker.wasm", "view.wasm", "wasm_exec.js"} {
		var b bytes.Buffer
		z := gzip.NewWriter(&b)
		io.WriteString(z, "bytes of "+name)
		z.Close()
		for file, data := range map[string][]byte{name: []byte("bytes of " + name), name + ".gz": b.Bytes()} {
			if err := os.WriteFile(filepath.Join(dir, file), data, 0o644); err != nil {
				t.Fatal(err)
			}
		}
	}
	return dir
}

func TestHandler(t *testing.T) {
	h := web.Handler(built(t), []web.Run{
		{Name: "a.ply", Data: func() ([]byte, error) { return []byte("the run"), nil }},
		{Name: "gone.ply", Data: func() ([]byte, error) { return nil, os.ErrNotExist }},
	})
	for _, c := range []struct {
		method, path string
		status       int
		kind, word   string
	}{
		{"GET", "/", 200, "text/html; charset=utf-8", "Shearprint"},
		{"GET", "/index.html", 200, "text/html; charset=utf-8", "<main"},
		{"GET", "/main.js", 200, "text/javascript; charset=utf-8", "engine"},
		{"GET", "/style.css", 200, "text/css; charset=utf-8", "--paper"},
		{"GET", "/worker.wasm", 200, "application/wasm", "bytes of worker.wasm"},
		{"GET", "/view.wasm", 200, "application/wasm", "bytes of view.wasm"},
		{"GET", "/wasm_exec.js", 200, "text/javascript; charset=utf-8", "bytes of wasm_exec.js"},
		{"GET", "/runs.json", 200, "application/json", `"a.ply"`},
		{"GET", "/runs/a.ply", 200, "application/octet-stream", "the run"},
		{"HEAD", "/runs/a.ply", 200, "application/octet-stream", ""},
		{"GET", "/runs/b.ply", 404, "text/plain; charset=utf-8", ""},
		{"GET", "/runs/gone.ply", 404, "text/plain; charset=utf-8", ""},
		{"GET", "/../build.go", 404, "text/plain; charset=utf-8", ""},
		{"GET", "/runs/../../build.go", 404, "text/plain; charset=utf-8", ""},
		{"GET", "/page", 404, "text/plain; charset=utf-8", ""},
		{"POST", "/", 405, "text/plain; charset=utf-8", "GET"},
	} {
		r := get(h, c.method, c.path, nil)
		if kind := r.Header.Get("Content-Type"); r.StatusCode != c.status || kind != c.kind {
			t.Errorf("%s %s: status %d, %s; want %d, %s", c.method, c.path, r.StatusCode, kind, c.status, c.kind)
		}
		if text := body(t, r); !strings.Contains(text, c.word) {
			t.Errorf("%s %s: %.80q lacks %q", c.method, c.path, text, c.word)
		}
	}
}

// The programs travel compressed, and not at all where the browser has them.
func TestProgramsOnTheWire(t *testing.T) {
	h := web.Handler(built(t), nil)
	r := get(h, "GET", "/worker.wasm", map[string]string{"Accept-Encoding": "br, gzip"})
	if r.Header.Get("Content-Encoding") != "gzip" || r.Header.Get("Content-Type") != "application/wasm" {
		t.Errorf("headers %v", r.Header)
	}
	z, err := gzip.NewReader(r.Body)
	if err != nil {
		t.Fatal(err)
	}
	if b, err := io.ReadAll(z); err != nil || string(b) != "bytes of worker.wasm" {
		t.Errorf("got %q, %v", b, err)
	}
	again := get(h, "GET", "/worker.wasm", map[string]string{"Accept-Encoding": "gzip", "If-None-Match": r.Header.Get("ETag")})
	if again.StatusCode != http.StatusNotModified {
		t.Errorf("a program that the browser has is sent again: status %d", again.StatusCode)
	}
}

// Build compiles once, in sight of the user, and stays within the budget.
func TestBuild(t *testing.T) {
	if testing.Short() {
		t.Skip("compiling takes too long for -short")
	}
	cache := t.TempDir()
	t.Setenv("XDG_CACHE_HOME", cache)
	old, recent := filepath.Join(cache, "shearprint", "old"), filepath.Join(cache, "shearprint", "recent")
	for dir, age := range map[string]time.Duration{old: 60 * 24 * time.Hour, recent: time.Hour} {
		if err := os.MkdirAll(dir, 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.Chtimes(dir, time.Time{}, time.Now().Add(-age)); err != nil {
			t.Fatal(err)
		}
	}
	if out, err := goCache(); err == nil { // the compiler's own cache must not move with the user's
		t.Setenv("GOCACHE", out)
	}
	var told []string
	dir, err := web.Build(context.Background(), func(s string) { told = append(told, s) })
	if err != nil {
		t.Fatal(err)
	}
	if _, err := os.Stat(old); err == nil {
		t.Error("a build of long ago stays")
	}
	if _, err := os.Stat(recent); err != nil {
		t.Error("a build of today is gone")
	}
	if len(told) < 3 {
		t.Errorf("the build told %q", told)
	}
	total := 0
	for _, p := range web.Programs {
		info, err := os.Stat(filepath.Join(dir, p.Name+".gz"))
		if err != nil {
			t.Fatal(err)
		}
		t.Logf("%s: %d bytes compressed", p.Name, info.Size())
		total += int(info.Size())
	}
	if total > wireBudget {
		t.Errorf("both programs together have %d bytes compressed, more than %d", total, wireBudget)
	}
	told = nil
	again, err := web.Build(context.Background(), func(s string) { told = append(told, s) })
	if err != nil || again != dir || len(told) > 0 {
		t.Errorf("the second build: %s, %v, told %q; want %s", again, err, told, dir)
	}
}

// Without the Go toolchain the error is one line with a remedy; a build that is given up leaves nothing.
func TestBuildFails(t *testing.T) {
	cache := t.TempDir()
	t.Setenv("XDG_CACHE_HOME", cache)
	if out, err := goCache(); err == nil {
		t.Setenv("GOCACHE", out)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := web.Build(ctx, func(string) {}); err == nil {
		t.Error("a cancelled build succeeds")
	}
	if left, _ := filepath.Glob(filepath.Join(cache, "shearprint", "*")); len(left) > 0 {
		t.Errorf("a cancelled build leaves %q", left)
	}
	t.Setenv("PATH", t.TempDir())
	_, err := web.Build(context.Background(), func(string) {})
	if err == nil || !strings.Contains(err.Error(), "install Go") || strings.Contains(err.Error(), "\n") {
		t.Errorf("without the toolchain: %v", err)
	}
}
