package kernel

import (
	"os"
	"regexp"
	"slices"
	"strings"
	"testing"
)

func TestChoose(t *testing.T) {
	for _, c := range []struct {
		name    string
		fastest path
		want    path
	}{
		{"", portable, portable}, {"", avx512, avx512}, {"portable", avx512, portable}, {"avx2", avx512, avx2}, {"avx2", avx2, avx2},
	} {
		if got := choose(c.name, c.fastest); got != c.want {
			t.Errorf("choose(%q, %v) = %v, want %v", c.name, c.fastest, got, c.want)
		}
	}
	for _, name := range []string{"avx512", "AVX2", "fast"} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("choose(%q, avx2) returned, want a panic", name)
				}
			}()
			choose(name, avx2)
		}()
	}
}

// TestFilesKeepToTheirInstructions reads what the generator says that each
// function needs; CPUID is asked for no more than that.
func TestFilesKeepToTheirInstructions(t *testing.T) {
	for name, allowed := range map[string]string{
		"avx2_amd64.s":   "AVX AVX2 FMA3 CMOV",
		"avx512_amd64.s": "AVX AVX2 FMA3 CMOV BMI2 AVX512F",
	} {
		text, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		for _, line := range regexp.MustCompile(`// Requires: .*`).FindAllString(string(text), -1) {
			for _, set := range strings.FieldsFunc(strings.TrimPrefix(line, "// Requires:"), func(r rune) bool { return r == ',' || r == ' ' }) {
				if !slices.Contains(strings.Fields(allowed), set) {
					t.Errorf("%s needs %s", name, set)
				}
			}
		}
		if name == "avx2_amd64.s" {
			if bad := regexp.MustCompile(`\b([ZK]\d+|Y(1[6-9]|[23]\d))\b`).FindString(string(text)); bad != "" {
				t.Errorf("%s uses %s, which AVX2 has not", name, bad)
			}
		}
	}
}
