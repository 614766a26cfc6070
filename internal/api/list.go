// Package api prints the exported API of the library as text, one name a line, so that a
// change of it is seen in review. It reads source only; the listing is api.txt beside it.
package api

import (
	"bytes"
	"fmt"
	"go/ast"
	"go/parser"
	"go/printer"
	"go/token"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
)

// Packages are the public packages, by folder below the module root.
var Packages = []string{"poly", "tf", "locus", "timeresp", "spec"}

// List returns the exported names of the [Packages] of the module in folder root, sorted.
func List(root string) ([]string, error) {
	var lines []string
	for _, name := range Packages {
		got, err := listPackage(filepath.Join(root, name), name)
		if err != nil {
			return nil, err
		}
		lines = append(lines, got...)
	}
	slices.Sort(lines)
	return lines, nil
}

func listPackage(folder, name string) ([]string, error) {
	entries, err := os.ReadDir(folder)
	if err != nil {
		return nil, err
	}
	l := lister{pkg: name, files: token.NewFileSet()}
	for _, entry := range entries {
		if !isSource(entry) {
			continue
		}
		file, err := parser.ParseFile(l.files, filepath.Join(folder, entry.Name()), nil, parser.SkipObjectResolution)
		if err != nil {
			return nil, err
		}
		for _, decl := range file.Decls {
			l.declaration(decl)
		}
	}
	return l.lines, nil
}

func isSource(entry fs.DirEntry) bool {
	name := entry.Name()
	return !entry.IsDir() && strings.HasSuffix(name, ".go") && !strings.HasSuffix(name, "_test.go")
}

type lister struct {
	pkg   string
	files *token.FileSet
	lines []string
}

func (l *lister) add(format string, args ...any) {
	l.lines = append(l.lines, "pkg "+l.pkg+", "+fmt.Sprintf(format, args...))
}

func (l *lister) declaration(decl ast.Decl) {
	switch d := decl.(type) {
	case *ast.FuncDecl:
		l.function(d)
	case *ast.GenDecl:
		var kind ast.Expr // the type that a list of constants carries on
		for _, spec := range d.Specs {
			switch s := spec.(type) {
			case *ast.TypeSpec:
				if s.Name.IsExported() {
					l.typeSpec(s)
				}
			case *ast.ValueSpec:
				if s.Type != nil || len(s.Values) > 0 {
					kind = s.Type
				}
				for _, name := range s.Names {
					if name.IsExported() {
						l.add("%s %s%s", d.Tok, name.Name, l.after(kind))
					}
				}
			}
		}
	}
}

func (l *lister) after(kind ast.Expr) string {
	if kind == nil {
		return ""
	}
	return " " + l.text(kind)
}

func (l *lister) function(d *ast.FuncDecl) {
	if !d.Name.IsExported() {
		return
	}
	signature := l.text(withoutNames(d.Type))
	signature = strings.TrimPrefix(signature, "func")
	if d.Recv == nil {
		l.add("func %s%s", d.Name.Name, signature)
		return
	}
	receiver := l.text(d.Recv.List[0].Type)
	if !ast.IsExported(strings.TrimLeft(receiver, "*")) {
		return
	}
	l.add("method (%s) %s%s", receiver, d.Name.Name, signature)
}

func (l *lister) typeSpec(s *ast.TypeSpec) {
	name := s.Name.Name
	switch t := s.Type.(type) {
	case *ast.StructType:
		l.add("type %s struct", name)
		for _, field := range t.Fields.List {
			if len(field.Names) == 0 {
				l.add("type %s struct, embedded %s", name, l.text(field.Type))
			}
			for _, n := range field.Names {
				if n.IsExported() {
					l.add("type %s struct, %s %s", name, n.Name, l.text(field.Type))
				}
			}
		}
	case *ast.InterfaceType:
		l.add("type %s interface", name)
		for _, method := range t.Methods.List {
			if len(method.Names) == 0 {
				l.add("type %s interface, embedded %s", name, l.text(method.Type))
			}
			for _, n := range method.Names {
				signature := strings.TrimPrefix(l.text(withoutNames(method.Type.(*ast.FuncType))), "func")
				if n.IsExported() {
					l.add("type %s interface, %s%s", name, n.Name, signature)
				} else {
					l.add("type %s interface, unexported methods", name)
				}
			}
		}
	default:
		sign := " "
		if s.Assign.IsValid() {
			sign = " = "
		}
		l.add("type %s%s%s", name, sign, l.text(s.Type))
	}
}

// withoutNames returns the function type with a field of its own for each parameter and
// result and no names: renaming a parameter is no change of the API.
func withoutNames(f *ast.FuncType) *ast.FuncType {
	strip := func(list *ast.FieldList) *ast.FieldList {
		if list == nil {
			return nil
		}
		out := &ast.FieldList{}
		for _, field := range list.List {
			for range max(1, len(field.Names)) {
				kind := field.Type
				if inner, ok := kind.(*ast.FuncType); ok {
					kind = withoutNames(inner)
				}
				out.List = append(out.List, &ast.Field{Type: kind})
			}
		}
		return out
	}
	return &ast.FuncType{TypeParams: f.TypeParams, Params: strip(f.Params), Results: strip(f.Results)}
}

func (l *lister) text(node ast.Node) string {
	var b bytes.Buffer
	if err := printer.Fprint(&b, token.NewFileSet(), node); err != nil {
		return "?"
	}
	return strings.Join(strings.Fields(b.String()), " ")
}
