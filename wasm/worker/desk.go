//go:build js && wasm

package main

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"syscall/js"
	"time"

	"shearprint/field"
	"shearprint/field/format"
	"shearprint/field/study"
	"shearprint/field/topology"
	"shearprint/wasm/session"
)

// desk takes the page's requests and gives each to who can answer it.
type desk struct {
	post    func(session.Reply, []byte, js.Value)
	jobs    session.Jobs
	painter *painter
	run     *run // what is open; nil at first
}

// run is an open run.
type run struct {
	field *field.Field
	study *study.Study
}

func newDesk(post func(session.Reply, []byte, js.Value)) *desk {
	d := &desk{post: post}
	d.painter = newPainter(post)
	go d.painter.work()
	return d
}

func (d *desk) tell(r session.Reply) { d.post(r, nil, js.Undefined()) }

// answer sends the result of a request, or why there is none.
func (d *desk) answer(r session.Request, body any, err error) {
	reply := session.Reply{ID: r.ID, Body: body}
	if err != nil {
		reply.Body, reply.Error = nil, err.Error()
		if errors.Is(err, context.Canceled) {
			reply.Error = "cancelled"
		}
	}
	if r.ID != 0 || err != nil {
		d.tell(reply)
	}
}

// handler answers requests of one kind. Long ones run beside the others, as jobs that can be cancelled.
type handler struct {
	long bool
	do   func(d *desk, ctx context.Context, r session.Request, block js.Value) (any, error)
}

var handlers = map[string]handler{}

func init() {
	handlers = map[string]handler{
		"open": {true, (*desk).openRun}, "points": {true, (*desk).findPoints}, "call": {true, (*desk).call},
		"cancel": {false, (*desk).cancel},
	}
	// What concerns the picture is done by the painter, in the order in which it comes.
	for name, do := range painterTasks {
		handlers[name] = handler{false, func(d *desk, _ context.Context, r session.Request, block js.Value) (any, error) {
			d.painter.enter(name, func() {
				body, err := do(d.painter, r, block)
				if body != nil || err != nil {
					d.answer(r, body, err)
				}
			})
			return nil, nil
		}}
	}
}

func (d *desk) receive(r session.Request, block js.Value) {
	h, ok := handlers[r.What]
	if !ok {
		d.answer(r, nil, fmt.Errorf("there is no request %q", r.What))
		return
	}
	if !h.long {
		body, err := h.do(d, context.Background(), r, block)
		if body != nil || err != nil {
			d.answer(r, body, err)
		}
		return
	}
	go func() {
		ctx, end := d.jobs.Begin(context.Background(), r.ID)
		defer end()
		body, err := h.do(d, patient{ctx}, r, block)
		d.answer(r, body, err)
	}()
}

func (d *desk) cancel(_ context.Context, r session.Request, _ js.Value) (any, error) {
	c, err := session.Read[session.Cancel](r)
	if err == nil {
		d.jobs.Cancel(c.ID)
	}
	return nil, err
}

// progress returns a function that tells the page how far the work on a request is, ten times a second at most.
func (d *desk) progress(r session.Request, stage string) func(share float64) {
	last := time.Time{}
	return func(share float64) {
		if time.Since(last) < 100*time.Millisecond {
			return
		}
		last = time.Now()
		d.tell(session.Reply{Event: "progress", Body: session.Progress{ID: r.ID, Stage: stage, Share: share}})
	}
}

// opened is the answer to "open".
type opened struct {
	Name         string       `json:"name"`
	Triangles    int          `json:"triangles"`
	LargestTau   float64      `json:"largest_tau"`
	HasP         bool         `json:"has_p"`
	HasCp        bool         `json:"has_cp"`
	Milliseconds float64      `json:"milliseconds"`
	View         session.View `json:"view"`
	Warning      string       `json:"warning"` // what was wrong with the link; "" for nothing
}

