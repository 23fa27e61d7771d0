package strictmath_test

import (
	"fmt"
	"go/ast"
	"go/importer"
	"go/token"
	"go/types"
	"io"
	"os"
	"strings"
)

// exact are the functions of package math that give the same bits on every processor. All others are refused.
var exact = map[string]bool{
	"Sqrt": true, "Abs": true, "Floor": true, "Ceil": true, "Trunc": true, "Round": true, "RoundToEven": true, "Max": true, "Min": true, "Mod": true,
	"Ldexp": true, "Frexp": true, "FMA": true, "Inf": true, "NaN": true, "IsNaN": true, "IsInf": true, "Copysign": true, "Signbit": true, "Nextafter": true,
	"Float64bits": true, "Float64frombits": true, "Float32bits": true, "Float32frombits": true,
}

// refusedImports are packages that round differently on different processors, or call what does.
var refusedImports = map[string]string{
	"C":          "cgo: another compiler rounds as it likes",
	"math/cmplx": "math/cmplx is built on functions that differ between processors",
}

// refusedDraws are functions and methods of math/rand and math/rand/v2 that use math.Log and math.Exp.
var refusedDraws = map[string]bool{"NormFloat64": true, "ExpFloat64": true, "NewZipf": true}

// refusals type-checks the files of a package and lists what is refused in them.
func refusals(fset *token.FileSet, pkg string, files []*ast.File, exports map[string]string) ([]string, error) {
	info := &types.Info{Types: map[ast.Expr]types.TypeAndValue{}, Uses: map[*ast.Ident]types.Object{}}
	conf := types.Config{Importer: importer.ForCompiler(fset, "gc", func(path string) (io.ReadCloser, error) {
		file, ok := exports[path]
		if !ok {
			return nil, fmt.Errorf("no export data for %s", path)
		}
		return os.Open(file)
	})}
	if _, err := conf.Check(pkg, fset, files, info); err != nil {
		return nil, err
	}
	r := refuser{fset: fset, info: info}
	for _, f := range files {
		r.imports(f)
		ast.Inspect(f, r.visit)
	}
	return r.found, nil
}

type refuser struct {
	fset  *token.FileSet
	info  *types.Info
	stack []ast.Node
	found []string
}

func (r *refuser) refuse(at token.Pos, what string) {
	r.found = append(r.found, fmt.Sprintf("%s: %s", r.fset.Position(at), what))
}

func (r *refuser) imports(f *ast.File) {
	for _, im := range f.Imports {
		path := strings.Trim(im.Path.Value, `"`)
		if why, ok := refusedImports[path]; ok {
			r.refuse(im.Pos(), why)
		}
		if strings.HasPrefix(path, "gonum.org/") {
			r.refuse(im.Pos(), "gonum: its sums differ between processors")
		}
	}
}

func (r *refuser) visit(n ast.Node) bool {
	if n == nil {
		r.stack = r.stack[:len(r.stack)-1]
		return true
	}
	switch x := n.(type) {
	case *ast.BinaryExpr:
		switch {
		case x.Op == token.MUL && r.is(x, types.IsFloat) && !r.rounded():
			r.refuse(x.Pos(), "a product that may be fused with a sum: write float64(a*b)")
		case (x.Op == token.MUL || x.Op == token.QUO) && r.is(x, types.IsComplex):
			r.refuse(x.Pos(), "complex arithmetic has fused products inside")
		}
	case *ast.AssignStmt:
		switch {
		case x.Tok == token.MUL_ASSIGN && r.is(x.Lhs[0], types.IsFloat):
			r.refuse(x.Pos(), "x *= y may be fused with a sum: write x = float64(x*y)")
		case (x.Tok == token.MUL_ASSIGN || x.Tok == token.QUO_ASSIGN) && r.is(x.Lhs[0], types.IsComplex):
			r.refuse(x.Pos(), "complex arithmetic has fused products inside")
		}
	case *ast.Ident:
		r.function(x)
	}
	r.stack = append(r.stack, n)
	return true
}

// function refuses the name of a function that differs between processors, however its package was imported.
func (r *refuser) function(id *ast.Ident) {
	f, ok := r.info.Uses[id].(*types.Func)
	if !ok || f.Pkg() == nil {
		return
	}
	switch path := f.Pkg().Path(); {
	case path == "math" && !exact[f.Name()]:
		r.refuse(id.Pos(), "math."+f.Name()+" differs between processors: use strictmath")
	case (path == "math/rand" || path == "math/rand/v2") && refusedDraws[f.Name()]:
		r.refuse(id.Pos(), path+": "+f.Name()+" uses functions that differ between processors")
	}
}

// is tells whether an expression may be a number of a kind, and one that the compiler does not know already.
func (r *refuser) is(e ast.Expr, kind types.BasicInfo) bool {
	tv, ok := r.info.Types[e]
	return ok && tv.Value == nil && mayBe(tv.Type, kind)
}

// mayBe looks through names, and into each type that a type parameter allows.
func mayBe(t types.Type, kind types.BasicInfo) bool {
	if p, ok := types.Unalias(t).(*types.TypeParam); ok {
		return mayBe(p.Constraint(), kind)
	}
	switch u := t.Underlying().(type) {
	case *types.Basic:
		return u.Info()&kind != 0
	case *types.Interface:
		for i := range u.NumEmbeddeds() {
			if mayBe(u.EmbeddedType(i), kind) {
				return true
			}
		}
	case *types.Union:
		for i := range u.Len() {
			if mayBe(u.Term(i).Type(), kind) {
				return true
			}
		}
	}
	return false
}

// rounded tells whether what stands around the node that is being visited keeps its product from being fused.
func (r *refuser) rounded() bool {
	for i := len(r.stack) - 1; i >= 0; i-- {
		switch p := r.stack[i].(type) {
		case *ast.ParenExpr:
			continue
		case *ast.BinaryExpr:
			switch p.Op {
			case token.MUL, token.QUO, token.LSS, token.GTR, token.LEQ, token.GEQ, token.EQL, token.NEQ:
				return true
			}
			return false
		case *ast.CallExpr:
			if tv := r.info.Types[p.Fun]; tv.IsType() {
				return true // a conversion
			}
			if s, ok := p.Fun.(*ast.SelectorExpr); ok {
				if id, ok := s.X.(*ast.Ident); ok {
					pkg, isPkg := r.info.Uses[id].(*types.PkgName)
					return isPkg && pkg.Imported().Path() == "math" && s.Sel.Name != "Abs"
				}
			}
			return false
		default:
			return false
		}
	}
	return false
}
