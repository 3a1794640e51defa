package main

import (
	"bufio"
	"fmt"
	"io"
	"os"
	"path/filepath"

	"shearprint/field/study"
)

// json writes a result as JSON to the result stream.
func (a *app) json(result any) error {
	b, err := study.Encode(result)
	if err != nil {
		return err
	}
	return a.print(func(w io.Writer) error {
		_, err := w.Write(b)
		return err
	})
}

// print writes a result to the result stream.
func (a *app) print(write func(w io.Writer) error) error {
	w := bufio.NewWriter(a.out)
	err := write(w)
	if err == nil {
		err = w.Flush()
	}
	if err != nil {
		return fmt.Errorf("standard output: %w", err)
	}
	return nil
}

// checkOutput refuses a path that cannot or must not be written, before the work begins.
func checkOutput(path string, force bool) error {
	if path == "" {
		return usagef("there is no file to write; give -o FILE")
	}
	info, err := os.Stat(path)
	switch {
	case err == nil && info.IsDir():
		return usagef("-o %s: that is a folder; name a file in it", path)
	case err == nil && info.Size() > 0 && !force:
		return usagef("-o %s: the file exists and is kept; give another name, or --force to write over it", path)
	}
	if _, err := os.Stat(filepath.Dir(path)); err != nil {
		return usagef("-o %s: there is no folder %s; make it first", path, filepath.Dir(path))
	}
	return nil
}

// writeFile writes the file whole or not at all: it is written beside its place and moved there when complete.
func writeFile(path string, write func(w io.Writer) error) error {
	temp, err := os.CreateTemp(filepath.Dir(path), ".shearprint-*")
	if err != nil {
		return fileError(path, err)
	}
	defer os.Remove(temp.Name()) // fails, rightly, once the file has moved
	w := bufio.NewWriter(temp)
	err = write(w)
	if err == nil {
		err = w.Flush()
	}
	if e := temp.Close(); err == nil {
		err = e
	}
	if err == nil {
		err = os.Chmod(temp.Name(), 0o644)
	}
	if err == nil {
		err = os.Rename(temp.Name(), path)
	}
	if err != nil {
		return fmt.Errorf("%s: cannot be written: %w", path, err)
	}
	return nil
}
