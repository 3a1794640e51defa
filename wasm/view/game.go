//go:build js && wasm

package main

import (
	_ "embed" // for the shader
	"fmt"
	"image"
	"math"
	"sync"
	"syscall/js"
	"time"

	"github.com/hajimehoshi/ebiten/v2"

	"shearprint/wasm/session"
)

//go:embed mix.kage
var mixSource []byte

// game mixes the layers of the last picture and shows the result over the whole window.
type game struct {
	mix *ebiten.Shader

	mu    sync.Mutex // guards what follows
	block []byte
	frame session.Packed
	fresh bool // block holds a picture that is not uploaded yet

	a, b, overlay, table *ebiten.Image
	mixed                *ebiten.Image // the picture, in its own size
	ready, told          bool
	began                time.Time // of the present picture's motion
}

// flowPeriod is the time in which the moving texture repeats; the worker's is the same.
const flowPeriod = 900 * time.Millisecond

func newGame() (*game, error) {
	mix, err := ebiten.NewShader(mixSource)
	if err != nil {
		return nil, fmt.Errorf("the shader that mixes: %w", err)
	}
	return &game{mix: mix, told: true, began: time.Now()}, nil
}

// receive takes a packed picture out of an Uint8Array.
func (g *game) receive(array js.Value) error {
	g.mu.Lock()
	defer g.mu.Unlock()
	n := array.Length()
	if cap(g.block) < n {
		g.block = make([]byte, n)
	}
	g.block = g.block[:n]
	js.CopyBytesToGo(g.block, array)
	frame, err := session.Unpack(g.block)
	if err != nil {
		return err
	}
	g.frame, g.fresh, g.told = frame, true, false
	return nil
}

// Update tells the page once that the program has started.
func (g *game) Update() error {
	if !g.ready {
		g.ready = true
		js.Global().Call("shearprintViewReady")
	}
	return nil
}

// Draw uploads a new picture's layers, mixes them, and shows the result.
func (g *game) Draw(screen *ebiten.Image) {
	g.mu.Lock()
	defer g.mu.Unlock()
	f := &g.frame
	if f.W == 0 {
		return
	}
	if g.fresh {
		g.upload()
		g.fresh = false
		g.mixLayers()
	} else if f.Animated {
		g.mixLayers()
	}
	op := &ebiten.DrawImageOptions{}
	size := screen.Bounds()
	if size.Dx() != f.W || size.Dy() != f.H {
		op.GeoM.Scale(float64(size.Dx())/float64(f.W), float64(size.Dy())/float64(f.H))
		op.Filter = ebiten.FilterLinear
	}
	op.Blend = ebiten.BlendCopy
	screen.DrawImage(g.mixed, op)
	if !g.told {
		g.told = true
		js.Global().Call("shearprintShown")
	}
}

// upload brings the layers to the GPU.
func (g *game) upload() {
	f := &g.frame
	g.a = fitted(g.a, f.PW, f.PH)
	g.b = fitted(g.b, f.PW, f.PH)
	g.table = fitted(g.table, 256, 1)
	g.overlay = fitted(g.overlay, f.W, f.H)
	g.mixed = fitted(g.mixed, f.W, f.H)
	g.a.WritePixels(f.A)
	g.b.WritePixels(f.B)
	g.table.WritePixels(f.Table)
	g.overlay.WritePixels(f.Overlay)
}

// mixLayers mixes the picture at the present phase of its motion.
func (g *game) mixLayers() {
	f := &g.frame
	animated := 0
	if f.Animated {
		animated = 1
	}
	sin, cos := math.Sincos(2 * math.Pi * float64(time.Since(g.began)) / float64(flowPeriod))
	op := &ebiten.DrawTrianglesShaderOptions{Blend: ebiten.BlendCopy}
	op.Images = [4]*ebiten.Image{g.overlay, g.a, g.b, g.table}
	op.Uniforms = map[string]any{
		"Factor": float32(f.Factor), "Animated": animated,
		"Planes": []float32{float32(f.PW), float32(f.PH)}, "Wave": []float32{float32(cos), float32(sin)},
		"Back": []float32{float32(f.Back[0]), float32(f.Back[1]), float32(f.Back[2]), float32(f.Back[3])},
	}
	w, h := float32(f.W), float32(f.H)
	vertices := []ebiten.Vertex{
		{DstX: 0, DstY: 0, SrcX: 0, SrcY: 0}, {DstX: w, DstY: 0, SrcX: w, SrcY: 0},
		{DstX: 0, DstY: h, SrcX: 0, SrcY: h}, {DstX: w, DstY: h, SrcX: w, SrcY: h},
	}
	g.mixed.DrawTrianglesShader(vertices, []uint16{0, 1, 2, 1, 2, 3}, g.mix, op)
}

// fitted returns an image of that size: the given one if it fits.
func fitted(m *ebiten.Image, w, h int) *ebiten.Image {
	if m != nil {
		if b := m.Bounds(); b.Dx() == w && b.Dy() == h {
			return m
		}
		m.Deallocate()
	}
	return ebiten.NewImageWithOptions(image.Rect(0, 0, w, h), &ebiten.NewImageOptions{Unmanaged: true})
}

// Layout gives the screen as many pixels as the device has.
func (g *game) Layout(w, h int) (int, int) {
	s := ebiten.Monitor().DeviceScaleFactor()
	return int(float64(w)*s + 0.5), int(float64(h)*s + 0.5)
}
