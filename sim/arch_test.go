package sim_test

import (
	"bytes"
	"encoding/json"
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
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// These tests hold the architecture: who may import whom, and what keeps a run a
// pure function of its scenario with the same bits on every machine. Each finding
// is a sentence that says what is wrong and why it matters.

// core are the packages that a run is made of.
var core = []string{
	"leeway/sim/geom", "leeway/sim/chance", "leeway/sim/floor", "leeway/sim/ring",
	"leeway/sim/drive", "leeway/sim/steer", "leeway/sim/logic", "leeway/sim",
}

// arrows says which rooms of Leeway each room under sim may import. A room that
// is not named stands above the run and may import the run, what is below it, and
// its neighbours in above.
var arrows = map[string][]string{
	"leeway/sim/geom":   {},
	"leeway/sim/chance": {"leeway/sim/geom"},
	"leeway/sim/floor":  {"leeway/sim/geom", "leeway/sim/chance"},
	"leeway/sim/drive":  {"leeway/sim/geom", "leeway/sim/chance"},
	"leeway/sim/ring":   {"leeway/sim/geom", "leeway/sim/chance", "leeway/sim/floor", "leeway/sim/drive"},
	"leeway/sim/steer":  {"leeway/sim/geom", "leeway/sim/drive"},
	// not the floor: a logic sees readings and beliefs, never the truth
	"leeway/sim/logic": {"leeway/sim/geom", "leeway/sim/chance", "leeway/sim/drive", "leeway/sim/ring"},
	"leeway/sim": {"leeway/sim/geom", "leeway/sim/chance", "leeway/sim/floor", "leeway/sim/ring",
		"leeway/sim/drive", "leeway/sim/steer", "leeway/sim/logic"},
	"leeway/sim/truth": {},
}

// above are the rooms over the run.
var above = []string{"leeway/sim/shadow", "leeway/sim/reach", "leeway/sim/gen", "leeway/sim/study", "leeway/sim/study/stat", "leeway/sim/drivelog"}

// exact are the functions of package math that return the same bits on every
// machine: those that IEEE 754 rounds correctly, and those that need no rounding.
var exact = []string{
	"Sqrt", "Floor", "Ceil", "Trunc", "Round", "RoundToEven", "Abs", "Min", "Max", "Mod", "Modf", "Remainder",
	"Frexp", "Ldexp", "Nextafter", "Copysign", "Signbit", "Inf", "NaN", "IsInf", "IsNaN",
	"Float64bits", "Float64frombits", "Float32bits", "Float32frombits",
}

// source is one package as the go command lists it.
type source struct {
	ImportPath, Dir, Export string
	GoFiles                 []string
}

// list asks the go command for packages; flags come first in args.
func list(t *testing.T, args ...string) []source {
	t.Helper()
	out := goCommand(t, nil, append([]string{"list", "-json=ImportPath,Dir,Export,GoFiles"}, args...)...)
	var all []source
	for dec := json.NewDecoder(bytes.NewReader(out)); ; {
		var s source
		if err := dec.Decode(&s); err == io.EOF {
			return all
		} else if err != nil {
			t.Fatal(err)
		}
		all = append(all, s)
	}
}

// goCommand runs the go command and returns all it prints.
func goCommand(t *testing.T, env []string, args ...string) []byte {
	t.Helper()
	cmd := exec.Command("go", args...)
	cmd.Env = append(os.Environ(), env...)
	var stderr bytes.Buffer
	cmd.Stderr = &stderr
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("go %s: %v\n%s", strings.Join(args, " "), err, stderr.Bytes())
	}
	return append(out, stderr.Bytes()...)
}

// parse reads the files of a package, without its tests.
func parse(t *testing.T, fset *token.FileSet, s source) []*ast.File {
	t.Helper()
	var files []*ast.File
	for _, name := range s.GoFiles {
		f, err := parser.ParseFile(fset, filepath.Join(s.Dir, name), nil, parser.SkipObjectResolution)
		if err != nil {
			t.Fatal(err)
		}
		files = append(files, f)
	}
	return files
}

// place names a position as folder/file:line.
func place(fset *token.FileSet, pos token.Pos) string {
	p := fset.Position(pos)
	return fmt.Sprintf("%s/%s:%d", filepath.Base(filepath.Dir(p.Filename)), filepath.Base(p.Filename), p.Line)
}

// TestArrows: rooms import downwards only, and nothing under sim reaches for the
// clock, the system, the network or a shared random source.
func TestArrows(t *testing.T) {
	for _, s := range list(t, "leeway/...") {
		fset := token.NewFileSet()
		for _, f := range parse(t, fset, s) {
			for _, spec := range f.Imports {
				path, _ := strconv.Unquote(spec.Path.Value)
				if why := forbidden(s.ImportPath, path); why != "" {
					t.Errorf("%s: %s imports %s: %s", place(fset, spec.Pos()), s.ImportPath, path, why)
				}
			}
		}
	}
}

