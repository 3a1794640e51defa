package web_test

import (
	"bytes"
	"context"
	"encoding/base64"
	"fmt"
	"image/png"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/chromedp/cdproto/input"
	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"

	"shearprint/field/exact"
	"shearprint/field/format"
	"shearprint/field/study"
	"shearprint/testdata/demo"
	"shearprint/web"
)

type view struct {
	Run    string      `json:"run"`
	Eye    [3]float64  `json:"eye"`
	Target [3]float64  `json:"target"`
	Colour string      `json:"colour"`
	Theme  string      `json:"theme"`
	Floor  float64     `json:"floor"`
	At     *[3]float64 `json:"at"`
	Link   string      `json:"link"`
}

func (v view) distance() float64 {
	return math.Hypot(math.Hypot(v.Eye[0]-v.Target[0], v.Eye[1]-v.Target[1]), v.Eye[2]-v.Target[2])
}

func (b *tab) view() view { return eval[view](b, `shearprint.call("view")`) }

// drag moves the mouse with the left button down.
func (b *tab) drag(x0, y0, x1, y1 float64, steps int) {
	b.Helper()
	b.do(chromedp.ActionFunc(func(ctx context.Context) error {
		send := func(kind input.MouseType, x, y float64, held int64) error {
			return input.DispatchMouseEvent(kind, x, y).WithButton(input.Left).WithButtons(held).WithClickCount(1).Do(ctx)
		}
		if err := send(input.MousePressed, x0, y0, 1); err != nil {
			return err
		}
		for i := 1; i <= steps; i++ {
			s := float64(i) / float64(steps)
			if err := send(input.MouseMoved, x0+s*(x1-x0), y0+s*(y1-y0), 1); err != nil {
				return err
			}
		}
		return send(input.MouseReleased, x1, y1, 0)
	}))
}

// The page starts with a picture, a balanced ledger, its timings, and no alert.
func TestStart(t *testing.T) {
	b := visit(t, 1280, 720, "?present=cpu")
	b.until(ready)
	b.settle()
	b.shot("start")
	if text := b.alert(); text != "" {
		t.Errorf("the page starts with an alert: %s", text)
	}
	rows := eval[int](b, `document.querySelectorAll("#book tbody tr").length`)
	if verdict := eval[string](b, `document.getElementById("verdict").textContent`); rows < 4 || !strings.Contains(verdict, "balances") {
		t.Errorf("the ledger has %d rows and says %q", rows, verdict)
	}
	timings := eval[map[string]*float64](b, `shearprint.call("timings")`)
	for _, name := range []string{"download", "start", "load", "topology", "first_picture", "frame_moving", "frame_still"} {
		if ms := timings[name]; ms == nil || !(*ms > 0) {
			t.Errorf("timings lack %s", name)
			continue
		}
		t.Logf("%s: %.0f ms", name, *timings[name])
	}
	if b.painted() < 2000 {
		t.Errorf("the stage shows one colour")
	}
}

// painted returns the number of pixels of the plain canvas that differ from its corner, on a coarse grid.
func (b *tab) painted() int {
	b.Helper()
	return eval[int](b, `(() => {
		const c = document.getElementById("picture"), d = c.getContext("2d").getImageData(0, 0, c.width, c.height).data;
		let n = 0;
		for (let i = 0; i < d.length; i += 16) if (Math.abs(d[i] - d[0]) + Math.abs(d[i + 1] - d[1]) > 12) n++;
		return n;
	})()`)
}

