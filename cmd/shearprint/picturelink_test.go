package main

import (
	"bytes"
	"context"
	"image"
	"image/png"
	"os"
	"path/filepath"
	"testing"
)

// A link and the options that say the same give the same pixels.
func TestPictureOfALink(t *testing.T) {
	dir := t.TempDir()
	run := filepath.Join("..", "..", "testdata", "demo", "radome.glb")
	draw := func(name string, words ...string) image.Image {
		file := filepath.Join(dir, name)
		var out, errOut bytes.Buffer
		args := append([]string{"picture", run, "-o", file, "--quiet", "--size", "320x200"}, words...)
		if got := runWords(t, args, &out, &errOut); got != done {
			t.Fatalf("%v: exit status %d: %s", words, got, errOut.String())
		}
		f, err := os.Open(file)
		if err != nil {
			t.Fatal(err)
		}
		defer f.Close()
		picture, err := png.Decode(f)
		if err != nil {
			t.Fatal(err)
		}
		return picture
	}
	a := draw("a.png", "--look", "-3,-3,2.5:0.3,0,0.2", "--colour", "tau", "--min-robustness", "0.05")
	b := draw("b.png", "--view", "#eye=-3,-3,2.5&target=0.3,0,0.2&up=0,0,1&colour=tau&floor=0.05")
	for y := range 200 {
		for x := range 320 {
			if a.At(x, y) != b.At(x, y) {
				t.Fatalf("pixel %d, %d: %v by options, %v by the link", x, y, a.At(x, y), b.At(x, y))
			}
		}
	}
}

func runWords(t *testing.T, args []string, out, errOut *bytes.Buffer) int {
	t.Helper()
	return run(context.Background(), args, out, errOut)
}
