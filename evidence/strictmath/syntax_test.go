package strictmath_test

import (
	"bytes"
	"fmt"
	"go/ast"
	"go/importer"
	"go/parser"
	"go/token"
	"go/types"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// evidenceBearing are the packages whose arithmetic ends up in evidence.json or finding.json.
var evidenceBearing = []string{
	"assaywrit/evidence", "assaywrit/evidence/strictmath", "assaywrit/evidence/calibration", "assaywrit/evidence/uncertainty",
	"assaywrit/evidence/peak", "assaywrit/evidence/simulate", "assaywrit/evidence/simulate/demo", "assaywrit/evidence/casefile",
	"assaywrit/evidence/units", "assaywrit/evidence/trace", "assaywrit/evidence/trace/mzml", "assaywrit/evidence/trace/table",
	"assaywrit/evidence/trace/formats", "assaywrit/decision",
}

// exact are the functions of package math that give the same bits on every processor. All others are refused.
var exact = map[string]bool{
	"Sqrt": true, "Abs": true, "Floor": true, "Ceil": true, "Trunc": true, "Round": true, "RoundToEven": true, "Max": true, "Min": true, "Mod": true,
	"Ldexp": true, "Frexp": true, "FMA": true, "Inf": true, "NaN": true, "IsNaN": true, "IsInf": true, "Copysign": true, "Signbit": true, "Nextafter": true,
	"Float64bits": true, "Float64frombits": true, "Float32bits": true, "Float32frombits": true,
}

// TestNoPlatformDependentArithmetic reads the syntax trees of the evidence-bearing packages and refuses what processors compute
// differently.
//
// The language lets a compiler fuse a product and a sum into one rounding, across statements too; an explicit conversion of the
// product forbids it (The Go Programming Language Specification, "Floating-point operators"). So every product of floats must be
// converted at once, unless it is only multiplied, divided, compared, or handed to an exact function of package math. Functions of
// package math that differ in their last digits, and gonum, are refused.
func TestNoPlatformDependentArithmetic(t *testing.T) {
	exports := exportData(t)
	for _, pkg := range evidenceBearing {
		fset := token.NewFileSet()
		files := parsed(t, fset, filepath.Join("..", "..", strings.TrimPrefix(pkg, "assaywrit/")))
		for _, r := range refusals(t, fset, pkg, files, exports) {
			t.Error(r)
		}
	}
}

// exportData finds the compiled form of everything that the packages import.
func exportData(t testing.TB) map[string]string {
	t.Helper()
	cmd := exec.Command("go", append([]string{"list", "-export", "-deps", "-f", "{{.ImportPath}}\t{{.Export}}"}, evidenceBearing...)...)
	cmd.Stderr = os.Stderr
	out, err := cmd.Output()
	if err != nil {
		t.Fatal(err)
	}
	exports := map[string]string{}
	for line := range strings.SplitSeq(string(out), "\n") {
		if path, file, ok := strings.Cut(line, "\t"); ok && file != "" {
			exports[path] = file
		}
	}
	return exports
}

func parsed(t testing.TB, fset *token.FileSet, dir string) []*ast.File {
	t.Helper()
	names, err := filepath.Glob(filepath.Join(dir, "*.go"))
	if err != nil || len(names) == 0 {
		t.Fatalf("no sources in %s (%v)", dir, err)
	}
	var files []*ast.File
	for _, name := range names {
		if strings.HasSuffix(name, "_test.go") {
			continue
		}
		f, err := parser.ParseFile(fset, name, nil, 0)
		if err != nil {
			t.Fatal(err)
		}
		files = append(files, f)
	}
	return files
}

// refusals type-checks the files of a package and lists what is refused in them.
func refusals(t testing.TB, fset *token.FileSet, pkg string, files []*ast.File, exports map[string]string) []string {
	t.Helper()
	info := &types.Info{Types: map[ast.Expr]types.TypeAndValue{}, Uses: map[*ast.Ident]types.Object{}}
	conf := types.Config{Importer: importer.ForCompiler(fset, "gc", func(path string) (io.ReadCloser, error) {
		file, ok := exports[path]
		if !ok {
			return nil, fmt.Errorf("no export data for %s", path)
		}
		return os.Open(file)
	})}
	if _, err := conf.Check(pkg, fset, files, info); err != nil {
		t.Fatal(err)
	}
	r := refuser{fset: fset, info: info}
	for _, f := range files {
		for _, im := range f.Imports {
			if strings.HasPrefix(strings.Trim(im.Path.Value, `"`), "gonum.org/") {
				r.refuse(im.Pos(), "gonum: its sums differ between processors")
			}
		}
		ast.Inspect(f, r.visit)
	}
	return r.found
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

func (r *refuser) visit(n ast.Node) bool {
	if n == nil {
		r.stack = r.stack[:len(r.stack)-1]
		return true
	}
	switch x := n.(type) {
	case *ast.BinaryExpr:
		if x.Op == token.MUL && r.isFloat(x) && !r.rounded() {
			r.refuse(x.Pos(), "a product that may be fused with a sum: write float64(a*b)")
		}
	case *ast.AssignStmt:
		if x.Tok == token.MUL_ASSIGN && r.isFloat(x.Lhs[0]) {
			r.refuse(x.Pos(), "x *= y may be fused with a sum: write x = float64(x*y)")
		}
	case *ast.SelectorExpr:
		if id, ok := x.X.(*ast.Ident); ok {
			if p, ok := r.info.Uses[id].(*types.PkgName); ok && p.Imported().Path() == "math" && !exact[x.Sel.Name] {
				if _, isFunc := r.info.Uses[x.Sel].(*types.Func); isFunc {
					r.refuse(x.Pos(), "math."+x.Sel.Name+" differs between processors: use strictmath")
				}
			}
		}
	}
	r.stack = append(r.stack, n)
	return true
}

// isFloat tells whether an expression is a float that the compiler does not know already.
func (r *refuser) isFloat(e ast.Expr) bool {
	tv, ok := r.info.Types[e]
	if !ok || tv.Value != nil {
		return false
	}
	b, ok := tv.Type.Underlying().(*types.Basic)
	return ok && b.Info()&types.IsFloat != 0
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

// TestRefuserRefuses shows that the test above can fail, and what it lets pass.
func TestRefuserRefuses(t *testing.T) {
	tests := []struct {
		body   string
		refuse bool
	}{
		{"return a*b + c", true},
		{"return c - a*b", true},
		{"return (a*b) + c", true},
		{"c += a * b; return c", true},
		{"d := a * b; return d + c", true}, // fused across statements
		{"a *= b; return a + c", true},
		{"return a * b", true}, // fused after inlining
		{"return -(a * b)", true},
		{"return math.Exp(a)", true},
		{"return math.Hypot(a, b)", true},
		{"f := math.Pow; return f(a, b)", true},
		{"return math.Abs(a*b) + c", true}, // the sign bit may move before the fusion
		{"x := [1]float64{a * b}; return x[0]", true},
		{"return float64(a*b) + c", false},
		{"return float64(a*b*c) + c", false},
		{"return a*b/c + c", false},
		{"return math.Sqrt(a*b) + c", false},
		{"if a*b > c { return a }; return b", false},
		{"return a/b + c", false},
		{"return 2*3 + a", false}, // a constant
		{"return float64(2*len(s)) + a", false},
		{"return math.FMA(a, b, c)", false},
		{"return math.Pi + a", false},
	}
	exports := exportData(t)
	for _, tt := range tests {
		src := "package p\nimport \"math\"\nvar _ = math.Pi\nfunc f(a, b, c float64, s []int) float64 {" + strings.ReplaceAll(tt.body, "; ", "\n") + "}"
		fset := token.NewFileSet()
		f, err := parser.ParseFile(fset, "p.go", bytes.NewReader([]byte(src)), 0)
		if err != nil {
			t.Fatal(err)
		}
		if found := refusals(t, fset, "p", []*ast.File{f}, exports); (len(found) > 0) != tt.refuse {
			t.Errorf("%q: %v", tt.body, found)
		}
	}
}