// A click on a saddle on the stage opens its card; the link then holds the place, and opens the same view.
func TestClickOnSaddle(t *testing.T) {
	b := visit(t, 1280, 720, "?present=cpu")
	b.until(ready)
	b.do(chromedp.Evaluate(`document.querySelector("#book tr[data-id=S1]").click()`, nil))
	b.until(`!document.getElementById("card").hidden`)
	b.settle()
	b.do(chromedp.Evaluate(`document.querySelector("#card button[aria-label='Close the card']").click()`, nil))
	b.settle()
	// The row has flown the camera there: the saddle is in the middle of what the ledger leaves free.
	at := eval[[2]float64](b, `(() => {
		const l = document.getElementById("ledger").getBoundingClientRect(), h = document.getElementById("head").getBoundingClientRect();
		const k = document.getElementById("key").getBoundingClientRect();
		return [(l.right + innerWidth) / 2, (h.bottom + k.top) / 2];
	})()`)
	b.drag(at[0], at[1], at[0], at[1], 0)
	b.until(`document.querySelector("#card h2")?.textContent.startsWith("S1: saddle")`)
	b.settle()
	b.shot("saddle")
	card := eval[string](b, `document.getElementById("card").innerText`)
	for _, word := range []string{"Position", "tau", "Pressure p", "cp", "Jacobian", "Eigenvalues", "Trace", "Determinant",
		"Type", "Sense", "Confidence", "Pa/m", "eigenvectors"} {
		if !strings.Contains(card, word) {
			t.Errorf("the card lacks %s", word)
		}
	}
	v := b.view()
	if v.At == nil || !strings.Contains(v.Link, "at=") {
		t.Fatalf("the view does not hold the place: %+v", v)
	}
	other := visit(t, 1280, 720, "?present=cpu"+v.Link)
	other.until(ready)
	other.until(`document.querySelector("#card h2")?.textContent.startsWith("S1: saddle")`)
	if w := other.view(); w.Link != v.Link {
		t.Errorf("the link\n%s\nopens\n%s", v.Link, w.Link)
	}
}

// A drag turns the run, the wheel comes closer to what is under the pointer, keys do both.
func TestHand(t *testing.T) {
	b := visit(t, 1280, 720, "?present=cpu")
	b.until(ready)
	b.settle()
	start := b.view()
	b.drag(700, 300, 900, 380, 60)
	b.settle()
	b.shot("orbit")
	turned := b.view()
	if turned.Eye == start.Eye || math.Abs(turned.distance()/start.distance()-1) > 1e-6 {
		t.Errorf("a drag moved the eye from %v to %v", start.Eye, turned.Eye)
	}
	t.Logf("timings after 60 moves: %v", eval[map[string]float64](b, `shearprint.call("timings")`))
	b.do(chromedp.ActionFunc(func(ctx context.Context) error {
		return input.DispatchMouseEvent(input.MouseWheel, 700, 300).WithDeltaX(0).WithDeltaY(-240).Do(ctx)
	}))
	b.settle()
	closer := b.view()
	if !(closer.distance() < 0.9*turned.distance()) {
		t.Errorf("the wheel left the distance at %g after %g", closer.distance(), turned.distance())
	}
	b.do(chromedp.Focus("#stage"), chromedp.KeyEvent("+"))
	b.settle()
	keyed := b.view()
	if !(keyed.distance() < closer.distance()) {
		t.Error("the plus key comes no closer")
	}
	b.do(chromedp.KeyEvent(kb.ArrowRight))
	b.settle()
	if arrow := b.view(); arrow.Eye == keyed.Eye {
		t.Error("an arrow key does not turn the run")
	}
	b.do(chromedp.KeyEvent(kb.Home))
	b.settle()
	if home := b.view(); math.Abs(home.distance()/start.distance()-1) > 1e-6 {
		t.Error("Home does not show the whole run")
	}
	b.do(chromedp.KeyEvent(kb.Enter))
	b.until(`!document.getElementById("card").hidden`)
	if alert := b.alert(); alert != "" {
		t.Errorf("keys raise an alert: %s", alert)
	}
}

// The page's answers are the bytes of the command line.
func TestCallsAreTheCommands(t *testing.T) {
	f, err := format.Load(demo.Name, demo.Radome, format.Options{})
	if err != nil {
		t.Fatal(err)
	}
	s := study.New(f)
	b := visit(t, 800, 600, "?present=cpu")
	b.until(ready)
	for _, c := range []struct{ name, args string }{
		{"inspect", `{}`}, {"topology", `{}`}, {"topology", `{"min_robustness": "1%"}`},
		{"probe", `{"at": [-0.5, 0, 0.4]}`}, {"trace", `{"at": [-0.5, 0.1, 0.4]}`},
		{"loop", `{"box": [[-1, -1, 0.05], [1, 1, 1]]}`},
		{"loop", `{"through": [[0, -1, 0], [1, 0, 0], [0, 1, 0], [-1, 0, 0]]}`},
		{"ledger", `{"body": "isolated", "nodes": 2, "saddles": 0}`},
	} {
		want, err := s.Call(context.Background(), c.name, []byte(c.args))
		if err != nil {
			t.Fatal(err)
		}
		got := eval[string](b, `shearprint.call("`+c.name+`", {...`+c.args+`, text: true})`)
		if got != string(want) {
			t.Errorf("%s %s: the page answers\n%.300s\nthe command line\n%.300s", c.name, c.args, got, want)
		}
		if object := eval[map[string]any](b, `shearprint.call("`+c.name+`", `+c.args+`)`); object["schema"] == nil {
			t.Errorf("%s: the answer is no object with a schema", c.name)
		}
	}
	for call, word := range map[string]string{
		`"probe", {at: [900, 0, 0]}`: "off the surface", `"nonsense"`: "nonsense", `"view", {colour: "blue"}`: "blue",
		`"view", {link: "#eye=1"}`: "eye", `"picture", {width: 0}`: "pixels",
	} {
		if text := eval[string](b, `shearprint.call(`+call+`).then(() => "", (e) => e.message)`); !strings.Contains(text, word) {
			t.Errorf("call(%s) fails with %q, which lacks %q", call, text, word)
		}
	}
}

