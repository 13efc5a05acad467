// Command tayra drafts a starting dose and interval for an animal that has no
// published dose, by metabolic scaling from an animal that has one, and writes
// the worksheet for a licensed veterinarian to judge.
//
//   - Standard output carries results only; what is wrong goes to standard
//     error, one line a fault: tayra: FILE:LINE:COLUMN: field: what is wrong;
//     what to write instead.
//   - A file is written whole or not at all, and an existing one only with
//     --force.
//   - Nothing here computes or formats a dose: a command turns words into the
//     values of package dose, and errors into exit statuses.
package main

import (
	"io"
	"os"
)

func main() {
	os.Exit(run(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}

// run is the whole program but for the process around it.
func run(args []string, stdin io.Reader, stdout, stderr io.Writer) int {
	root := newRoot()
	root.SetArgs(args)
	root.SetIn(stdin)
	root.SetOut(stdout)
	root.SetErr(stderr)
	return report(root.Execute(), stderr)
}
