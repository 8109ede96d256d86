package calc_test

import (
	"go/ast"
	"go/parser"
	"go/token"
	"os"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// sources parses the package's own files, tests apart.
func sources(t *testing.T) []*ast.File {
	t.Helper()
	entries, err := os.ReadDir(".")
	if err != nil {
		t.Fatal(err)
	}
	var files []*ast.File
	for _, entry := range entries {
		name := entry.Name()
		if !strings.HasSuffix(name, ".go") || strings.HasSuffix(name, "_test.go") {
			continue
		}
		file, err := parser.ParseFile(token.NewFileSet(), name, nil, parser.ParseComments)
		if err != nil {
			t.Fatal(err)
		}
		files = append(files, file)
	}
	return files
}

// The package comment says: standard library only, no clock, no files, no logs.
func TestImports(t *testing.T) {
	allowed := []string{"errors", "fmt", "iter", "math"}
	for _, file := range sources(t) {
		for _, spec := range file.Imports {
			path, err := strconv.Unquote(spec.Path.Value)
			if err != nil || !slices.Contains(allowed, path) {
				t.Errorf("imports %s; arithmetic needs no more than %v", spec.Path.Value, allowed)
			}
		}
	}
}

// Every exported function and method has a doc comment and a runnable example.
func TestEveryFunctionHasAnExample(t *testing.T) {
	examples, err := parser.ParseFile(token.NewFileSet(), "example_test.go", nil, 0)
	if err != nil {
		t.Fatal(err)
	}
	shown := make(map[string]bool)
	for _, decl := range examples.Decls {
		if f, ok := decl.(*ast.FuncDecl); ok {
			shown[f.Name.Name] = true
		}
	}
	for _, file := range sources(t) {
		for _, decl := range file.Decls {
			f, ok := decl.(*ast.FuncDecl)
			if !ok || !f.Name.IsExported() {
				continue
			}
			want := "Example"
			if f.Recv != nil {
				want += f.Recv.List[0].Type.(*ast.Ident).Name + "_"
			}
			want += f.Name.Name
			if !shown[want] {
				t.Errorf("no %s", want)
			}
			if f.Doc.Text() == "" {
				t.Errorf("%s has no doc comment", f.Name.Name)
			}
		}
	}
}
