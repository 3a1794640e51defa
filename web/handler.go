package web

import (
	"bytes"
	"compress/gzip"
	"embed"
	"fmt"
	"io/fs"
	"net/http"
	"os"
	"path"
	"path/filepath"
	"strconv"
	"strings"
	"sync"
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
// opens. Everything is compressed where the browser takes that.
func Handler(dir string, runs []Run) http.Handler {
	page, err := fs.Sub(pages, "page")
	if err != nil {
		panic("web: " + err.Error()) // the folder is embedded above
	}
	s := &server{page: page, dir: dir, runs: map[string]Run{}, packed: map[string][]byte{}}
	for i, r := range runs {
		s.runs[r.Name] = r
		if i == 0 {
			s.first = r.Name
		}
	}
	return s
}

type server struct {
	page  fs.FS
	dir   string
	runs  map[string]Run
	first string

	mu     sync.Mutex
	packed map[string][]byte // compressed answers, by path
}

// kinds are the media types that browsers insist on.
var kinds = map[string]string{
	".html": "text/html; charset=utf-8", ".css": "text/css; charset=utf-8", ".js": "text/javascript; charset=utf-8",
	".wasm": "application/wasm", ".json": "application/json", ".svg": "image/svg+xml", ".glb": "model/gltf-binary",
}

func (s *server) ServeHTTP(w http.ResponseWriter, r *http.Request) {
	if r.Method != http.MethodGet && r.Method != http.MethodHead {
		http.Error(w, "only GET and HEAD are answered", http.StatusMethodNotAllowed)
		return
	}
	name := strings.TrimPrefix(path.Clean(r.URL.Path), "/")
	if name == "" || name == "." {
		name = "index.html"
	}
	data, err := s.file(name)
	if err != nil {
		http.NotFound(w, r)
		return
	}
	kind, ok := kinds[path.Ext(name)]
	if !ok {
		kind = "application/octet-stream"
	}
	head := w.Header()
	head.Set("Content-Type", kind)
	head.Set("Cache-Control", "no-cache")
	head.Set("Cross-Origin-Opener-Policy", "same-origin")
	head.Set("Cross-Origin-Embedder-Policy", "require-corp")
	head.Set("X-Content-Type-Options", "nosniff")
	head.Set("X-Length", strconv.Itoa(len(data))) // of what is compressed below, for progress
	if strings.Contains(r.Header.Get("Accept-Encoding"), "gzip") {
		head.Set("Content-Encoding", "gzip")
		data = s.pack(name, data)
	}
	http.ServeContent(w, r, "", time.Time{}, bytes.NewReader(data))
}

// file returns the bytes behind a path: the page's own files, the programs, the runs under runs/, and their list.
func (s *server) file(name string) ([]byte, error) {
	if name == "runs.json" {
		return fmt.Appendf(nil, "{\"first\": %q}\n", s.first), nil
	}
	if run, ok := strings.CutPrefix(name, "runs/"); ok {
		r, ok := s.runs[run]
		if !ok {
			return nil, fs.ErrNotExist
		}
		return r.Data()
	}
	if name == supportFile {
		return os.ReadFile(filepath.Join(s.dir, supportFile))
	}
	for _, p := range Programs {
		if p.Name == name {
			return os.ReadFile(filepath.Join(s.dir, name))
		}
	}
	return fs.ReadFile(s.page, name)
}

// pack returns the data compressed; what it packed once it keeps.
func (s *server) pack(name string, data []byte) []byte {
	s.mu.Lock()
	defer s.mu.Unlock()
	if p, ok := s.packed[name]; ok && !strings.HasPrefix(name, "runs") {
		return p
	}
	var b bytes.Buffer
	z := gzip.NewWriter(&b)
	z.Write(data) // a bytes.Buffer takes everything
	z.Close()
	s.packed[name] = b.Bytes()
	return b.Bytes()
}
