package service_test

import (
	"os/exec"
	"strings"
	"testing"
)

const module = "github.com/roadswell/roadswell/"

// mayImport lists which of our packages each library may reach, directly or not, outside tests. The two programs
// may use them all.
var mayImport = map[string][]string{
	"proto/roadswell/v1": nil,
	"solver":             {"solver/internal/"},
	"service":            {"proto/roadswell/v1", "solver"},
	"client":             {"proto/roadswell/v1"},
	"client/picture":     nil,
}

// TestArrowsPointOneWay asks the go command what is really linked.
func TestArrowsPointOneWay(t *testing.T) {
	for pkg, allowed := range mayImport {
		for _, dep := range dependencies(t, module+pkg) {
			ours, is := strings.CutPrefix(dep, module)
			if is && ours != pkg && !isAllowed(ours, allowed) {
				t.Errorf("%s reaches %s", pkg, ours)
			}
		}
	}
}

// TestTheSolverIsPure: beyond the standard library, gonum at most; and nothing that talks to the world.
func TestTheSolverIsPure(t *testing.T) {
	for _, dep := range dependencies(t, module+"solver") {
		first, _, _ := strings.Cut(dep, "/")
		if strings.Contains(first, ".") && !strings.HasPrefix(dep, module+"solver") && first != "gonum.org" {
			t.Errorf("the solver reaches %s", dep)
		}
		switch dep {
		case "net", "net/http", "log", "log/slog", "os/exec", "math/rand", "math/rand/v2":
			t.Errorf("the solver reaches %s", dep)
		}
	}
}

func isAllowed(dep string, allowed []string) bool {
	for _, a := range allowed {
		if dep == a || strings.HasPrefix(dep, a+"/") || (strings.HasSuffix(a, "/") && strings.HasPrefix(dep, a)) {
			return true
		}
	}
	return false
}

func dependencies(t *testing.T, pkg string) []string {
	t.Helper()
	out, err := exec.Command("go", "list", "-deps", pkg).Output()
	if err != nil {
		t.Fatalf("go list %s: %v", pkg, err)
	}
	deps := strings.Fields(string(out))
	if len(deps) < 2 {
		t.Fatalf("go list %s says only %q", pkg, out)
	}
	return deps
}
