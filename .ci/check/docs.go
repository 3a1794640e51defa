package main

import (
	"errors"
	"fmt"
	"go/ast"
	"go/parser"
	"go/token"
	"path"
	"strings"
)

// checkDocs asks for a comment at every package and every exported function, method, type, constant and variable.
func checkDocs() error {
	files, err := sources("*.go")
	if err != nil {
		return err
	}
	fset := token.NewFileSet()
	described := map[string]bool{} // folders whose package has a comment
	seen := map[string]bool{}
	var order []string
	var errs []error
	for _, name := range files {
		if strings.HasSuffix(name, "_test.go") || strings.Contains(name, "testdata/") {
			continue
		}
		file, err := parser.ParseFile(fset, name, nil, parser.ParseComments|parser.SkipObjectResolution)
		if err != nil {
			return err
		}
		dir := path.Dir(name)
		if !seen[dir] {
			seen[dir] = true
			order = append(order, dir)
		}
		described[dir] = described[dir] || file.Doc != nil
		for _, decl := range file.Decls {
			errs = append(errs, undocumented(fset, decl)...)
		}
	}
	for _, dir := range order {
		if !described[dir] {
			errs = append(errs, fmt.Errorf("%s: the package has no comment", dir))
		}
	}
	return errors.Join(errs...)
}

func undocumented(fset *token.FileSet, decl ast.Decl) []error {
	var errs []error
	missing := func(id *ast.Ident) {
		if id.IsExported() {
			errs = append(errs, fmt.Errorf("%s: %s has no comment", fset.Position(id.Pos()), id.Name))
		}
	}
	switch d := decl.(type) {
	case *ast.FuncDecl:
		if d.Doc == nil && exportedReceiver(d) {
			missing(d.Name)
		}
	case *ast.GenDecl:
		for _, spec := range d.Specs {
			switch s := spec.(type) {
			case *ast.TypeSpec:
				if d.Doc == nil && s.Doc == nil {
					missing(s.Name)
				}
			case *ast.ValueSpec:
				if d.Doc == nil && s.Doc == nil && s.Comment == nil {
					for _, id := range s.Names {
						missing(id)
					}
				}
			}
		}
	}
	return errs
}

// exportedReceiver tells whether a function is no method, or a method of an exported type.
func exportedReceiver(d *ast.FuncDecl) bool {
	if d.Recv == nil {
		return true
	}
	t := d.Recv.List[0].Type
	for {
		switch x := t.(type) {
		case *ast.StarExpr:
			t = x.X
		case *ast.IndexExpr:
			t = x.X
		case *ast.Ident:
			return x.IsExported()
		default:
			return true
		}
	}
}
