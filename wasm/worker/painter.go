//go:build js && wasm

package main

import (
	"context"
	"syscall/js"
	"time"

	"shearprint/field"
	"shearprint/field/r3"
	"shearprint/field/topology"
	"shearprint/render"
	"shearprint/wasm/session"
)

// painter makes the frames, and does all that needs the last frame. One goroutine works through its tasks; what enters a
// task ends a still frame that is being made, since the task will as a rule change it.
type painter struct {
	post  func(session.Reply, []byte, js.Value)
	tasks []func()
	wake  chan struct{}
	stop  context.CancelFunc // of the still frame that is being made; nil for none

	size     session.Size
	view     session.View
	field    *field.Field
	skeleton *topology.Skeleton // above the floor that it was found with; nil until then
	all      *topology.Skeleton // without a floor
	scene    *render.Scene
	renderer *render.Renderer
	loupe    *render.Renderer

	moved  bool      // the camera has changed since the last frame
	rough  bool      // what is shown is no still frame of the present scene
	hand   time.Time // of the last movement
	flight *flight
	lines  streamlines
	flow   time.Time // of the last frame of the moving texture; zero for none
	phase  float64

	waiting bool     // the page has not shown the last frame yet
	spare   js.Value // an ArrayBuffer that the page gave back
	block   []byte
	number  int64
	anchor  anchor
	waiters []session.Request // that want to know when nothing is left to be done
	linked  string            // the link that the page knows
}

// flight is a movement of the camera that nobody's hand makes.
type flight struct {
	from, to render.Camera
	start    time.Time
}

// Times of movements, for the eye to follow and not to wait.
const (
	flightTime = 650 * time.Millisecond
	restTime   = 110 * time.Millisecond // without a movement, after which a frame is refined
	flowPeriod = 900 * time.Millisecond // in which the moving texture repeats
)

func newPainter(post func(session.Reply, []byte, js.Value)) *painter {
	return &painter{
		post: post, wake: make(chan struct{}, 1), spare: js.Undefined(), renderer: render.NewRenderer(),
		loupe: render.NewRenderer(),
	}
}

// harmless are the tasks that leave a still frame as it is.
var harmless = map[string]bool{"shown": true, "view": true, "settled": true}

// enter appends a task.
func (p *painter) enter(name string, task func()) {
	p.tasks = append(p.tasks, task)
	if p.stop != nil && !harmless[name] {
		p.stop()
	}
	p.nudge()
}

func (p *painter) nudge() {
	select {
	case p.wake <- struct{}{}:
	default:
	}
}

// work does the tasks and makes the frames, for ever.
func (p *painter) work() {
	for {
		for len(p.tasks) > 0 {
			task := p.tasks[0]
			p.tasks = p.tasks[1:]
			task()
		}
		if !p.paint() && len(p.tasks) == 0 {
			<-p.wake
		}
	}
}

// begin takes a new run, with the view of the link; it returns the view and what was wrong with the link.
func (p *painter) begin(f *field.Field, o session.Open) (session.View, string) {
	p.field, p.skeleton, p.all = f, nil, nil
	fresh := session.Default(o.Run)
	fresh.Theme = p.view.Theme
	if fresh.Theme == "" {
		fresh.Theme = "light"
	}
	view, err := session.Decode(o.Link, fresh)
	warning := ""
	if err != nil {
		view, warning = fresh, err.Error()
	}
	view.Run = o.Run
	view = view.Suit(f.P != nil, f.Cp != nil)
	if !view.HasCamera() {
		view = view.With(p.size.Fit(render.NamedView("iso", f), f))
	}
	p.view, p.flight, p.anchor = view, nil, anchor{}
	p.loupe = render.NewRenderer() // forget the old run
	p.compose()
	p.moved = true
	p.hand = time.Time{}
	p.tellLink()
	return p.view, warning
}

// take shows a skeleton.
func (p *painter) take(sk *topology.Skeleton) {
	if sk.Field != p.field {
		return
	}
	p.skeleton = sk
	if sk.Floor == 0 {
		p.all = sk
	}
	p.compose()
}

// compose makes the scene anew from view and skeleton; the next frame shows it.
func (p *painter) compose() {
	if p.field == nil {
		return
	}
	p.scene = p.sceneOf()
	p.rough = true
	p.flow = time.Time{}
}

