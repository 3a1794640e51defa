package web_test

import (
	"bytes"
	"image"
	"image/draw"
	"image/png"
	"os/exec"
	"strings"
	"testing"

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
