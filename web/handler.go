package web

import (
	"bytes"
	"crypto/sha256"
	"embed"
	"encoding/hex"
	"encoding/json"
	"io/fs"
	"net/http"
	"os"
	"path"
	"path/filepath"
	"strings"
	"time"
)

//go:embed page
var pages embed.FS

// Run is a run that the handler serves. The page asks for it by Name.
type Run struct {
	Name string // as the address names it: letters, digits and -_. only
	Data func() ([]byte, error)
}

// Handler serves the page, the compiled programs in the folder dir (see Build) and the runs, the first of which the page
// opens. The programs go compressed where the browser takes that, and are loaded again only after a change.
func Handler(dir string, runs []Run) http.Handler {
	page, err := fs.Sub(pages, "page")
	if err != nil {
		panic("web: " + err.Error()) // the folder is embedded above
	}
	s := &server{page: page, dir: dir, runs: map[string]Run{}}
	for _, r := range runs {
		s.runs[r.Name] = r
		s.names = append(s.names, r.Name)
	}
	return s
}

type server struct {
	page  fs.FS
	dir   string
	runs  map[string]Run
	names []string // of the runs, in order
}

// kinds are the media types that browsers insist on.
var kinds = map[string]string{
	".html": "text/html; charset=utf-8", ".css": "text/css; charset=utf-8", ".js": "text/javascript; charset=utf-8",
	".wasm": "application/wasm", ".json": "application/json", ".svg": "image/svg+xml", ".glb": "model/gltf-binary",
}

// headers go with every answer. The first two let a page share memory between workers; the policy keeps the page to its
// own server.
var headers = map[string]string{
	"Cross-Origin-Opener-Policy": "same-origin", "Cross-Origin-Embedder-Policy": "require-corp",
	"X-Content-Type-Options": "nosniff", "Cache-Control": "no-cache",
	"Content-Security-Policy": "default-src 'self' 'wasm-unsafe-eval'; img-src 'self' data: blob:; style-src 'self' 'unsafe-inline'",
}

func (s *server) ServeHTTP(w http.ResponseWriter, r *http.Request) {
	if r.Method != http.MethodGet && r.Method != http.MethodHead {
		http.Error(w, "only GET and HEAD are answered", http.StatusMethodNotAllowed)
		return
	}
	name := strings.TrimPrefix(path.Clean("/"+r.URL.Path), "/")
	if name == "" {
		name = "index.html"
	}
	packed := strings.Contains(r.Header.Get("Accept-Encoding"), "gzip")
	data, packed, err := s.file(name, packed)
	if err != nil {
		http.NotFound(w, r)
		return
	}
	head := w.Header()
	for k, v := range headers {
		head.Set(k, v)
	}
	kind, ok := kinds[path.Ext(name)]
	if !ok {
		kind = "application/octet-stream"
	}
	head.Set("Content-Type", kind)
	if packed {
		head.Set("Content-Encoding", "gzip")
	}
	head.Set("Vary", "Accept-Encoding")
	sum := sha256.Sum256(data)
	head.Set("ETag", `"`+hex.EncodeToString(sum[:8])+`"`)
	http.ServeContent(w, r, "", time.Time{}, bytes.NewReader(data))
}

// file returns the bytes behind a path, compressed if they can be had so and are wanted so: the page's own files, the
// programs, the runs under runs/, and their list.
func (s *server) file(name string, packed bool) ([]byte, bool, error) {
	if name == "runs.json" {
		data, err := json.Marshal(map[string][]string{"runs": append([]string{}, s.names...)})
		return data, false, err
	}
	if run, ok := strings.CutPrefix(name, "runs/"); ok {
		r, ok := s.runs[run]
		if !ok {
			return nil, false, fs.ErrNotExist
		}
		data, err := r.Data()
		return data, false, err
	}
	for _, built := range builtFiles() {
		if built != name {
			continue
		}
		if packed {
			data, err := os.ReadFile(filepath.Join(s.dir, name+packedEnding))
			return data, true, err
		}
		data, err := os.ReadFile(filepath.Join(s.dir, name))
		return data, false, err
	}
	data, err := fs.ReadFile(s.page, name)
	return data, false, err
}
