package web_test

import (
	"bytes"
	"image"
	"image/draw"
	"image/png"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/format"
)

// pixels decodes a PNG to RGBA bytes.
func pixels(t testing.TB, data []byte) []byte {
	t.Helper()
	img, err := png.Decode(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	out := image.NewRGBA(img.Bounds())
	draw.Draw(out, out.Bounds(), img, img.Bounds().Min, draw.Src)
	return out.Pix
}

// ball returns a run as a file: the first exact case on a closed surface.
func ball(t testing.TB) []byte {
	t.Helper()
	return ply(t, exact.Cases()[0].Raw(4000))
}

func ply(t testing.TB, raw field.Raw) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := format.WriteRawPLY(&b, raw); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// goCache returns the folder of the compiler's cache.
func goCache() (string, error) {
	out, err := exec.Command("go", "env", "GOCACHE").Output()
	return strings.TrimSpace(string(out)), err
}

// processorTime returns the processor time [s] that the browser and all its processes have used; false where the system
// does not tell.
func (b *tab) processorTime() (seconds float64, ok bool) {
	root := chromedp.FromContext(b.ctx).Browser.Process()
	files, _ := filepath.Glob("/proc/[0-9]*/stat")
	if root == nil || len(files) == 0 {
		return 0, false
	}
	parent, used := map[int]int{}, map[int]float64{}
	for _, file := range files {
		data, err := os.ReadFile(file)
		if err != nil {
			continue // it has ended
		}
		_, rest, _ := strings.Cut(string(data), ") ") // the name before may hold blanks
		words := strings.Fields(rest)
		if len(words) < 13 {
			continue
		}
		pid, _ := strconv.Atoi(filepath.Base(filepath.Dir(file)))
		parent[pid], _ = strconv.Atoi(words[1])
		for _, w := range words[11:13] { // user and system time, in ticks of 10 ms
			ticks, _ := strconv.ParseFloat(w, 64)
			used[pid] += ticks / 100
		}
	}
	for pid, s := range used {
		for up := pid; up > 1; up = parent[up] {
			if up == root.Pid {
				seconds += s
				break
			}
		}
	}
	return seconds, true
}
