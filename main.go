// Lossbook keeps the loss budget of a DC-DC converter: it serves a web page
// and an API on this machine alone.
package main

import (
	"context"
	"embed"
	"errors"
	"flag"
	"fmt"
	"io"
	"io/fs"
	"log/slog"
	"net"
	"net/http"
	"net/netip"
	"os"
	"os/signal"
	"syscall"
	"time"

	"github.com/adrg/xdg"

	"lossbook/store"
	"lossbook/web"
)

// evidence is what the figures were checked against, which a page shows: the files
// that the tests read too.
//
//go:embed testdata/published testdata/measured testdata/exact
var evidence embed.FS

// The exit codes.
const (
	exitUsage   = 2 // the command line can't be read
	exitRefused = 3 // it can, but what it asks for can't be had
)

// stopTime bounds how long requests may take to finish once the program is
// told to stop; the database is closed after that.
const stopTime = 4 * time.Second

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	err := run(ctx, os.Args[1:], os.Stdout)
	stop()
	if err != nil {
		fmt.Fprintln(os.Stderr, "lossbook:", err)
		os.Exit(exitCode(err))
	}
}

// exitError is an error that asks for an exit code.
type exitError struct {
	code int
	err  error
}

func (e *exitError) Error() string { return e.err.Error() }
func (e *exitError) Unwrap() error { return e.err }

func refuse(err error) error  { return &exitError{exitRefused, err} }
func misused(err error) error { return &exitError{exitUsage, err} }

func exitCode(err error) int {
	var e *exitError
	if errors.As(err, &e) {
		return e.code
	}
	return 1
}

// run is the program: it serves until ctx ends, then finishes the requests it
// has and closes the database.
func run(ctx context.Context, args []string, stdout io.Writer) error {
	o, err := readOptions(args, stdout)
	if errors.Is(err, flag.ErrHelp) {
		return nil
	}
	if err != nil {
		return err
	}
	listener, err := listen(o.listen)
	if err != nil {
		return refuse(err)
	}
	defer listener.Close()
	data, err := open(ctx, o.data)
	if err != nil {
		return refuse(err)
	}
	return errors.Join(serve(ctx, listener, data, o, stdout), data.Close())
}

type options struct {
	listen, data string
	gallery      bool // for those who change the pages
}

func readOptions(args []string, help io.Writer) (options, error) {
	var o options
	flags := flag.NewFlagSet("lossbook", flag.ContinueOnError)
	flags.SetOutput(io.Discard)
	flags.StringVar(&o.listen, "listen", "127.0.0.1:8470", "`address` to serve at, on this machine; port 0 takes a free one")
	flags.StringVar(&o.data, "data", "", "data `file` (default: lossbook/lossbook.db in the user's data directory)")
	flags.BoolVar(&o.gallery, "gallery", false, "serve pages of awkward data at /gallery too, to judge a change of Lossbook by")
	if err := flags.Parse(args); err != nil {
		if errors.Is(err, flag.ErrHelp) {
			flags.SetOutput(help)
			flags.Usage()
		}
		return o, misused(err)
	}
	if flags.NArg() > 0 {
		return o, misused(fmt.Errorf("unexpected argument %q: the flags are -listen and -data", flags.Arg(0)))
	}
	if _, _, err := net.SplitHostPort(o.listen); err != nil {
		return o, misused(fmt.Errorf("-listen %q is not host:port, such as 127.0.0.1:8470", o.listen))
	}
	return o.located()
}

// located puts the data file where the system keeps a user's data, unless it
// was named.
func (o options) located() (options, error) {
	if o.data != "" {
		return o, nil
	}
	path, err := xdg.DataFile("lossbook/lossbook.db")
	if err != nil {
		return o, refuse(fmt.Errorf("there is no place for the data file (%w): name one with -data", err))
	}
	o.data = path
	return o, nil
}

// listen opens the port, on this machine alone: there is no key yet that could
// keep others out.
func listen(address string) (net.Listener, error) {
	host, _, err := net.SplitHostPort(address)
	if err != nil {
		return nil, err
	}
	ip, err := netip.ParseAddr(host)
	if host != "localhost" && (err != nil || !ip.IsLoopback()) {
		return nil, beyondLoopback(address)
	}
	listener, err := net.Listen("tcp", address)
	if errors.Is(err, syscall.EADDRINUSE) {
		return nil, fmt.Errorf("%s is in use, perhaps by Lossbook already: open http://%[1]s/, or take a free port with -listen 127.0.0.1:0", address)
	}
	if err != nil {
		return nil, fmt.Errorf("cannot listen at %s: %w", address, err)
	}
	if !listener.Addr().(*net.TCPAddr).IP.IsLoopback() { // a localhost that the system resolves elsewhere
		listener.Close()
		return nil, beyondLoopback(address)
	}
	return listener, nil
}

func beyondLoopback(address string) error {
	return fmt.Errorf("-listen %s would be open to other machines, and nothing keeps them from reading and changing every design: use 127.0.0.1, [::1] or localhost", address)
}

// open opens the data file and, when it is new, lays the samples into it.
func open(ctx context.Context, path string) (*store.Store, error) {
	samples, err := web.Samples()
	if err != nil {
		return nil, err
	}
	data, err := store.Open(ctx, path)
	if err != nil {
		return nil, err
	}
	if err := data.Seed(ctx, samples); err != nil {
		return nil, errors.Join(fmt.Errorf("data file %s can't take the sample designs: %w", path, err), data.Close())
	}
	return data, nil
}

// serve answers until ctx ends, and then until the requests at work are done.
func serve(ctx context.Context, listener net.Listener, data *store.Store, o options, stdout io.Writer) error {
	log := slog.New(slog.NewTextHandler(os.Stderr, nil))
	address := listener.Addr().String()
	proven, err := fs.Sub(evidence, "testdata")
	if err != nil {
		return err
	}
	handler, err := web.New(web.Config{Store: data, Log: log, Host: address, Evidence: proven, Gallery: o.gallery})
	if err != nil {
		return err
	}
	server := newServer(handler, log)
	failed := make(chan error, 1)
	go func() { failed <- server.Serve(listener) }()
	if err := data.Announce("http://" + address + "/"); err != nil {
		log.Warn("a second start will not be able to name this address", "cause", err)
	}
	fmt.Fprintf(stdout, "Lossbook at http://%s/ · data in %s\n", address, o.data)
	select {
	case err := <-failed:
		return err
	case <-ctx.Done():
		return stop(server)
	}
}

// newServer bounds how long a client may take for each part of a request, so
// that slow ones don't keep connections from others.
func newServer(handler http.Handler, log *slog.Logger) *http.Server {
	return &http.Server{
		Handler:           handler,
		ReadHeaderTimeout: 5 * time.Second,
		ReadTimeout:       30 * time.Second,
		WriteTimeout:      60 * time.Second,
		IdleTimeout:       2 * time.Minute,
		MaxHeaderBytes:    64 << 10,
		ErrorLog:          slog.NewLogLogger(log.Handler(), slog.LevelWarn),
	}
}

// stop lets the requests at work finish, and cuts those that take too long.
func stop(server *http.Server) error {
	ctx, cancel := context.WithTimeout(context.Background(), stopTime)
	defer cancel()
	err := server.Shutdown(ctx)
	if errors.Is(err, context.DeadlineExceeded) {
		return server.Close()
	}
	return err
}
