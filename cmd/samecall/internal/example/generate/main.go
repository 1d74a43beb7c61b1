// Command generate writes the calls of the built-in examples. It is run by go
// generate in the folder above. All data is invented: each example is drawn
// from a model that is stated with it, from a fixed start of the generator.
package main

import (
	"fmt"
	"os"
	"path/filepath"
)

// files holds what draws the calls file of each example.
var files = map[string]func() []byte{
	"bore":    bore,
	"surface": surface,
	"shade":   shade,
	"weld":    weld,
}

func main() {
	for name, draw := range files {
		if err := os.WriteFile(filepath.Join("studies", name, "calls.csv"), draw(), 0o644); err != nil {
			fmt.Fprintln(os.Stderr, "generate:", err)
			os.Exit(1)
		}
	}
}