// forbidden returns why a package may not import another, "" if it may.
func forbidden(from, to string) string {
	inside := func(path, room string) bool { return path == room || strings.HasPrefix(path, room+"/") }
	ours := inside(to, "leeway")
	switch {
	case inside(from, "leeway/web"):
		if ours && !inside(to, "leeway/web") {
			return "pages know only their own view models"
		}
		return ""
	case !inside(from, "leeway/sim"):
		if to == "leeway/sim/truth" {
			return "known answers are for tests"
		}
		return ""
	}

	switch {
	case to == "os" && from == "leeway/sim/truth": // it reads the published values for tests
	case inside(to, "net") || inside(to, "os") || to == "syscall":
		return "a simulation needs neither the network nor the system, and what it read there would be no part of the scenario"
	case to == "time":
		return "a run has ticks; the clock of the machine would make it a different run each time"
	case inside(to, "math/rand"):
		return "chance comes from named streams (sim/chance), so that no source shifts another's numbers"
	case to == "unsafe" || to == "reflect" && slices.Contains(core, from):
		return "a run is plain values"
	case inside(to, "leeway/server") || inside(to, "leeway/web"):
		return "the simulation knows nothing of who shows it"
	case to == "leeway/sim/truth":
		return "known answers are for tests"
	case ours:
		if may, ok := arrows[from]; ok {
			if !slices.Contains(may, to) {
				return fmt.Sprintf("the arrows allow it %v only", may)
			}
			return ""
		}
		if from == "leeway/sim/scenario" && inside(to, "leeway/sim") {
			return ""
		}
		if !slices.Contains(core, to) && !slices.Contains(above, to) {
			return "rooms over the run import the run and what is below it"
		}
	}
	return ""
}

// TestArrowsAreSharp asks forbidden about imports that must not pass, and some that must.
func TestArrowsAreSharp(t *testing.T) {
	for _, x := range []struct {
		from, to string
		may      bool
	}{
		{"leeway/sim/geom", "math", true}, {"leeway/sim/geom", "leeway/sim/floor", false},
		{"leeway/sim/floor", "leeway/sim/geom", true}, {"leeway/sim/floor", "leeway/sim/ring", false},
		{"leeway/sim/logic", "leeway/sim/floor", false}, {"leeway/sim/logic", "leeway/sim/ring", true},
		{"leeway/sim", "leeway/sim/scenario", false}, {"leeway/sim", "leeway/sim/reach", false},
		{"leeway/sim/reach", "leeway/sim", true}, {"leeway/sim/reach", "leeway/sim/scenario", false},
		{"leeway/sim/scenario", "leeway/sim/floor", true}, {"leeway/sim/scenario", "leeway/server/api", false},
		{"leeway/sim/study", "time", false}, {"leeway/sim", "os", false}, {"leeway/sim/gen", "math/rand/v2", false},
		{"leeway/sim/ring", "net/http", false}, {"leeway/sim/ring", "leeway/sim/truth", false},
		{"leeway/sim/truth", "os", true}, {"leeway/server/live", "time", true},
		{"leeway/web/page", "leeway/sim", false}, {"leeway/web/page", "github.com/a-h/templ", true},
	} {
		if why := forbidden(x.from, x.to); (why == "") != x.may {
			t.Errorf("%s importing %s: %q", x.from, x.to, why)
		}
	}
}

// TestRunIsPure looks into every function of the core for what would make a run
// depend on more than its scenario: inexact functions, the order of a map,
// goroutines, variables that outlive a run.
func TestRunIsPure(t *testing.T) {
	exports := map[string]string{}
	for _, s := range list(t, append([]string{"-export", "-deps"}, core...)...) {
		exports[s.ImportPath] = s.Export
	}
	fset := token.NewFileSet()
	imp := importer.ForCompiler(fset, "gc", func(path string) (io.ReadCloser, error) { return os.Open(exports[path]) })
	for _, s := range list(t, core...) {
		for _, finding := range impurities(t, fset, imp, s.ImportPath, parse(t, fset, s)) {
			t.Error(finding)
		}
	}
}

