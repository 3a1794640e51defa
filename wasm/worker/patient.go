//go:build js && wasm

package main

import (
	"context"
	"syscall/js"
	"time"
)

// patience is how long work may keep messages waiting: half of what the eye notices between hand and picture.
const patience = 12 * time.Millisecond

// patient is a context whose Err lets the browser deliver waiting messages, now and then. What asks it must hold nothing
// that receiving a message needs.
type patient struct{ context.Context }

// Err returns the inner context's error after a pause for messages.
func (p patient) Err() error {
	pause()
	return p.Context.Err()
}

var lastPause = time.Now()

// pause lets messages in if they may have waited for long.
func pause() {
	if time.Since(lastPause) < patience {
		return
	}
	letIn()
	lastPause = time.Now()
}

// channel carries a message of the program to itself, which arrives behind those that wait already. Timers would do the
// same, but browsers make them wait for 4 ms.
var (
	channel = js.Global().Get("MessageChannel").New()
	arrived = make(chan struct{}, 64) // more than ever wait at once
)

func init() {
	channel.Get("port1").Set("onmessage", js.FuncOf(func(js.Value, []js.Value) any {
		select {
		case arrived <- struct{}{}:
		default:
		}
		return nil
	}))
}

func letIn() {
	channel.Get("port2").Call("postMessage", nil)
	<-arrived
}
