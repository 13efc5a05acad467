package main

import (
	"bufio"
	"bytes"
	"context"
	"errors"
	"io"
	"net"
	"net/http"
	"net/url"
	"os"
	"strconv"
	"strings"
	"syscall"
	"testing"
)

// serving runs the command until a signal ends it, and gives the address that
// it printed.
func serving(t *testing.T, args ...string) (address string, ended <-chan int) {
	t.Helper()
	out, in := io.Pipe()
	status := make(chan int, 1)
	var stderr bytes.Buffer
	go func() {
		status <- run(append([]string{"serve"}, args...), strings.NewReader(""), in, &stderr)
		in.Close()
	}()
	line, err := bufio.NewReader(out).ReadString('\n')
	if err != nil {
		t.Fatalf("no address: %v; %s", err, &stderr)
	}
	go io.Copy(io.Discard, out)
	return strings.TrimSpace(line), status
}

func TestServeAnswersOnThisMachineAndStops(t *testing.T) {
	for _, signal := range []os.Signal{syscall.SIGINT, syscall.SIGTERM} {
		address, ended := serving(t)
		u, err := url.Parse(address)
		if err != nil || u.Scheme != "http" || u.Hostname() != "127.0.0.1" || u.Port() == "" || u.Path != "/" {
			t.Fatalf("the address is %q", address)
		}
		r, err := http.Get(address)
		if err != nil {
			t.Fatal(err)
		}
		page, _ := io.ReadAll(r.Body)
		r.Body.Close()
		if r.StatusCode != 200 || !strings.Contains(string(page), "Not a prescription") {
			t.Errorf("status %d", r.StatusCode)
		}
		foreign, _ := http.NewRequest("GET", address, nil)
		foreign.Host = "rebound.example.com"
		if r, err := http.DefaultClient.Do(foreign); err != nil || r.StatusCode != http.StatusForbidden {
			t.Errorf("a foreign host is answered: %v", err)
		}
		// No other address of the machine leads to it.
		if conn, err := net.Dial("tcp", "127.0.0.2:"+u.Port()); err == nil {
			conn.Close()
			t.Error("it listens on another address too")
		}
		self, err := os.FindProcess(os.Getpid())
		if err == nil {
			err = self.Signal(signal)
		}
		if err != nil {
			t.Fatal(err)
		}
		if status := <-ended; status != exitDone {
			t.Errorf("%v: status %d", signal, status)
		}
		if _, err := http.Get(address); err == nil {
			t.Errorf("it still answers after %v", signal)
		}
	}
}

func TestServeNamesAPortThatIsTaken(t *testing.T) {
	taken, err := net.Listen("tcp4", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	defer taken.Close()
	port := taken.Addr().(*net.TCPAddr).Port
	err = serve(context.Background(), port, func(string) { t.Error("ready") })
	var usage *usageError
	if !errors.As(err, &usage) || usage.what != "--port" {
		t.Errorf("%v", err)
	}
	for _, wrong := range []string{"-1", "65536", "http", strconv.Itoa(port)} {
		var stdout, stderr bytes.Buffer
		if status := run([]string{"serve", "--port", wrong}, strings.NewReader(""), &stdout, &stderr); status != exitInput || stdout.Len() > 0 || !strings.Contains(stderr.String(), "--port") {
			t.Errorf("--port %s: status %d, %s", wrong, status, &stderr)
		}
	}
}
