// Generate writes the assembly of package kernel, one file an instruction set:
//
//	go -C internal/kernel/generate run .
//
// Every loop is described once, in terms of a machine that knows the width of
// its registers and how to mask a part of one, so the files differ in width
// and in nothing that a result could show.
package main

import (
	"log"
	"os"
	"regexp"

	"github.com/mmcloughlin/avo/build"
	"github.com/mmcloughlin/avo/pass"
	"github.com/mmcloughlin/avo/printer"
)

func main() {
	log.SetFlags(0)
	write("../avx2_amd64.s", &machine{Context: build.NewContext(), name: "AVX2", lanes: 4})
	write("../avx512_amd64.s", &machine{Context: build.NewContext(), name: "AVX512", lanes: 8})
}

func write(name string, m *machine) {
	m.ConstraintExpr("amd64,!noasm")
	m.leap()
	m.accelerate()
	m.kickDrift()
	m.stage()
	m.finish()
	m.varying()
	m.apply()
	m.combine()
	m.reduce()
	m.tables()
	file, err := m.Result()
	if err != nil {
		log.Fatal(err)
	}
	if err := pass.Compile.Execute(file); err != nil {
		log.Fatal(err)
	}
	asm := printer.NewGoAsm(printer.Config{Argv: []string{"go", "generate", "./internal/kernel"}, Pkg: "kernel"})
	text, err := asm.Print(file)
	if err != nil {
		log.Fatal(err)
	}
	// Avo hands out the registers of AVX-512VL when those of AVX2 run out.
	if bad := regexp.MustCompile(`\bY(1[6-9]|[23]\d)\b`).Find(text); bad != nil {
		log.Fatalf("%s needs register %s, which AVX2 has not", name, bad)
	}
	if err := os.WriteFile(name, text, 0o644); err != nil {
		log.Fatal(err)
	}
}
