package store

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"os"

	"github.com/tenter-go/tenter/lattice/refine"
)

// WriteResults writes results to a JSON file, a list of objects
//
//	{"name": …, "value": …, "error": …, "unit": …}
//
// in the order given. Numbers that are not finite, such as the error where
// there is no error bar, are null. Names must be different and not empty; a
// negative error bar is an error.
func WriteResults(path string, results []refine.Result) error {
	return Replace(path, func(w io.Writer) error {
		seen := map[string]bool{}
		for i, r := range results {
			switch {
			case r.Name == "":
				return fmt.Errorf("result %d has no name", i)
			case seen[r.Name]:
				return fmt.Errorf("two results are named %q", r.Name)
			case r.Error < 0:
				return fmt.Errorf("result %q has the error bar %v; want a number ≥ 0, or NaN for none", r.Name, r.Error)
			}
			seen[r.Name] = true
		}
		if results == nil {
			results = []refine.Result{} // [] and not null
		}
		e := json.NewEncoder(w)
		e.SetEscapeHTML(false)
		e.SetIndent("", "  ")
		return e.Encode(results)
	})
}

// ReadResults reads results from a JSON file in the form of WriteResults. A
// null is read as NaN.
func ReadResults(path string) ([]refine.Result, error) {
	text, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("store: %w", err)
	}
	results, err := decodeResults(text)
	if err != nil {
		return nil, fmt.Errorf("store: %s: %w", path, err)
	}
	return results, nil
}

func decodeResults(text []byte) ([]refine.Result, error) {
	d := json.NewDecoder(bytes.NewReader(text))
	var results []refine.Result
	if err := d.Decode(&results); err != nil {
		return nil, fmt.Errorf("results: %w", err)
	}
	if _, err := d.Token(); err != io.EOF {
		return nil, fmt.Errorf("results: more text after the list")
	}
	for i, r := range results {
		if r.Name == "" {
			return nil, fmt.Errorf("result %d has no name", i)
		}
	}
	return results, nil
}
