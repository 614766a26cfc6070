package api

import (
	"go/ast"
	"go/parser"
	"go/token"
	"os"
	"path/filepath"
	"testing"
)

// TestEverythingIsDocumented: an exported function, method, type or group of values without a
// doc comment promises nothing.
func TestEverythingIsDocumented(t *testing.T) {
	for _, name := range Packages {
		folder := filepath.Join("../..", name)
		entries, err := os.ReadDir(folder)
		if err != nil {
			t.Fatal(err)
		}
		documented := false
		for _, entry := range entries {
			if !isSource(entry) {
				continue
			}
			files := token.NewFileSet()
			file, err := parser.ParseFile(files, filepath.Join(folder, entry.Name()), nil, parser.ParseComments)
			if err != nil {
				t.Fatal(err)
			}
			documented = documented || file.Doc != nil
			for _, decl := range file.Decls {
				for _, missing := range undocumented(decl) {
					t.Errorf("%s/%s: %s has no doc comment", name, entry.Name(), missing)
				}
			}
		}
		if !documented {
			t.Errorf("package %s has no doc comment", name)
		}
	}
}

func undocumented(decl ast.Decl) (names []string) {
	switch d := decl.(type) {
	case *ast.FuncDecl:
		if d.Name.IsExported() && d.Doc == nil && (d.Recv == nil || exportedReceiver(d)) && !wellKnown[d.Name.Name] {
			names = append(names, d.Name.Name)
		}
	case *ast.GenDecl:
		for _, spec := range d.Specs {
			switch s := spec.(type) {
			case *ast.TypeSpec:
				if s.Name.IsExported() && d.Doc == nil && s.Doc == nil {
					names = append(names, s.Name.Name)
				}
			case *ast.ValueSpec:
				for _, n := range s.Names {
					if n.IsExported() && d.Doc == nil && s.Doc == nil && s.Comment == nil {
						names = append(names, n.Name)
					}
				}
			}
		}
	}
	return names
}

func exportedReceiver(d *ast.FuncDecl) bool {
	kind := d.Recv.List[0].Type
	if star, ok := kind.(*ast.StarExpr); ok {
		kind = star.X
	}
	name, ok := kind.(*ast.Ident)
	return ok && name.IsExported()
}

// wellKnown are methods whose meaning the standard library's interface fixes.
var wellKnown = map[string]bool{"Error": true, "Unwrap": true, "String": true, "Is": true,
	"MarshalJSON": true, "UnmarshalJSON": true, "MarshalText": true, "UnmarshalText": true}
