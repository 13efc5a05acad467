package main

import (
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"testing"
	"time"
)

// bareProgram is the least that a Go program can do: print one line.
const bareProgram = `package main

import "os"

func main() { os.Stdout.WriteString("bare\n") }
`

// BenchmarkStart runs whole commands beside a Go program that prints one line,
// both static, turn by turn, and reports medians in ms and their ratio. The
// machine's load falls on both alike.
//
//	go test ./cmd/tayra -run '^$' -bench Start -benchtime 400x
func BenchmarkStart(b *testing.B) {
	dir := b.TempDir()
	build := func(out, pkg string) string {
		out = filepath.Join(dir, out)
		cmd := exec.Command("go", "build", "-trimpath", "-ldflags", "-s -w", "-o", out, pkg)
		cmd.Env = append(os.Environ(), "CGO_ENABLED=0")
		if msg, err := cmd.CombinedOutput(); err != nil {
			b.Fatalf("%v\n%s", err, msg)
		}
		return out
	}
	src := filepath.Join(dir, "bare.go")
	if err := os.WriteFile(src, []byte(bareProgram), 0o666); err != nil {
		b.Fatal(err)
	}
	bare, tayra := build("bare", src), build("tayra", ".")
	for _, k := range []struct {
		name string
		args []string
	}{
		{"draft", []string{"draft", "../../testdata/anteater.yaml"}},
		{"check", []string{"check", "../../testdata/check.yaml"}},
		{"rate", []string{"rate", "giant anteater", "41 kg"}},
		{"species", []string{"species", "giant anteater"}},
	} {
		b.Run(k.name, func(b *testing.B) {
			var ours, theirs []time.Duration
			run := func(name string, args ...string) time.Duration {
				cmd := exec.Command(name, args...)
				start := time.Now()
				err := cmd.Run()
				d := time.Since(start)
				if _, ok := err.(*exec.ExitError); err != nil && !ok {
					b.Fatal(err)
				}
				return d
			}
			for b.Loop() {
				theirs = append(theirs, run(bare))
				ours = append(ours, run(tayra, k.args...))
			}
			median := func(d []time.Duration) float64 {
				slices.Sort(d)
				return float64(d[len(d)/2].Microseconds()) / 1000
			}
			b.ReportMetric(median(ours), "ms")
			b.ReportMetric(median(theirs), "bare-ms")
			b.ReportMetric(median(ours)/median(theirs), "ratio")
			b.ReportMetric(0, "ns/op")
		})
	}
}