// point moves the camera.
func (p *painter) point(c render.Camera) {
	p.view = p.view.With(c)
	p.moved, p.rough = true, true
}

// paint makes the next frame, if there is one to make, and tells whether it did.
func (p *painter) paint() bool {
	if p.scene == nil || p.size.Width <= 0 || p.waiting {
		return false
	}
	w, h := p.size.Pixels()
	switch {
	case p.flight != nil:
		t := float64(time.Since(p.flight.start)) / float64(flightTime)
		p.point(p.flight.from.FlyTo(p.flight.to, t))
		if t >= 1 {
			p.flight = nil
		}
		p.hand = time.Now().Add(-restTime) // refine at once where it ends
		return p.frame(context.Background(), w, h, render.Moving)
	case p.moved:
		return p.frame(context.Background(), w, h, render.Moving)
	case p.rough:
		if rest := restTime - time.Since(p.hand); rest > 0 {
			time.AfterFunc(rest, p.nudge)
			return false
		}
		ctx, stop := context.WithCancel(context.Background())
		p.stop = stop
		done := p.frame(patient{ctx}, w, h, render.Still)
		p.stop = nil
		stop()
		return done || len(p.tasks) > 0
	case p.scene.Animate && !p.size.Layers: // the page's view moves layers by itself
		p.tellSettled()
		return p.flowOn(w, h)
	}
	p.tellSettled()
	return false
}

// tellSettled answers those that wait for the finished picture.
func (p *painter) tellSettled() {
	for _, r := range p.waiters {
		p.post(session.Reply{ID: r.ID}, nil, js.Undefined())
	}
	p.waiters = nil
}

// frame makes a frame and posts it.
func (p *painter) frame(ctx context.Context, w, h int, q render.Quality) bool {
	start := time.Now()
	p.scene.Phase = p.phase
	f, err := p.renderer.Frame(ctx, p.scene, p.view.Camera(), w, h, q)
	if err != nil {
		if ctx.Err() == nil { // nothing that a new task would mend
			p.rough, p.moved = false, false
			p.post(session.Reply{Event: "failed", Error: err.Error()}, nil, js.Undefined())
		}
		return false
	}
	p.moved = false
	p.rough = q != render.Still
	p.show(f, q, start)
	if q == render.Still {
		p.tellLink()
	}
	return true
}

// show posts the frame as pixels or, where the page's view mixes, as layers.
func (p *painter) show(f *render.Frame, q render.Quality, start time.Time) {
	block := f.Pix
	if p.size.Layers {
		p.block = session.Pack(p.block, &f.Layers, f.W, f.H)
		block = p.block
	}
	p.number++
	p.waiting = true
	spare := p.spare
	p.spare = js.Undefined()
	info := session.FrameInfo{Width: f.W, Height: f.H, Still: q == render.Still, Animated: f.Layers.Animated, Number: p.number,
		Key:          session.KeyOf(p.view, p.size, p.field, &f.Layers),
		Milliseconds: milliseconds(time.Since(start))}
	p.post(session.Reply{Event: "frame", Body: info}, block, spare)
}

// flowOn moves the texture along the flow: a mix of the still frame's layers at a later phase.
func (p *painter) flowOn(w, h int) bool {
	f, err := p.renderer.Frame(context.Background(), p.scene, p.view.Camera(), w, h, render.Still)
	if err != nil {
		return false
	}
	now := time.Now()
	if !p.flow.IsZero() {
		p.phase += float64(now.Sub(p.flow)) / float64(flowPeriod)
		p.phase -= float64(int(p.phase))
	}
	p.flow = now
	p.scene.Phase = p.phase
	f.Layers.Mix(f.Pix, f.W, f.H, p.phase)
	p.show(f, render.Still, now)
	return true
}

// tellLink tells the page the link of the view, if it has changed.
func (p *painter) tellLink() {
	link := p.view.Encode()
	if link == p.linked {
		return
	}
	p.linked = link
	p.post(session.Reply{Event: "view", Body: map[string]string{"link": link}}, nil, js.Undefined())
}

// anchor is the place that a series of gestures of one kind keeps where it is on the stage.
type anchor struct {
	kind string
	x, y float64 // on the stage
	at   r3.Vec
	time time.Time
}