// impurities type-checks a package and returns a sentence for each thing in it
// that a run must not do.
func impurities(t *testing.T, fset *token.FileSet, imp types.Importer, path string, files []*ast.File) (found []string) {
	t.Helper()
	info := &types.Info{Uses: map[*ast.Ident]types.Object{}, Types: map[ast.Expr]types.TypeAndValue{}}
	conf := types.Config{Importer: imp}
	pkg, err := conf.Check(path, fset, files, info)
	if err != nil {
		t.Fatal(err)
	}
	say := func(n ast.Node, format string, args ...any) {
		found = append(found, place(fset, n.Pos())+": "+fmt.Sprintf(format, args...))
	}
	// outlives returns the package variable that an assignment to e would change.
	outlives := func(e ast.Expr) types.Object {
		for {
			switch x := e.(type) {
			case *ast.Ident:
				if v, ok := info.Uses[x].(*types.Var); ok && v.Parent() == pkg.Scope() {
					return v
				}
				return nil
			case *ast.IndexExpr:
				e = x.X
			case *ast.SelectorExpr:
				e = x.X
			case *ast.StarExpr:
				e = x.X
			case *ast.ParenExpr:
				e = x.X
			default:
				return nil
			}
		}
	}
	assigned := func(n ast.Node, e ast.Expr) {
		if v := outlives(e); v != nil {
			say(n, "%s outlives the run and is assigned to: two runs in one program would feel each other", v.Name())
		}
	}
	for _, f := range files {
		ast.Inspect(f, func(n ast.Node) bool {
			switch n := n.(type) {
			case *ast.SelectorExpr:
				if fn, ok := info.Uses[n.Sel].(*types.Func); ok && fn.Pkg() != nil && fn.Pkg().Path() == "math" && !slices.Contains(exact, fn.Name()) {
					say(n, "math.%s may differ from one processor to the next: use those of sim/geom", fn.Name())
				}
			case *ast.RangeStmt:
				if _, ok := info.Types[n.X].Type.Underlying().(*types.Map); ok {
					say(n, "the order of a map changes from run to run: keep a slice beside it")
				}
			case *ast.GoStmt:
				say(n, "a goroutine inside a run makes its order depend on the scheduler")
			case *ast.SelectStmt:
				say(n, "select picks at random among what is ready")
			case *ast.AssignStmt:
				for _, e := range n.Lhs {
					assigned(n, e)
				}
			case *ast.IncDecStmt:
				assigned(n, n.X)
			}
			return true
		})
	}
	return found
}

// TestImpuritiesAreFound shows the search above one of each.
func TestImpuritiesAreFound(t *testing.T) {
	const text = `package p
import "math"
var count int
var table [3]float64
func f(m map[int]int, c chan int) float64 {
	for range m { count++ }
	table[1] = math.Sin(1)
	go f(nil, nil)
	select { case <-c: default: }
	g := math.Hypot
	return math.Sqrt(g(1, 2))
}`
	fset := token.NewFileSet()
	file, err := parser.ParseFile(fset, "p.go", text, parser.SkipObjectResolution)
	if err != nil {
		t.Fatal(err)
	}
	found := strings.Join(impurities(t, fset, importer.ForCompiler(fset, "source", nil), "p", []*ast.File{file}), "\n")
	for _, want := range []string{"order of a map", "count outlives", "table outlives", "math.Sin", "goroutine", "select", "math.Hypot"} {
		if !strings.Contains(found, want) {
			t.Errorf("%s went unnoticed in:\n%s", want, found)
		}
	}
	if strings.Contains(found, "Sqrt") {
		t.Errorf("an exact function was reported:\n%s", found)
	}
}

// fused matches an instruction of arm64 that multiplies and adds with one
// rounding, in an assembly listing of the compiler.
var fused = regexp.MustCompile(`\(([^()]+\.go:\d+)\)\s+(FN?M(?:ADD|SUB)[SD])\b`)

// fusedIn compiles packages for arm64 and returns where products were fused with sums.
func fusedIn(t *testing.T, env []string, packages ...string) (found []string) {
	t.Helper()
	env = append(env, "GOOS=linux", "GOARCH=arm64", "CGO_ENABLED=0")
	listing := goCommand(t, env, append([]string{"build", "-gcflags=-S"}, packages...)...)
	for _, m := range fused.FindAllSubmatch(listing, -1) {
		at := string(m[1])
		if dir := filepath.Dir(at); filepath.IsAbs(at) {
			at = filepath.Base(dir) + "/" + filepath.Base(at)
		}
		if s := fmt.Sprintf("%s: %s", at, m[2]); !slices.Contains(found, s) {
			found = append(found, s)
		}
	}
	slices.Sort(found)
	return found
}

// TestNoFusedMultiplyAdd: the language lets a compiler round x*y + z once instead
// of twice, and Go's does on arm64. A run would then take another route there.
// float64(x*y) + z forbids it. (A product with a power of two is exact, so that
// fusing it is harmless; the listing does not tell it from others, and it is
// wrapped like them. x/2 is such a product to the compiler.)
func TestNoFusedMultiplyAdd(t *testing.T) {
	for _, at := range fusedIn(t, nil, core...) {
		t.Errorf("%s: on arm64 a product is fused with a sum: write float64(…) around the product, which may have been made further up, or be a division by 2", at)
	}
}

// TestFusionIsFound compiles a product and a sum that may be fused, and the same
// with the product rounded.
func TestFusionIsFound(t *testing.T) {
	dir := t.TempDir()
	for name, text := range map[string]string{
		"go.mod":   "module fusing\n\ngo 1.26\n",
		"loose.go": "package fusing\n\nfunc Loose(x, y, z float64) float64 { return x*y + z }\n",
		"tight.go": "package fusing\n\nfunc Tight(x, y, z float64) float64 { return float64(x*y) + z }\n",
	} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	t.Chdir(dir)
	found := strings.Join(fusedIn(t, []string{"GOWORK=off", "GOFLAGS="}, "."), "\n")
	if !strings.Contains(found, "loose.go:3: FMADDD") || strings.Contains(found, "tight.go") {
		t.Errorf("of a loose and a tight sum, these were found to be fused: %q", found)
	}
}