// openRun reads a run. The one that is open stays until the new one is ready, and for good if it cannot be read.
func (d *desk) openRun(ctx context.Context, r session.Request, block js.Value) (any, error) {
	o, err := session.Read[session.Open](r)
	if err != nil {
		return nil, err
	}
	start := time.Now()
	step := func(stage string) error {
		d.progress(r, stage)(-1)
		letIn() // for the page to hear it, and for us to hear "cancel"
		return ctx.Err()
	}
	if err := step("Reading " + o.Name); err != nil {
		return nil, err
	}
	raw, err := format.Prepare(o.Name, bytesOf(block), format.Options{})
	if err != nil {
		return nil, err
	}
	if err := step("Building the surface of " + o.Name); err != nil {
		return nil, err
	}
	f, err := field.Build(raw)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", o.Name, err)
	}
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	d.run = &run{f, study.New(f)}
	d.jobs.Keep(r.ID) // nobody waits for answers about the old run
	done := make(chan opened, 1)
	d.painter.enter("open", func() {
		view, warning := d.painter.begin(f, o)
		done <- opened{View: view, Warning: warning}
	})
	out := <-done
	out.Name, out.Triangles, out.LargestTau = f.Name, len(f.Tris), f.MaxTau
	out.HasP, out.HasCp = f.P != nil, f.Cp != nil
	out.Milliseconds = milliseconds(time.Since(start))
	return out, nil
}

// pointsFound is the answer to "points".
type pointsFound struct {
	Text         string  `json:"text"` // of the topology without lines, as the call gives it
	Levels       []level `json:"levels"`
	Milliseconds float64 `json:"milliseconds"`
}

// level tells which points leave the ledger when the noise floor rises above a robustness.
type level struct {
	Robustness float64  `json:"robustness"`
	Points     []string `json:"points"`
}

// findPoints finds points and lines, above a noise floor, for the picture and for the ledger.
func (d *desk) findPoints(ctx context.Context, r session.Request, _ js.Value) (any, error) {
	floor, err := session.Read[session.Floor](r)
	if err != nil {
		return nil, err
	}
	run := d.run
	if run == nil {
		return nil, errNoRun
	}
	start := time.Now()
	tell := d.progress(r, "Finding critical points and lines")
	tell(0)
	sk, err := topology.Find(ctx, run.field, topology.Options{
		MinRobustness: floor.Robustness, Lines: true,
		Progress: func(share float64) {
			tell(share)
			pause()
		},
	})
	if err != nil {
		return nil, err
	}
	out := pointsFound{Milliseconds: milliseconds(time.Since(start)), Levels: []level{}}
	for _, l := range sk.Levels() {
		ids := make([]string, len(l.Points))
		for i, p := range l.Points {
			ids[i] = sk.Points[p].ID
		}
		out.Levels = append(out.Levels, level{l.Robustness, ids})
	}
	args, err := json.Marshal(map[string]any{"lines": false, "min_robustness": floor.Robustness})
	if err != nil {
		return nil, err
	}
	text, err := run.study.Call(ctx, "topology", args)
	if err != nil {
		return nil, err
	}
	out.Text = string(text)
	if d.run == run {
		taken := make(chan struct{})
		d.painter.enter("skeleton", func() {
			d.painter.take(sk)
			close(taken)
		})
		<-taken
	}
	return out, nil
}

var errNoRun = errors.New("no run is open: drop a file on the page, or press Open")

// text is an answer that is itself JSON.
type text struct {
	Text string `json:"text"`
}

func (d *desk) call(ctx context.Context, r session.Request, _ js.Value) (any, error) {
	c, err := session.Read[session.Call](r)
	if err != nil {
		return nil, err
	}
	if d.run == nil {
		return nil, errNoRun
	}
	b, err := d.run.study.Call(ctx, c.Name, c.Args)
	return text{string(b)}, err
}

func milliseconds(d time.Duration) float64 { return float64(d.Microseconds()) / 1000 }
