package crosscheck

import (
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// The program in the README must run as it stands there and do what it says.
func TestReadmeProgram(t *testing.T) {
	text, err := os.ReadFile(filepath.Join("..", "..", "README.md"))
	if err != nil {
		t.Fatal(err)
	}
	_, program, found := strings.Cut(string(text), "```go\n")
	program, _, closed := strings.Cut(program, "\n```")
	if !found || !closed {
		t.Fatal("README has no Go program")
	}
	file := filepath.Join(t.TempDir(), "main.go")
	if err := os.WriteFile(file, []byte(program), 0o666); err != nil {
		t.Fatal(err)
	}
	out, err := exec.Command("go", "run", file).CombinedOutput()
	if err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	m := regexp.MustCompile(`largest difference: (\S+)`).FindSubmatch(out)
	if m == nil {
		t.Fatalf("no difference printed:\n%s", out)
	}
	// The bar for a history found all at once from a Cauchy pair.
	if d, err := strconv.ParseFloat(string(m[1]), 64); err != nil || !(d <= 1e-8) {
		t.Errorf("largest difference %s, want at most 1e-8\n%s", m[1], out)
	}
}
