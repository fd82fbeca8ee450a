package main

import (
	"context"
	"fmt"
	"net"
	"net/http"
	"os/exec"
	"runtime"
	"time"

	"github.com/spf13/pflag"

	"tautramp/cmd/tautramp/page"
)

// pageAddress is where the page is, if nobody asks for another place. Where it
// is taken, any free one is.
const pageAddress = "127.0.0.1:7463"

// serveFlags say where the page is to be seen.
type serveFlags struct {
	listen string
	noOpen bool
}

func (f *serveFlags) add(fs *pflag.FlagSet) {
	fs.StringVar(&f.listen, "listen", "", "show the page to other computers too, at this address, such as :7463; the address that is printed holds a key")
	fs.BoolVar(&f.noOpen, "no-open", false, "do not open the browser")
}

// pageServer is a page that is being served.
type pageServer struct {
	*page.Server
	http   *http.Server
	ended  chan error // one error, when serving ends
	cancel func()
}

// start serves a page and says where. End it with close.
func (f *serveFlags) start(ctx context.Context, deps func(page.Access) page.Deps, e env) (*pageServer, error) {
	listener, access, err := f.open()
	if err != nil {
		return nil, err
	}
	ctx, cancel := context.WithCancel(ctx)
	s := &pageServer{Server: page.New(ctx, deps(access)), ended: make(chan error, 1), cancel: cancel}
	s.http = &http.Server{Handler: s.Server, ReadHeaderTimeout: 5 * time.Second, IdleTimeout: time.Minute, MaxHeaderBytes: 32 << 10}
	go func() { s.ended <- s.http.Serve(listener) }()
	return s, f.announce(listener.Addr(), access, e)
}

// close ends the visits first, then what the browsers hold open.
func (s *pageServer) close() error {
	s.cancel()
	s.Wait()
	ctx, stop := context.WithTimeout(context.Background(), 2*time.Second)
	defer stop()
	if s.http.Shutdown(ctx) != nil {
		return s.http.Close()
	}
	return nil
}

// open opens the address. One beyond this computer gets a key.
func (f *serveFlags) open() (net.Listener, page.Access, error) {
	if f.listen == "" {
		listener, err := net.Listen("tcp", pageAddress)
		if err != nil {
			listener, err = net.Listen("tcp", "127.0.0.1:0")
		}
		return listener, page.Access{}, err
	}
	listener, err := net.Listen("tcp", f.listen)
	if err != nil {
		return nil, page.Access{}, &usageError{fmt.Sprintf("--listen %s: %v", f.listen, err)}
	}
	if listener.Addr().(*net.TCPAddr).IP.IsLoopback() {
		return listener, page.Access{}, nil
	}
	access := page.Access{Token: page.NewToken()}
	if host, _, err := net.SplitHostPort(f.listen); err == nil && host != "" && net.ParseIP(host) == nil {
		access.Names = []string{host}
	}
	return listener, access, nil
}

// announce prints where the page is, and opens the browser.
func (f *serveFlags) announce(at net.Addr, access page.Access, e env) error {
	tcp := at.(*net.TCPAddr)
	own := fmt.Sprintf("http://127.0.0.1:%d/", tcp.Port)
	if !tcp.IP.IsUnspecified() {
		own = "http://" + tcp.String() + "/"
	}
	addresses := []string{own}
	if access.Token != "" {
		addresses = nil
		for _, ip := range ownAddresses(tcp.IP) {
			addresses = append(addresses, fmt.Sprintf("http://%s/?key=%s", net.JoinHostPort(ip, fmt.Sprint(tcp.Port)), access.Token))
		}
		own += "?key=" + access.Token
	}
	for _, a := range addresses {
		if _, err := fmt.Fprintf(e.stdout, "page: %s\n", a); err != nil {
			return err
		}
	}
	if access.Token != "" {
		if _, err := fmt.Fprintln(e.stderr, "Whoever has that address can work the page; the key is shown here once. Everyone on the network can read along: it is plain HTTP."); err != nil {
			return err
		}
	}
	if f.noOpen || e.browse == nil {
		return nil
	}
	if err := e.browse(own); err != nil {
		_, err = fmt.Fprintf(e.stderr, "no browser opened (%v): open the address above yourself\n", err)
		return err
	}
	return nil
}

// ownAddresses are those by which other computers may reach this one.
func ownAddresses(bound net.IP) []string {
	if !bound.IsUnspecified() {
		return []string{bound.String()}
	}
	var out []string
	all, err := net.InterfaceAddrs()
	for _, a := range all {
		if n, ok := a.(*net.IPNet); ok && n.IP.IsGlobalUnicast() {
			out = append(out, n.IP.String())
		}
	}
	if err != nil || len(out) == 0 {
		out = []string{"127.0.0.1"}
	}
	return out
}

// browse opens an address in the system's browser.
func browse(address string) error {
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
	go func() { _ = cmd.Wait() }() // how the browser ends is its own affair
	return nil
}
