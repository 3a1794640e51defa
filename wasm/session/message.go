package session

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
	"shearprint/render"
)

// Version is the protocol's version: page and worker of different versions refuse each other, which happens where a
// browser keeps one of them longer than the other.
const Version = 1

// Request is a message from the page.
type Request struct {
	ID   int64           // an answer carries the same; 0 where none is wanted
	What string          // its kind: "open", "call", "gesture", ...
	Args json.RawMessage // an object; Read decodes it
}

// envelope is a request as it is written.
type envelope struct {
	Version int             `json:"version"`
	ID      int64           `json:"id"`
	What    string          `json:"what"`
	Args    json.RawMessage `json:"args"`
}

// ParseRequest reads a request. The error names what is wrong.
func ParseRequest(text string) (Request, error) {
	var e envelope
	if err := strict([]byte(text), &e); err != nil {
		return Request{}, fmt.Errorf("a message that cannot be read: %w", err)
	}
	switch {
	case e.Version != Version:
		return Request{}, fmt.Errorf("page and worker are of different versions (%d and %d); reload the page", e.Version, Version)
	case e.ID < 0 || e.What == "":
		return Request{}, fmt.Errorf("a message without a kind, or with the id %d", e.ID)
	}
	return Request{e.ID, e.What, e.Args}, nil
}

// Text returns the request as ParseRequest reads it.
func (r Request) Text() (string, error) {
	b, err := json.Marshal(envelope{Version, r.ID, r.What, r.Args})
	return string(b), err
}

// strict decodes JSON and refuses names that it does not know and anything that follows.
func strict(data []byte, into any) error {
	d := json.NewDecoder(bytes.NewReader(data))
	d.DisallowUnknownFields()
	if err := d.Decode(into); err != nil {
		return err
	}
	if d.More() {
		return fmt.Errorf("something follows the object")
	}
	return nil
}

// checked is what the arguments of a request can do: say what is wrong with them.
type checked interface{ Check() error }

// Read decodes the arguments of a request and checks them.
func Read[T checked](r Request) (T, error) {
	var args T
	if len(r.Args) > 0 {
		if err := strict(r.Args, &args); err != nil {
			return args, fmt.Errorf("arguments of %s: %w", r.What, err)
		}
	}
	if err := args.Check(); err != nil {
		return args, fmt.Errorf("arguments of %s: %w", r.What, err)
	}
	return args, nil
}

// Reply is a message from the worker: the answer to a request, or an event.
type Reply struct {
	Version int    `json:"version"`
	ID      int64  `json:"id"`              // of the request; 0 for an event
	Event   string `json:"event,omitempty"` // "started", "progress", "frame", "view"
	Error   string `json:"error,omitempty"` // why there is no answer
	Body    any    `json:"body,omitempty"`
}

// Text returns the reply as a line of JSON.
func (r Reply) Text() (string, error) {
	r.Version = Version
	b, err := json.Marshal(r)
	return string(b), err
}

// Progress is the body of the event of that name.
type Progress struct {
	ID    int64   `json:"id"`    // of the request that is worked on
	Stage string  `json:"stage"` // what is done, in words
	Share float64 `json:"share"` // from 0 to 1; negative where nobody knows
}

// FrameInfo is the body of the event "frame"; the pixels, RGBA, lie beside it.
type FrameInfo struct {
	Width        int     `json:"width"`
	Height       int     `json:"height"`
	Still        bool    `json:"still"`        // refined: nothing better follows until something changes
	Animated     bool    `json:"animated"`     // its texture moves
	Milliseconds float64 `json:"milliseconds"` // that making it took
	Number       int64   `json:"number"`       // rising
	Key          Key     `json:"key"`
}

// Key is what a reader needs to read a frame: the colours, the scale and the directions.
type Key struct {
	Colour string        `json:"colour"` // the view's word for the quantity
	Unit   string        `json:"unit"`   // of Low and High; "" for none
	Low    float64       `json:"low"`    // the values at the ends of the colours
	High   float64       `json:"high"`
	Table  []byte        `json:"table"`  // RGB from Low to High, the first entry for "no value"
	Length string        `json:"length"` // unit of lengths; "" where nobody told
	Pixel  float64       `json:"pixel"`  // length that a CSS pixel shows in the plane through the camera's target
	Axes   [3][2]float64 `json:"axes"`   // x, y and z on the frame, x right and y down; unit length where seen square on
}

// KeyOf returns the key of a frame of the view on a stage.
func KeyOf(v View, s Size, f *field.Field, l *render.Layers) Key {
	c := v.Camera()
	k := Key{Colour: v.Colour, Low: l.Low, High: l.High, Length: f.Units.Length, Pixel: c.Height() / max(s.Height, 1)}
	switch v.Colour {
	case "p":
		k.Unit = f.Units.P
	case "tau":
		k.Unit = f.Units.Tau
	}
	if k.Unit == "1" {
		k.Unit = ""
	}
	for _, x := range l.Table {
		k.Table = append(k.Table, x[:]...)
	}
	// Directions do not depend on the distance: a parallel camera shows them.
	c.Ortho = true
	lens := c.Lens(1, 1)
	x0, y0, _ := lens.Project(c.At)
	for i, d := range [3]r3.Vec{{X: 1}, {Y: 1}, {Z: 1}} {
		x, y, _ := lens.Project(c.At.AddScaled(c.Height(), d))
		k.Axes[i] = [2]float64{x - x0, y - y0}
	}
	return k
}

func finite(xs ...float64) bool {
	for _, x := range xs {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			return false
		}
	}
	return true
}
