package main

import (
	"os"
	"path/filepath"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// The files in the repository are what the generator draws, and nothing is
// there that it does not draw.
func TestFilesAreDrawn(t *testing.T) {
	folders, err := os.ReadDir(filepath.Join("..", "studies"))
	if err != nil {
		t.Fatal(err)
	}
	if len(folders) != len(files) {
		t.Errorf("%d folders for %d generators", len(folders), len(files))
	}
	for name, draw := range files {
		t.Run(name, func(t *testing.T) {
			want, err := os.ReadFile(filepath.Join("..", "studies", name, "calls.csv"))
			if err != nil {
				t.Fatal(err)
			}
			if diff := cmp.Diff(string(want), string(draw())); diff != "" {
				t.Errorf("run go generate in the folder above (- file, + drawn):\n%s", diff)
			}
		})
	}
}
