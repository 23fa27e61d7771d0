package strictmath_test

import (
	"go/ast"
	"go/parser"
	"go/token"
	"go/types"
	"os"
	"os/exec"
	"strings"
	"testing"
)

// layers hold the packages whose arithmetic ends up in evidence.json or finding.json. Every package in them is read, so that a new
// one is covered without being named here.
var layers = []string{"assaywrit/evidence/...", "assaywrit/decision/..."}

// mustBeRead are packages that would be missed if the layers were listed wrongly.
var mustBeRead = []string{
	"assaywrit/evidence", "assaywrit/evidence/strictmath", "assaywrit/evidence/calibration", "assaywrit/evidence/uncertainty",
	"assaywrit/evidence/peak", "assaywrit/evidence/simulate", "assaywrit/evidence/casefile", "assaywrit/evidence/trace",
	"assaywrit/evidence/trace/mzml", "assaywrit/evidence/trace/table", "assaywrit/decision",
}

// TestNoPlatformDependentArithmetic reads the syntax trees of the evidence-bearing packages and refuses what processors compute
// differently.
//
// The language lets a compiler fuse a product and a sum into one rounding, across statements too; an explicit conversion of the
// product forbids it (The Go Programming Language Specification, "Floating-point operators"). So every product of floats must be
// converted at once, unless it is only multiplied, divided, compared, or handed to an exact function of package math. Functions of
// package math that differ in their last digits, products of complex numbers and gonum are refused.
//
// A quotient is let pass. The compiler turns one by a constant power of two into a product, and may fuse that; such a product is
// exact, so the result is the same unless it is below 2^-1022 or beyond the largest number.
func TestNoPlatformDependentArithmetic(t *testing.T) {
	listed := list(t)
	read := map[string]bool{}
	for _, pkg := range listed.packages {
		read[pkg.path] = true
		fset := token.NewFileSet()
		found, err := refusals(fset, pkg.path, parsed(t, fset, pkg.files), listed.exports)
		if err != nil {
			t.Errorf("%s: %v", pkg.path, err)
		}
		for _, r := range found {
			t.Error(r)
		}
	}
	for _, path := range mustBeRead {
		if !read[path] {
			t.Errorf("%s was not read", path)
		}
	}
}

type listing struct {
	packages []listedPackage
	exports  map[string]string // compiled form by import path
}

type listedPackage struct {
	path  string
	files []string
}

// list finds the packages of the layers with their sources, tests left out, and the compiled form of all that they import.
func list(t testing.TB) listing {
	t.Helper()
	run := func(args ...string) []string {
		cmd := exec.Command("go", append([]string{"list"}, args...)...)
		cmd.Stderr = os.Stderr
		out, err := cmd.Output()
		if err != nil {
			t.Fatal(err)
		}
		return strings.Split(strings.TrimSpace(string(out)), "\n")
	}
	l := listing{exports: map[string]string{}}
	for _, line := range run(append([]string{"-f", `{{.ImportPath}}{{$d := .Dir}}{{range .GoFiles}}{{"\t"}}{{$d}}/{{.}}{{end}}{{range .CgoFiles}}{{"\t"}}{{$d}}/{{.}}{{end}}`}, layers...)...) {
		fields := strings.Split(line, "\t")
		l.packages = append(l.packages, listedPackage{fields[0], fields[1:]})
	}
	for _, line := range run(append([]string{"-export", "-deps", "-f", "{{.ImportPath}}\t{{.Export}}", "math/rand/v2"}, layers...)...) {
		if path, file, ok := strings.Cut(line, "\t"); ok && file != "" {
			l.exports[path] = file
		}
	}
	return l
}

func parsed(t testing.TB, fset *token.FileSet, names []string) []*ast.File {
	t.Helper()
	var files []*ast.File
	for _, name := range names {
		f, err := parser.ParseFile(fset, name, nil, 0)
		if err != nil {
			t.Fatal(err)
		}
		files = append(files, f)
	}
	return files
}

