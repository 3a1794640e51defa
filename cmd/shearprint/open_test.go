package main

import (
	"bytes"
	"context"
	"io"
	"net/http"
	"os"
	"strings"
	"testing"

	"shearprint/testdata/demo"
)

// serveFor starts the command and hands its address to the visit; when that returns, the command is interrupted as by
// Ctrl-C. It returns the exit status.
func serveFor(t *testing.T, visit func(address string), args ...string) int {
	t.Helper()
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	out, in := io.Pipe()
	var errOut bytes.Buffer
	status := make(chan int, 1)
	go func() {
		status <- run(ctx, append(args, "--no-browser"), in, &errOut)
		in.Close()
	}()
	line := make([]byte, 100)
	n, err := out.Read(line)
	if err != nil {
		t.Fatalf("no address: exit status %d: %s", <-status, errOut.String())
	}
	visit(strings.TrimSpace(string(line[:n])))
	cancel()
	return <-status
}

func get(t *testing.T, address string) (int, []byte) {
	t.Helper()
	answer, err := http.Get(address)
	if err != nil {
		t.Fatal(err)
	}
	defer answer.Body.Close()
	b, err := io.ReadAll(answer.Body)
	if err != nil {
		t.Fatal(err)
	}
	return answer.StatusCode, b
}

// The demo and runs are served as they are, on the loopback address only; the page comes with its programs; Ctrl-C ends
// it all with status 0.
func TestOpenServes(t *testing.T) {
	if testing.Short() {
		t.Skip("compiles the browser's programs")
	}
	status := serveFor(t, func(address string) {
		if !strings.HasPrefix(address, "http://127.0.0.1:") {
			t.Errorf("address %q", address)
		}
		if code, page := get(t, address); code != http.StatusOK || !bytes.Contains(page, []byte("<html")) {
			t.Errorf("the page: %d, %.100q", code, page)
		}
		if code, b := get(t, address+"runs/"+demo.Name); code != http.StatusOK || !bytes.Equal(b, demo.Radome) {
			t.Errorf("the demo: %d, %d bytes, want %d", code, len(b), len(demo.Radome))
		}
		for _, program := range []string{"worker.wasm", "view.wasm", "wasm_exec.js"} {
			if code, b := get(t, address+program); code != http.StatusOK || len(b) == 0 {
				t.Errorf("%s: %d, %d bytes", program, code, len(b))
			}
		}
		if code, _ := get(t, address+"runs/other.ply"); code != http.StatusNotFound {
			t.Errorf("a run that is not there: %d", code)
		}
	}, "open")
	if status != done {
		t.Errorf("exit status %d, want %d", status, done)
	}
}

// A run that needs options to be read is served as the options make it.
func TestOpenAppliesOptions(t *testing.T) {
	if testing.Short() {
		t.Skip("compiles the browser's programs")
	}
	saddle := saddleRun(t)
	plain, err := os.ReadFile(saddle)
	if err != nil {
		t.Fatal(err)
	}
	serveFor(t, func(address string) {
		if _, b := get(t, address+"runs/saddle.ply"); !bytes.Equal(b, plain) {
			t.Error("without options the file is not served as it is")
		}
		if code, b := get(t, address+"runs/saddle-2.ply"); code != http.StatusOK || !bytes.Equal(b, plain) {
			t.Error("a second run of the same name is not served under another")
		}
	}, "open", saddle, saddle)
	serveFor(t, func(address string) {
		_, b := get(t, address+"runs/saddle.ply")
		r, _ := read(t, textFile(t, "served.ply", string(b)))
		if word(r.Run.LengthUnit) != "m" || r.Surface.Area > 1e-4 {
			t.Errorf("served with --unit mm: length unit %s, area %g", word(r.Run.LengthUnit), r.Surface.Area)
		}
	}, "open", saddle, "--unit", "mm")
}
