// Command generate writes the generated tables of package species into its
// data directory. Run it by "go generate ./species" after a change of a
// source table.
package main

import (
	"fmt"
	"os"
	"path/filepath"

	"tayra/species/internal/build"
)

func main() {
	files, err := build.All(os.DirFS("data"))
	if err == nil {
		for name, content := range files {
			if err = os.WriteFile(filepath.Join("data", name), content, 0o666); err != nil {
				break
			}
		}
	}
	if err != nil {
		fmt.Fprintln(os.Stderr, "generate:", err)
		os.Exit(1)
	}
}