// TestRefuserRefuses shows that the test above can fail, and what it lets pass.
func TestRefuserRefuses(t *testing.T) {
	tests := []struct {
		body   string
		refuse bool
	}{
		{"return a*b + c", true},
		{"return a*b - c", true},
		{"return c + a*b", true},
		{"return c - a*b", true},
		{"return (a*b) + c", true},
		{"return c + ((a*(b)))", true},
		{"return a*b*c + a", true},
		{"return a*b + float64(a*c)", true},
		{"return a/b*c + a", true}, // the last operation is a product
		{"return float64(a)*float64(b) + c", true},
		{"c += a * b; return c", true},
		{"c -= a * b; return c", true},
		{"d := a * b; return d + c", true}, // fused across statements
		{"a *= b; return a + c", true},
		{"return a * b", true}, // fused after inlining
		{"return -(a * b)", true},
		{"return max(a*b, c) + a", true}, // a built-in may be compiled to anything
		{"x := float32(a); y := x * x + x; return float64(y)", true},
		{"return float64(q(a)*q(b) + q(c))", true}, // a named type
		{"return float64(times(q(a), q(b)))", true},
		{"f := func(x float64) float64 { return x*x + 1 }; return f(a)", true},
		{"return real(complex(a, b) * complex(b, a))", true},
		{"z := complex(a, b); z /= 2; return real(z)", true},
		{"return math.Exp(a)", true},
		{"return math.Hypot(a, b)", true},
		{"return m2.Log1p(a)", true},
		{"return Cbrt(a)", true}, // imported by a dot
		{"f := math.Pow; return f(a, b)", true},
		{"return rand.NormFloat64()", true},
		{"return rand.New(rand.NewPCG(1, 2)).ExpFloat64()", true},
		{"return math.Abs(a*b) + c", true}, // the sign bit may move before the fusion
		{"x := [1]float64{a * b}; return x[0]", true},
		{"return float64(a*b) + c", false},
		{"return float64(a*b*c) + c", false},
		{"return float64(q(q(a)*q(b)) + q(c))", false},
		{"c += float64(a * b); return c", false},
		{"return a*b/c + c", false},
		{"return math.Sqrt(a*b) + c", false},
		{"if a*b > c { return a }; return b", false},
		{"return a/b + c", false},
		{"return 2*3 + a", false}, // a constant
		{"return float64(2*len(s)) + a", false},
		{"n := 3*len(s) + 1; n *= 2; return float64(n)", false},
		{"return math.FMA(a, b, c)", false},
		{"return math.Pi + a", false},
		{"return Sqrt(m2.Abs(a))", false},
		{"return rand.Float64() + a", false},
	}
	exports := list(t).exports
	for _, tt := range tests {
		src := `package p
import (
	"math"
	m2 "math"
	. "math"
	"math/rand/v2"
)
type q float64
type number interface { ~int | ~float64 }
func times[T number](a, b T) T { return ` + map[bool]string{true: "a*b", false: "a+b"}[strings.Contains(tt.body, "times")] + ` }
var _, _, _, _ = math.Pi, m2.Pi, Pi, rand.Int
var _ = times[int]
func f(a, b, c float64, s []int) float64 {` + strings.ReplaceAll(tt.body, "; ", "\n") + "}"
		fset := token.NewFileSet()
		f, err := parser.ParseFile(fset, "p.go", src, 0)
		if err != nil {
			t.Fatal(err)
		}
		found, err := refusals(fset, "p", []*ast.File{f}, exports)
		if err != nil || (len(found) > 0) != tt.refuse {
			t.Errorf("%q: %v, %v", tt.body, found, err)
		}
	}
}

// TestRefusedImports: these packages are refused by their name alone.
func TestRefusedImports(t *testing.T) {
	for _, path := range []string{"gonum.org/v1/gonum/floats", "math/cmplx"} {
		fset := token.NewFileSet()
		f, err := parser.ParseFile(fset, "p.go", "package p\nimport _ \""+path+"\"", 0)
		if err != nil {
			t.Fatal(err)
		}
		r := refuser{fset: fset, info: &types.Info{}}
		r.imports(f)
		if len(r.found) != 1 {
			t.Errorf("%s: %v", path, r.found)
		}
	}
}
