package web_test

import (
	"context"
	"math"
	"strings"
	"testing"
	"time"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/input"
	"github.com/chromedp/cdproto/performance"
	"github.com/chromedp/chromedp"

	"shearprint/field/format"
	"shearprint/field/topology"
	"shearprint/testdata/demo"
)

// touch moves fingers from one list of places to another, and lifts them.
func (b *tab) touch(from, to [][2]float64, steps int) {
	b.Helper()
	points := func(s float64) []*input.TouchPoint {
		var list []*input.TouchPoint
		for i := range from {
			list = append(list, &input.TouchPoint{ID: float64(i + 1), X: from[i][0] + s*(to[i][0]-from[i][0]),
				Y: from[i][1] + s*(to[i][1]-from[i][1])})
		}
		return list
	}
	b.do(chromedp.ActionFunc(func(ctx context.Context) error {
		if err := input.DispatchTouchEvent(input.TouchStart, points(0)).Do(ctx); err != nil {
			return err
		}
		for i := 1; i <= steps; i++ {
			if err := input.DispatchTouchEvent(input.TouchMove, points(float64(i)/float64(steps))).Do(ctx); err != nil {
				return err
			}
		}
		return input.DispatchTouchEvent(input.TouchEnd, []*input.TouchPoint{}).Do(ctx)
	}))
}

// On a telephone one finger turns, two come closer, a tap opens the card, and the instruments are sheets.
func TestTouch(t *testing.T) {
	b := visit(t, 390, 844, "?present=cpu")
	b.do(emulation.SetTouchEmulationEnabled(true).WithMaxTouchPoints(5))
	b.until(ready)
	b.settle()
	b.shot("phone")
	start := b.view()
	b.touch([][2]float64{{200, 300}}, [][2]float64{{290, 330}}, 12)
	b.settle()
	turned := b.view()
	if turned.Eye == start.Eye || math.Abs(turned.distance()/start.distance()-1) > 1e-6 {
		t.Errorf("one finger moved the eye from %v to %v", start.Eye, turned.Eye)
	}
	b.touch([][2]float64{{170, 300}, {220, 300}}, [][2]float64{{110, 300}, {280, 300}}, 12)
	b.settle()
	if closer := b.view(); !(closer.distance() < 0.6*turned.distance()) {
		t.Errorf("two fingers left the distance at %g after %g", closer.distance(), turned.distance())
	}
	b.touch([][2]float64{{195, 400}}, [][2]float64{{195, 400}}, 0)
	b.until(`!document.getElementById("card").hidden`)
	b.settle()
	b.shot("phone-card")
	b.do(chromedp.Evaluate(`document.querySelector("#card button[aria-label='Close the card']").click()`, nil))
	b.do(chromedp.Click("#ledger-button"))
	b.settle()
	b.shot("phone-ledger")
	if wide := eval[int](b, "document.documentElement.scrollWidth"); wide > 390 {
		t.Errorf("the page is %d pixels wide on a screen of 390", wide)
	}
	small := eval[[]string](b, `[...document.querySelectorAll("button")].filter((e) => e.offsetHeight && e.offsetHeight < 36)
		.map((e) => e.textContent)`)
	if len(small) > 0 {
		t.Errorf("too small for a finger: %s", strings.Join(small, ", "))
	}
}

// Every control does what it says, and every one has a name.
func TestShow(t *testing.T) {
	b := visit(t, 1280, 720, "?present=cpu")
	b.until(ready)
	b.do(chromedp.Click("#layers-button"))
	b.settle()
	b.shot("show")
	nameless := eval[int](b, `[...document.querySelectorAll("button, input, [tabindex]")].filter((e) => !(e.textContent.trim() ||
		e.getAttribute("aria-label") || e.labels?.length || e.hidden)).length`)
	if nameless > 0 {
		t.Errorf("%d controls have no name", nameless)
	}
	full := b.painted()
	b.do(chromedp.Evaluate(`document.querySelector("#layers input[value=tau]").click()`, nil))
	b.do(chromedp.Evaluate(`document.querySelector("#layers input[value=dark]").click()`, nil))
	b.settle()
	b.shot("dark")
	v := b.view()
	if v.Colour != "tau" || v.Theme != "dark" {
		t.Errorf("after two clicks the view is %+v", v)
	}
	b.do(chromedp.Evaluate(`document.querySelector("#layers input[value=lines]").click()`, nil))
	b.settle()
	time.Sleep(500 * time.Millisecond) // the streamlines are made beside the picture
	b.settle()
	b.shot("streamlines")
	b.do(chromedp.Click("#health-button"))
	b.until(`document.getElementById("health").innerText.includes("triangles")`)
	b.shot("health")
	if b.painted() < full/4 {
		t.Error("the stage is empty")
	}
	b.do(chromedp.Evaluate(`document.querySelector("#layers input[value=basins]")?.click()`, nil))
	if v := b.view(); v.Colour != "basins" {
		t.Errorf("after a click on basins the view is %+v", v)
	}
	b.settle()
	b.shot("basins")
	eval[any](b, `shearprint.call("view", {floor: 0.05, theme: "light", pattern: "texture", colour: "cp"})`)
	b.settle()
	b.shot("floor")
	f, err := format.Load(demo.Name, demo.Radome, format.Options{})
	if err != nil {
		t.Fatal(err)
	}
	sk, err := topology.Find(context.Background(), f, topology.Options{MinRobustness: 0.05})
	if err != nil {
		t.Fatal(err)
	}
	if rows := eval[int](b, `document.querySelectorAll("#book tbody tr").length`); rows != len(sk.Points) {
		t.Errorf("a floor of 0.05 Pa leaves %d points in the ledger, %d in the run", rows, len(sk.Points))
	}
}

// A page at which nobody does anything uses no processor time.
func TestStillPage(t *testing.T) {
	for _, present := range []string{"cpu", "gpu"} {
		b := visit(t, 1280, 720, "?present="+present)
		b.do(performance.Enable())
		b.until(ready)
		b.settle()
		time.Sleep(2 * time.Second)
		busy := func() (seconds float64) {
			b.do(chromedp.ActionFunc(func(ctx context.Context) error {
				list, err := performance.GetMetrics().Do(ctx)
				for _, m := range list {
					if m.Name == "TaskDuration" {
						seconds = m.Value
					}
				}
				return err
			}))
			return seconds
		}
		before := busy()
		all, known := b.processorTime()
		const sample = 10 * time.Second
		time.Sleep(sample)
		share := (busy() - before) / sample.Seconds()
		t.Logf("%s: %.2f %% of the main thread", present, 100*share)
		if share > 0.01 {
			t.Errorf("%s: a still page takes %.2f %% of the main thread", present, 100*share)
		}
		if known { // the worker's thread is among them
			now, _ := b.processorTime()
			share := (now - all) / sample.Seconds()
			t.Logf("%s: %.2f %% of a processor in all of the browser's processes", present, 100*share)
			if share > 0.02 { // one for the page, one for the browser and for talking to this test
				t.Errorf("%s: a still page takes %.2f %% of a processor", present, 100*share)
			}
		}
		if frames := eval[float64](b, `new Promise((r) => { let n = 0; new MutationObserver(() => n++).observe(document.body,
			{ subtree: true, childList: true, attributes: true }); setTimeout(() => r(n), 1000); })`); frames > 0 {
			t.Errorf("%s: the page changes by itself %g times a second", present, frames)
		}
	}
}
