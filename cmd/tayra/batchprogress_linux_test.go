package main

import (
	"bytes"
	"fmt"
	"io"
	"os"
	"os/exec"
	"strings"
	"testing"

	"golang.org/x/sys/unix"
)

// TestBatchBar: on a terminal a bar says how far the batch is, and is gone at
// the end; the counts stand alone.
func TestBatchBar(t *testing.T) {
	master, err := os.OpenFile("/dev/ptmx", os.O_RDWR|unix.O_NOCTTY, 0)
	if err != nil {
		t.Fatal(err)
	}
	defer master.Close()
	if err := unix.IoctlSetPointerInt(int(master.Fd()), unix.TIOCSPTLCK, 0); err != nil {
		t.Fatal(err)
	}
	number, err := unix.IoctlGetInt(int(master.Fd()), unix.TIOCGPTN)
	if err != nil {
		t.Fatal(err)
	}
	slave, err := os.OpenFile(fmt.Sprintf("/dev/pts/%d", number), os.O_RDWR|unix.O_NOCTTY, 0)
	if err != nil {
		t.Fatal(err)
	}
	if err := unix.IoctlSetWinsize(int(slave.Fd()), unix.TIOCSWINSZ, &unix.Winsize{Row: 50, Col: 100}); err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command("tayra", "batch", "-", "--date", "2026-11-30", "-o", "-")
	cmd.Stderr = slave
	table, err := cmd.StdinPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	slave.Close()
	if _, err := io.WriteString(table, rowsOf(600)); err != nil {
		t.Fatal(err)
	}
	// The table stays open until the bar has said that rows are written.
	var seen bytes.Buffer
	room := make([]byte, 4096)
	for {
		var n int
		n, err = master.Read(room)
		seen.Write(room[:n])
		if table != nil && strings.Contains(seen.String(), "512 rows  ") && strings.Contains(seen.String(), " rows a second") {
			table.Close()
			table = nil
		}
		if err != nil {
			break // the program has closed the terminal
		}
	}
	if err := cmd.Wait(); err != nil {
		t.Fatalf("%v %q", err, seen.String())
	}
	last := seen.String()[strings.LastIndex(seen.String(), "tayra: "):]
	if last != "tayra: 600 rows: 600 drafted, 0 stopped, 0 failed\r\n" {
		t.Errorf("the end is %q", last)
	}
}
