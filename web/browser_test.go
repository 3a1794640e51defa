package web_test

import (
	"context"
	"encoding/base64"
	"encoding/json"
	"net/http"
	"net/http/httptest"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/page"
	"github.com/chromedp/cdproto/runtime"
	"github.com/chromedp/chromedp"

	"shearprint/testdata/demo"
	"shearprint/web"
)

// patience is how long a test waits for the page: the programs compile within it on a slow machine.
const patience = 4 * time.Minute

var programs = sync.OnceValues(func() (string, error) {
	return web.Build(context.Background(), func(string) {})
})

// tab is a page of Shearprint in Chromium.
type tab struct {
	testing.TB
	ctx     context.Context
	address string
}

// chromium returns the browser's path. Where there is none the test is skipped, but not on a CI machine.
func chromium(t testing.TB) string {
	t.Helper()
	if testing.Short() {
		t.Skip("a browser takes too long for -short")
	}
	for _, name := range []string{"chromium", "chromium-browser", "google-chrome", "chrome"} {
		if path, err := exec.LookPath(name); err == nil {
			return path
		}
	}
	if os.Getenv("CI") != "" {
		t.Fatal("there is no Chromium on the PATH; CI must have one")
	}
	t.Skip("there is no Chromium on the PATH")
	return ""
}

// visit opens the page of a server with the given runs, or the demo, in a window of w x h. query is what follows the
// address, as "?present=cpu".
func visit(t testing.TB, w, h int, query string, runs ...web.Run) *tab {
	t.Helper()
	path := chromium(t)
	dir, err := programs()
	if err != nil {
		t.Fatal(err)
	}
	if len(runs) == 0 {
		runs = []web.Run{{Name: demo.Name, Data: func() ([]byte, error) { return demo.Radome, nil }}}
	}
	handler := web.Handler(dir, runs)
	if strings.Contains(query, "media=wrong") {
		handler = wrongMedia(handler)
	}
	server := httptest.NewServer(handler)
	t.Cleanup(server.Close)
	options := append(chromedp.DefaultExecAllocatorOptions[:],
		chromedp.ExecPath(path), chromedp.WindowSize(w, h), chromedp.Flag("disable-quic", true),
		chromedp.Flag("disable-component-update", true), chromedp.Flag("no-proxy-server", true),
		chromedp.Flag("enable-unsafe-swiftshader", true))
	if os.Geteuid() == 0 {
		options = append(options, chromedp.NoSandbox)
	}
	ctx, cancel := chromedp.NewExecAllocator(context.Background(), options...)
	t.Cleanup(cancel)
	ctx, cancel = chromedp.NewContext(ctx)
	t.Cleanup(cancel)
	ctx, cancel = context.WithTimeout(ctx, patience)
	t.Cleanup(cancel)
	b := &tab{TB: t, ctx: ctx, address: server.URL + "/" + query}
	chromedp.ListenTarget(ctx, func(event any) {
		switch e := event.(type) {
		case *runtime.EventExceptionThrown:
			t.Logf("the page: %s", e.ExceptionDetails.Error())
		case *runtime.EventConsoleAPICalled:
			for _, a := range e.Args {
				t.Logf("console: %s", a.Value)
			}
		}
	})
	b.do(emulation.SetDeviceMetricsOverride(int64(w), int64(h), 1, w < 500), chromedp.Navigate(b.address))
	return b
}

func (b *tab) do(actions ...chromedp.Action) {
	b.Helper()
	if err := chromedp.Run(b.ctx, actions...); err != nil {
		b.Fatal(err)
	}
}

// eval returns the value of an expression, awaited, decoded into T.
func eval[T any](b *tab, expression string) T {
	b.Helper()
	var text string
	err := chromedp.Run(b.ctx, chromedp.Evaluate("(async () => JSON.stringify((await ("+expression+")) ?? null))()", &text,
		func(p *runtime.EvaluateParams) *runtime.EvaluateParams { return p.WithAwaitPromise(true) }))
	if err != nil {
		b.Fatalf("%s: %v", expression, err)
	}
	var v T
	if err := json.Unmarshal([]byte(text), &v); err != nil {
		b.Fatalf("%s: %v in %s", expression, err, text)
	}
	return v
}

// until waits until the expression is true.
func (b *tab) until(expression string) {
	b.Helper()
	ctx, cancel := context.WithTimeout(b.ctx, time.Minute)
	defer cancel()
	for {
		var ok bool
		if err := chromedp.Run(ctx, chromedp.Evaluate("Boolean("+expression+")", &ok)); err != nil {
			var seen string
			chromedp.Run(b.ctx, chromedp.Evaluate(
				`document.documentElement.dataset.state + ": " + document.querySelector("[role=alert]").textContent`, &seen))
			b.shot("failed")
			b.Fatalf("%s never came: %v (the page is in state %s)", expression, err, seen)
		}
		if ok {
			return
		}
		time.Sleep(20 * time.Millisecond)
	}
}

const (
	ready = `document.documentElement.dataset.state === "ready"`
)

// shot saves a picture of the tab in the folder that SHEARPRINT_SHOTS names, for people to look at.
func (b *tab) shot(name string) {
	b.Helper()
	dir := os.Getenv("SHEARPRINT_SHOTS")
	if dir == "" {
		return
	}
	var png []byte
	b.do(chromedp.ActionFunc(func(ctx context.Context) (err error) {
		png, err = page.CaptureScreenshot().Do(ctx)
		return err
	}))
	if err := os.WriteFile(filepath.Join(dir, name+".png"), png, 0o644); err != nil {
		b.Fatal(err)
	}
}

// drop drops a file on the stage.
func (b *tab) drop(name string, data []byte) {
	b.Helper()
	quoted, err := json.Marshal(name)
	if err != nil {
		b.Fatal(err)
	}
	eval[any](b, `(() => {
		const bytes = Uint8Array.from(atob("`+base64.StdEncoding.EncodeToString(data)+`"), (c) => c.charCodeAt(0));
		const carried = new DataTransfer();
		carried.items.add(new File([bytes], `+string(quoted)+`));
		document.getElementById("stage").dispatchEvent(new DragEvent("drop", { dataTransfer: carried, bubbles: true, cancelable: true }));
	})()`)
}

// alert returns the text of the alert.
func (b *tab) alert() string {
	return strings.TrimSpace(eval[string](b, `document.querySelector("[role=alert]").textContent`))
}

// settle waits until the finished picture is shown.
func (b *tab) settle() {
	b.Helper()
	eval[any](b, "shearprint.settled()")
}

// wrongMedia serves everything that the page's worker fetches as plain text.
func wrongMedia(h http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		h.ServeHTTP(textWriter{w, strings.HasSuffix(r.URL.Path, ".wasm")}, r)
	})
}

type textWriter struct {
	http.ResponseWriter
	plain bool
}

func (w textWriter) WriteHeader(status int) {
	if w.plain {
		w.Header().Set("Content-Type", "text/plain")
	}
	w.ResponseWriter.WriteHeader(status)
}
