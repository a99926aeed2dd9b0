package store_test

import (
	"fmt"
	"log"
	"math"
	"os"
	"path/filepath"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/store"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/lattice/refine"
)

// A history goes to disk with its block and comes back whole.
func ExampleWriteHistoryNPZ() {
	folder, err := os.MkdirTemp("", "store")
	if err != nil {
		log.Fatal(err)
	}
	defer os.RemoveAll(folder)

	clock := lattice.Axis{Step: 0.5, Sites: 3}
	line := lattice.Axis{From: -1, Step: 0.25, Sites: 9, Right: lattice.Open}
	block, err := lattice.NewBlock(clock, line)
	if err != nil {
		log.Fatal(err)
	}
	history := field.NewHistory(block, 1)
	history.Set(2, 0, 4, 0.1)

	path := filepath.Join(folder, "history.npz")
	if err := store.WriteHistoryNPZ(path, history); err != nil {
		log.Fatal(err)
	}
	back, err := store.ReadHistoryNPZ(path)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(back.Block.At(2, 4), back.At(2, 0, 4), back.Block.Space.Right)
	// Output:
	// (x, t) = (0, 1) 0.1 open
}

func ExampleEncodeTable() {
	table := store.Table{
		Header: []string{"h", "energy"},
		Rows:   [][]float64{{0.1, 8.01}, {0.05, 8.0025}},
	}
	if err := store.EncodeTable(os.Stdout, table); err != nil {
		log.Fatal(err)
	}
	// Output:
	// h,energy
	// 0.1,8.01
	// 0.05,8.0025
}

func ExampleWriteResults() {
	folder, err := os.MkdirTemp("", "store")
	if err != nil {
		log.Fatal(err)
	}
	defer os.RemoveAll(folder)

	path := filepath.Join(folder, "results.json")
	err = store.WriteResults(path, []refine.Result{
		{Name: "terminal_speed", Value: 0.842, Error: 0.001, Unit: "Swihart velocity"},
		{Name: "fluxon_count", Value: 1, Error: math.NaN()},
	})
	if err != nil {
		log.Fatal(err)
	}
	text, err := os.ReadFile(path)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Print(string(text))
	// Output:
	// [
	//   {
	//     "name": "terminal_speed",
	//     "value": 0.842,
	//     "error": 0.001,
	//     "unit": "Swihart velocity"
	//   },
	//   {
	//     "name": "fluxon_count",
	//     "value": 1,
	//     "error": null,
	//     "unit": ""
	//   }
	// ]
}