// A bad file is told and leaves the run that is open; a good one replaces it.
func TestDrop(t *testing.T) {
	b := visit(t, 1000, 700, "?present=cpu")
	b.until(ready)
	b.drop("notes.ply", []byte("ply\nformat ascii 1.0\nelement vertex three\n"))
	b.until(`document.documentElement.dataset.state === "error"`)
	if text := b.alert(); !strings.Contains(text, "otes.ply") {
		t.Errorf("the alert says %q", text)
	}
	b.shot("bad-file")
	if v := b.view(); v.Run != demo.Name {
		t.Errorf("after a bad file the run is %q", v.Run)
	}
	if rows := eval[int](b, `document.querySelectorAll("#book tbody tr").length`); rows < 4 {
		t.Errorf("after a bad file the ledger has %d rows", rows)
	}
	b.drop("ball.ply", ball(t))
	b.until(ready + ` && !document.getElementById("run").textContent.startsWith("radome")`)
	b.settle()
	b.shot("ball")
	if text := b.alert(); text != "" {
		t.Errorf("after a good file the alert still says %q", text)
	}
	if v := b.view(); v.Run != "ball.ply" {
		t.Errorf("after a good file the run is %q", v.Run)
	}
}

// The computed runs open, and their books balance.
func TestComputedRuns(t *testing.T) {
	files, err := filepath.Glob(filepath.Join("..", "testdata", "runs", "*.ply"))
	if err != nil || len(files) < 3 {
		t.Fatalf("%d runs, %v", len(files), err)
	}
	b := visit(t, 1280, 720, "?present=cpu")
	b.until(ready)
	for _, file := range files {
		data, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		name := filepath.Base(file)
		b.drop(name, data)
		b.until(ready + ` && location.hash.includes("run=` + name + `")`)
		b.settle()
		b.shot("run-" + strings.TrimSuffix(name, ".ply"))
		if verdict := eval[string](b, `document.getElementById("verdict").textContent`); !strings.Contains(verdict, "book balances") {
			t.Errorf("%s: the ledger says %q", name, verdict)
		}
	}
}

// Both presenters show the same picture.
func TestPresentersAgree(t *testing.T) {
	cpu, gpu := visit(t, 900, 600, "?present=cpu"), visit(t, 900, 600, "?present=gpu")
	cpu.until(ready)
	cpu.settle()
	gpu.until(ready)
	gpu.settle()
	if name := eval[string](gpu, "document.documentElement.dataset.present"); name != "gpu" {
		t.Fatalf("the GPU's presenter does not start: %q presents", name)
	}
	hide := `(() => { for (const e of document.querySelectorAll("header, aside, section, footer")) e.style.visibility = "hidden"; })()`
	cpu.do(chromedp.Evaluate(hide, nil))
	gpu.do(chromedp.Evaluate(hide, nil))
	gpu.shot("gpu")
	a, b := cpu.capture(), gpu.capture()
	worst, n := 0, 0
	for i := range a {
		d := int(a[i]) - int(b[i])
		if d = max(d, -d); d > 2 {
			n++
		}
		worst = max(worst, d)
	}
	if len(a) != len(b) || n > 0 {
		t.Errorf("%d of %d values differ by more than 2, the worst by %d", n, len(a), worst)
	}
	t.Logf("the largest difference is %d of 255", worst)
}

