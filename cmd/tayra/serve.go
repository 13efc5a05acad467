package main

import (
	"context"
	"errors"
	"fmt"
	"net"
	"net/http"
	"os/exec"
	"os/signal"
	"runtime"
	"strconv"
	"syscall"
	"time"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/cmd/tayra/page"
)

func serveCommand() *cobra.Command {
	var port int
	var open bool
	cmd := &cobra.Command{
		Use:   "serve",
		Short: "Fill in a worksheet in the browser, on this computer only",
		Long: `Serve a page on this computer (127.0.0.1) on which a worksheet is filled in, and
print its address. The page does what the commands draft, check and batch do.
Nothing is stored, and nothing leaves the computer: a case is kept by saving its
file or its worksheet. It runs until it is stopped with Ctrl-C.`,
		Example: `tayra serve
tayra serve --open`,
		Annotations: map[string]string{"usage": "tayra serve [flags]", runsOn: "yes"},
		Args:        arguments(),
		RunE: func(cmd *cobra.Command, _ []string) error {
			if port < 0 || port > 65535 {
				return &usageError{"--port", strconv.Itoa(port) + " is no port", "write a number from 1024 to 65535, or leave it out"}
			}
			ctx, stop := signal.NotifyContext(context.Background(), syscall.SIGINT, syscall.SIGTERM)
			defer stop()
			return serve(ctx, port, func(address string) {
				fmt.Fprintf(cmd.OutOrStdout(), "%s\n", address)
				if !open {
					return
				}
				if err := openBrowser(address); err != nil {
					warn(cmd.ErrOrStderr(), "--open", "the browser cannot be opened ("+err.Error()+"): open the address yourself")
				}
			})
		},
	}
	inGroup(cmd, "Flags", func(flags *pflag.FlagSet) {
		flags.IntVar(&port, "port", 0, "`NUMBER` of the port; any free one unless given")
		flags.BoolVar(&open, "open", false, "open the page in the browser")
	})
	return cmd
}

// serve runs the page until ctx ends, and then lets what is being answered
// finish. ready is told the address once it can be opened.
func serve(ctx context.Context, port int, ready func(address string)) error {
	listener, err := net.Listen("tcp4", net.JoinHostPort("127.0.0.1", strconv.Itoa(port)))
	if err != nil {
		if errors.Is(err, syscall.EADDRINUSE) || errors.Is(err, syscall.EACCES) {
			return &usageError{"--port", "port " + strconv.Itoa(port) + " is not free", "write another number, or leave it out"}
		}
		return err
	}
	host := listener.Addr().String()
	srv := &http.Server{Handler: page.Handler(host)}
	page.Limits(srv)
	ended := make(chan error, 1)
	go func() { ended <- srv.Serve(listener) }()
	ready("http://" + host + "/")
	select {
	case err := <-ended:
		return err
	case <-ctx.Done():
	}
	// A table may still be worked out; it is given a moment, no more.
	grace, cancel := context.WithTimeout(context.Background(), 3*time.Second)
	defer cancel()
	if srv.Shutdown(grace) != nil {
		srv.Close()
	}
	return nil
}

// openBrowser asks the system to open an address, and does not wait for it.
func openBrowser(address string) error {
	name, args := "xdg-open", []string{address}
	switch runtime.GOOS {
	case "darwin":
		name = "open"
	case "windows":
		name, args = "rundll32", []string{"url.dll,FileProtocolHandler", address}
	}
	cmd := exec.Command(name, args...)
	if err := cmd.Start(); err != nil {
		return err
	}
	go cmd.Wait()
	return nil
}
