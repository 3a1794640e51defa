//go:build js && wasm

// Command view is the program in the page that mixes and presents pictures on a GPU, through Ebitengine. It computes
// nothing, and takes no input: the page's own elements do, so that keyboard, touch and screen readers work.
package main

import (
	"log"
	"syscall/js"

	"github.com/hajimehoshi/ebiten/v2"
)

func main() {
	g, err := newGame()
	if err != nil {
		log.Fatal(err)
	}
	js.Global().Set("shearprintPresent", js.FuncOf(func(_ js.Value, args []js.Value) any {
		if err := g.receive(args[0]); err != nil {
			return err.Error()
		}
		return nil
	}))
	ebiten.SetScreenClearedEveryFrame(false)
	ebiten.SetTPS(ebiten.SyncWithFPS)
	if err := ebiten.RunGame(g); err != nil {
		log.Fatal(err)
	}
}
