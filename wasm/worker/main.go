//go:build js && wasm

// Command worker is the program in the browser's worker: it reads runs, answers questions and makes the pictures. It must
// not import Ebitengine, which panics where there is no document.
//
// The program has one thread, and hears nothing while it computes. Long work therefore gets a context whose Err lets
// waiting messages in (see patient), so that a gesture or "cancel" is heard within some milliseconds.
package main

import (
	"syscall/js"

	"shearprint/wasm/session"
)

func main() {
	d := newDesk(post)
	receive := js.FuncOf(func(_ js.Value, args []js.Value) any {
		text, block := args[0].String(), args[1]
		req, err := session.ParseRequest(text)
		if err != nil {
			d.tell(session.Reply{ID: req.ID, Error: err.Error()})
			return nil
		}
		d.receive(req, block)
		return nil
	})
	self := js.Global()
	self.Set("shearprintReceive", receive)
	self.Call("shearprintReady")
	select {}
}

// bytesOf copies an ArrayBuffer into memory of the program; nil for none.
func bytesOf(block js.Value) []byte {
	if !block.Truthy() {
		return nil
	}
	view := js.Global().Get("Uint8Array").New(block)
	b := make([]byte, view.Length())
	js.CopyBytesToGo(b, view)
	return b
}

// post sends a reply to the page; block, if not nil, goes beside it. spare, if it is an ArrayBuffer of the right length,
// is used for the block instead of a new one.
func post(r session.Reply, block []byte, spare js.Value) {
	text, err := r.Text()
	if err != nil {
		text, _ = session.Reply{ID: r.ID, Error: err.Error()}.Text()
		block = nil
	}
	self := js.Global()
	if block == nil {
		self.Call("postMessage", []any{text, nil})
		return
	}
	if !spare.Truthy() || spare.Get("byteLength").Int() != len(block) {
		spare = self.Get("ArrayBuffer").New(len(block))
	}
	js.CopyBytesToJS(self.Get("Uint8Array").New(spare), block)
	self.Call("postMessage", []any{text, spare}, []any{spare})
}
