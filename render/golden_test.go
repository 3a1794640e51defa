package render_test

import (
	"bytes"
	"context"
	"crypto/sha256"
	"image"
	"image/draw"
	"image/png"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"shearprint/field"
	"shearprint/field/format"
	"shearprint/field/topology"
	"shearprint/render"
)

// goldenViews are the three views of every golden picture: a flow-wise, a crosswise and a free one.
var goldenViews = []string{"front", "top", "iso"}

// goldenRuns are the surfaces of the golden pictures; the computed ones come from the runs of the project's test data.
var goldenRuns = []struct {
	name string
	load func(t *testing.T) *field.Field
}{
	{"sphere", func(*testing.T) *field.Field { return strained(4000) }},
	{"radome", fromRun("radome")},
	{"pod", fromRun("pod")},
	{"hut", fromRun("hut")},
}

func fromRun(name string) func(t *testing.T) *field.Field {
	return func(t *testing.T) *field.Field {
		t.Helper()
		file := "../testdata/runs/" + name + ".ply"
		data, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		f, err := format.Load(file, data, format.Options{})
		if err != nil {
			t.Fatal(err)
		}
		return f
	}
}

// Pictures may differ from the golden ones by what a later change of rounding does, not by what an eye would see: the
// mean difference of a byte, and the share of pixels that differ by more than a tenth of the range.
const (
	goldenMean  = 1.0
	goldenShare = 0.01
)

// The golden pictures, 320 x 200. SHEARPRINT_GOLDEN=update accepts the new ones: look at them first.
func TestGoldenPictures(t *testing.T) {
	known := map[string]bool{}
	for _, run := range goldenRuns {
		f := run.load(t)
		sk, err := topology.Find(context.Background(), f, topology.Options{})
		if err != nil {
			t.Fatal(err)
		}
		scene := render.SceneOf(f, sk)
		r := render.NewRenderer()
		for _, view := range goldenViews {
			name := run.name + "-" + view + ".png"
			known[name] = true
			cam := render.NamedView(view, f).Fit(f, 1.6)
			got, err := r.Picture(context.Background(), scene, cam, 320, 200, 1)
			if err != nil {
				t.Fatal(err)
			}
			t.Logf("%s %x", name, sha256.Sum256(got.Pix)) // to compare targets: these must be the same on all
			compareGolden(t, filepath.Join("testdata", "golden", name), got)
		}
	}
	files, err := os.ReadDir(filepath.Join("testdata", "golden"))
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range files {
		if strings.HasSuffix(f.Name(), ".png") && !known[f.Name()] {
			t.Errorf("testdata/golden/%s belongs to no test", f.Name())
		}
	}
}

func compareGolden(t *testing.T, file string, got *image.RGBA) {
	t.Helper()
	if os.Getenv("SHEARPRINT_GOLDEN") == "update" {
		var b bytes.Buffer
		if err := png.Encode(&b, got); err != nil {
			t.Fatal(err)
		}
		if err := os.MkdirAll(filepath.Dir(file), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(file, b.Bytes(), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	data, err := os.Open(file)
	if err != nil {
		t.Fatal(err)
	}
	defer data.Close()
	img, err := png.Decode(data)
	if err != nil {
		t.Fatal(err)
	}
	want := image.NewRGBA(img.Bounds())
	draw.Draw(want, want.Bounds(), img, image.Point{}, draw.Src)
	if want.Bounds() != got.Bounds() {
		t.Fatalf("%s: size %v, want %v", file, got.Bounds(), want.Bounds())
	}
	sum, far := 0, 0
	for i := range got.Pix {
		d := int(got.Pix[i]) - int(want.Pix[i])
		d = max(d, -d)
		sum += d
		if d > 25 {
			far++
		}
	}
	n := float64(len(got.Pix))
	if float64(sum)/n > goldenMean || float64(far)/n > goldenShare {
		t.Errorf("%s: mean difference %.2f, %.2f %% of the bytes differ by more than 25", file, float64(sum)/n,
			100*float64(far)/n)
	}
}
