package main

import (
	"fmt"
	"io"
	"os"
	"os/exec"
	"strings"
	"testing"
	"unicode/utf8"

	"golang.org/x/sys/unix"
)

// onTerminal runs the program with a terminal of some columns as its standard
// output, and gives what the terminal was sent.
func onTerminal(t *testing.T, columns uint16, environment []string, args ...string) string {
	t.Helper()
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
	if err := unix.IoctlSetWinsize(int(slave.Fd()), unix.TIOCSWINSZ, &unix.Winsize{Row: 50, Col: columns}); err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command("tayra", args...)
	cmd.Stdout = slave
	cmd.Env = append(os.Environ(), environment...)
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	slave.Close()
	text, _ := io.ReadAll(master) // ends with an error when the program has closed the terminal
	if err := cmd.Wait(); err != nil {
		t.Fatal(err)
	}
	return strings.ReplaceAll(string(text), "\r\n", "\n")
}

// TestColour: a terminal gets colour, unless it is asked not to or cannot.
func TestColour(t *testing.T) {
	draft := []string{"draft", "../../testdata/anteater.yaml", "--quiet"}
	plain, err := exec.Command("tayra", draft...).Output()
	if err != nil {
		t.Fatal(err)
	}
	if strings.Contains(string(plain), "\x1b") {
		t.Error("colour off a terminal")
	}
	coloured := onTerminal(t, 80, []string{"TERM=xterm", "NO_COLOR="}, draft...)
	if !strings.Contains(coloured, "\x1b[") {
		t.Error("no colour on a terminal")
	}
	for _, environment := range []string{"NO_COLOR=1", "TERM=dumb"} {
		if text := onTerminal(t, 80, []string{"TERM=xterm", "NO_COLOR=", environment}, draft...); text != string(plain) {
			t.Errorf("with %s the text is not the plain one:\n%q", environment, text)
		}
	}
}

// TestTerminalWidth: the text follows the terminal, within reason.
func TestTerminalWidth(t *testing.T) {
	for _, c := range []struct {
		terminal uint16
		want     int
	}{{72, 72}, {90, 90}, {300, widestText}, {20, narrowestText}, {0, ordinaryWidth}} {
		text := onTerminal(t, c.terminal, []string{"NO_COLOR=1"}, "draft", "../../testdata/anteater.yaml", "--quiet")
		widest := 0
		for line := range strings.Lines(text) {
			widest = max(widest, utf8.RuneCountInString(strings.TrimRight(line, "\n")))
		}
		if widest != c.want {
			t.Errorf("on %d columns the widest line has %d, want %d", c.terminal, widest, c.want)
		}
	}
}
