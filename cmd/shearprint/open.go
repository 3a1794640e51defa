package main

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"net"
	"net/http"
	"os/exec"
	"path/filepath"
	"regexp"
	"runtime"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"shearprint/field/format"
	"shearprint/testdata/demo"
	"shearprint/web"
)

func (a *app) open() *cobra.Command {
	var r runFlags
	var noBrowser bool
	var port int
	cmd := &cobra.Command{
		Use:   "open [RUN...]",
		Short: "Show runs in the browser; without a RUN, the built-in demo",
		Long: `Open serves the page and the runs on 127.0.0.1, prints the address and opens the browser. Nothing leaves this
machine. Ctrl-C ends it.`,
		Example: `  shearprint open wing.ply
  shearprint open before.cgns after.cgns --port 8080 --no-browser`,
		RunE: func(cmd *cobra.Command, args []string) error {
			if port < 0 || port > 65535 {
				return usagef("--port %d: a port is a number from 0, for any, to 65535", port)
			}
			runs, err := a.pageRuns(args, &r)
			if err != nil {
				return err
			}
			listener, err := net.Listen("tcp", fmt.Sprintf("127.0.0.1:%d", port))
			if err != nil {
				return fmt.Errorf("--port %d: %w; give another port", port, err)
			}
			defer listener.Close()
			dir, err := web.Build(cmd.Context(), func(what string) {
				if !r.quiet {
					a.say("%s", what)
				}
			})
			if err != nil {
				return err
			}
			a.flushFindings()
			address := "http://" + listener.Addr().String() + "/"
			if _, err := fmt.Fprintln(a.out, address); err != nil {
				return fmt.Errorf("standard output: %w", err)
			}
			if !noBrowser {
				a.openBrowser(cmd.Context(), address)
			}
			return serve(cmd.Context(), listener, web.Handler(dir, runs))
		},
	}
	cmd.Flags().BoolVar(&noBrowser, "no-browser", false, "print the address only")
	cmd.Flags().IntVar(&port, "port", 0, "`PORT` on 127.0.0.1; 0 takes a free one")
	r.add(cmd)
	return cmd
}

// serve answers until the context is done.
func serve(ctx context.Context, listener net.Listener, handler http.Handler) error {
	const patience = 10 * time.Second // for a client that sends no header, and for answers on their way at the end
	server := &http.Server{Handler: handler, ReadHeaderTimeout: patience}
	stopped := make(chan error, 1)
	go func() {
		<-ctx.Done()
		end, cancel := context.WithTimeout(context.Background(), patience)
		defer cancel()
		stopped <- server.Shutdown(end)
	}()
	if err := server.Serve(listener); !errors.Is(err, http.ErrServerClosed) {
		return err
	}
	return <-stopped
}

// openers are the programs that open an address in the user's browser.
var openers = map[string][]string{
	"linux":   {"xdg-open"},
	"darwin":  {"open"},
	"windows": {"rundll32", "url.dll,FileProtocolHandler"},
}

func (a *app) openBrowser(ctx context.Context, address string) {
	words, ok := openers[runtime.GOOS]
	if ok {
		err := exec.CommandContext(ctx, words[0], append(words[1:], address)...).Start()
		ok = err == nil
	}
	if !ok {
		a.say("no browser could be opened; give it the address above")
	}
}

// pageRuns reads every run once, so that one that cannot be read is told here, and returns what the page loads.
func (a *app) pageRuns(paths []string, r *runFlags) ([]web.Run, error) {
	if len(paths) == 0 {
		return []web.Run{{Name: demo.Name, Data: func() ([]byte, error) { return demo.Radome, nil }}}, nil
	}
	var runs []web.Run
	used := map[string]bool{}
	for _, path := range paths {
		if _, err := a.load(path, r, true); err != nil {
			return nil, err
		}
		name := pageName(path, used)
		runs = append(runs, web.Run{Name: name, Data: func() ([]byte, error) { return r.pageData(path) }})
	}
	return runs, nil
}

// pageData returns the file as it is now, for the page to read by itself; where reading takes options, or further files,
// that the page does not have, the run as PLY.
func (r *runFlags) pageData(path string) ([]byte, error) {
	data, opt, err := r.read(path)
	if err != nil {
		return nil, err
	}
	document := bytes.HasPrefix(bytes.TrimSpace(data), []byte("{")) // glTF, whose buffers lie beside it
	plain := runFlags{quiet: r.quiet}
	if *r == plain && !document {
		return data, nil
	}
	raw, err := format.Prepare(path, data, opt)
	if err != nil {
		return nil, err
	}
	var b bytes.Buffer
	err = format.WriteRawPLY(&b, raw)
	return b.Bytes(), err
}

var unsafe = regexp.MustCompile(`[^A-Za-z0-9_.-]+`)

// pageName returns the file's name as an address can have it, unlike those used before.
func pageName(path string, used map[string]bool) string {
	name := strings.Trim(unsafe.ReplaceAllString(filepath.Base(path), "-"), ".-")
	if name == "" {
		name = "run"
	}
	ending := filepath.Ext(name)
	stem := strings.TrimSuffix(name, ending)
	for n := 2; used[name]; n++ {
		name = fmt.Sprintf("%s-%d%s", stem, n, ending)
	}
	used[name] = true
	return name
}