// The texture moves along the flow when asked to, through both presenters, and then rests again.
func TestMotion(t *testing.T) {
	for _, present := range []string{"cpu", "gpu"} {
		b := visit(t, 700, 500, "?present="+present)
		b.until(ready)
		eval[any](b, `shearprint.call("view", {motion: true})`)
		b.settle()
		moves := false
		first := b.capture()
		for range 50 {
			if moves = !bytes.Equal(first, b.capture()); moves {
				break
			}
		}
		if !moves {
			t.Errorf("%s: the texture stands", present)
		}
		b.shot("motion-" + present)
		eval[any](b, `shearprint.call("view", {motion: false})`)
		b.settle()
		if !bytes.Equal(b.capture(), b.capture()) {
			t.Errorf("%s: the texture does not rest", present)
		}
	}
}

// capture returns the tab's pixels.
func (b *tab) capture() []byte {
	b.Helper()
	var data []byte
	b.do(chromedp.CaptureScreenshot(&data))
	return pixels(b.TB, data)
}

// The picture call gives a PNG of the wanted size.
func TestPicture(t *testing.T) {
	b := visit(t, 800, 600, "?present=cpu")
	b.until(ready)
	address := eval[string](b, `shearprint.call("picture", {width: 640, height: 360})`)
	data, err := base64.StdEncoding.DecodeString(strings.TrimPrefix(address, "data:image/png;base64,"))
	if err != nil {
		t.Fatal(err)
	}
	if dir := os.Getenv("SHEARPRINT_SHOTS"); dir != "" {
		if err := os.WriteFile(filepath.Join(dir, "picture.png"), data, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	img, err := png.Decode(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	if size := img.Bounds().Size(); size.X != 640 || size.Y != 360 {
		t.Errorf("the picture has %v pixels", size)
	}
}

// A server that names the wrong media type for the programs does no harm.
func TestWrongMediaType(t *testing.T) {
	b := visit(t, 400, 300, "?present=cpu&media=wrong")
	b.until(ready)
}

// Cancel ends the reading of the pattern; the run stays, and its pattern can be read later.
func TestCancel(t *testing.T) {
	data := ply(t, exact.Cases()[0].Raw(300_000))
	b := visit(t, 800, 600, "?present=cpu", web.Run{Name: "ball.ply", Data: func() ([]byte, error) { return data, nil }})
	eval[any](b, `new Promise((done) => { const look = setInterval(() => {
		if (!document.getElementById("stage-name").textContent.startsWith("Finding")) return;
		clearInterval(look);
		document.getElementById("cancel").click();
		done();
	}, 1); })`)
	b.until(ready)
	if rows := eval[int](b, `document.querySelectorAll("#book tbody tr").length`); rows != 0 {
		t.Fatalf("after cancelling the ledger has %d rows", rows)
	}
	b.settle()
	b.do(chromedp.Click("#book button"))
	b.until(ready + ` && document.querySelectorAll("#book tbody tr").length > 0`)
}

// The noise floor takes weak points out of the book while it moves, in balanced groups.
func TestFloor(t *testing.T) {
	b := visit(t, 1280, 720, "?present=cpu")
	b.until(ready)
	count := `document.querySelectorAll("#book tbody tr").length`
	all := eval[int](b, count)
	last := all
	for value := 0; value <= 1000; value += 100 {
		left := eval[int](b, fmt.Sprintf(`(() => { const r = document.getElementById("floor-range"); r.value = %d;
			r.dispatchEvent(new Event("input")); return `+count+`; })()`, value))
		sum := eval[string](b, `document.querySelector("#book tfoot tr:nth-child(2) td").textContent`)
		if left > last || sum != "0" {
			t.Errorf("at %d of 1000 the book has %d points after %d, and the sum %s", value, left, last, sum)
		}
		last = left
	}
	if last >= all {
		t.Errorf("the highest floor leaves all %d points", last)
	}
	eval[any](b, `(() => { const r = document.getElementById("floor-range"); r.value = 500; r.dispatchEvent(new Event("input"));
		r.dispatchEvent(new Event("change")); })()`)
	b.until(ready)
	b.settle()
	live := eval[int](b, count)
	read := eval[map[string]any](b, `shearprint.call("topology", {min_robustness: (await shearprint.call("view")).floor, lines: false})`)
	if points := read["points"].([]any); len(points) != live {
		t.Errorf("the book has %d points, the command %d", live, len(points))
	}
}
