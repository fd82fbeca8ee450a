package page

import (
	"bufio"
	"fmt"
	"net"
	"net/http/httptest"
	"runtime"
	"strings"
	"testing"
	"time"

	"tautramp/cmd/tautramp/visit"
)

func TestViewerGetsTheNewestOnly(t *testing.T) {
	h := newHub()
	h.publish(nowTopic, []byte("0"))
	v := h.join()
	for i := 1; i <= 100; i++ {
		h.publish(nowTopic, fmt.Append(nil, i))
	}
	<-v.wake
	if got := h.next(v, nowTopic); string(got) != "100" || h.skipped.Load() != 100 {
		t.Errorf("%q, skipped %d", got, h.skipped.Load())
	}
	if h.next(v, nowTopic) != nil || h.next(v, deskTopic) != nil {
		t.Error("the same again")
	}
	h.leave(v)
	h.publish(nowTopic, nil)
	select {
	case <-v.wake:
		t.Error("a viewer that left is woken")
	default:
	}
}

func TestTooManyViewers(t *testing.T) {
	h := newHub()
	for range mostViewers {
		if h.join() == nil {
			t.Fatal("refused")
		}
	}
	if h.join() != nil {
		t.Error("one more is let in")
	}
}

// look opens the stream of a page as a browser does.
func look(t testing.TB, address string) (net.Conn, *bufio.Reader) {
	t.Helper()
	conn, err := net.Dial("tcp", strings.TrimPrefix(address, "http://"))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { conn.Close() })
	fmt.Fprintf(conn, "GET /live HTTP/1.1\r\nHost: %s\r\n\r\n", conn.RemoteAddr())
	return conn, bufio.NewReader(conn)
}

func awaitLine(t testing.TB, r *bufio.Reader, holds string) {
	t.Helper()
	for {
		line, err := r.ReadString('\n')
		if err != nil {
			t.Fatalf("before %q: %v", holds, err)
		}
		if strings.Contains(line, holds) {
			return
		}
	}
}

// TestStalledViewerCostsNothing: one viewer reads nothing at all, so that its
// line fills up. The visit's statuses go on without waiting, the other viewer
// gets the newest, and what the first one missed is counted.
func TestStalledViewerCostsNothing(t *testing.T) {
	s := serve(t, Access{})
	server := httptest.NewServer(s.Server)
	t.Cleanup(server.Close)
	show := s.begin()
	look(t, server.URL)
	_, good := look(t, server.URL)
	awaitLine(t, good, "event: desk")
	long := visit.Status{AlarmText: strings.Repeat("long ", 20000)} // fills the line of one that does not read
	const n = 300
	slowest := time.Duration(0)
	read := make(chan struct{})
	go func() { awaitLine(t, good, `"cycle":300,`); close(read) }()
	for i := 1; i <= n; i++ {
		long.Cycle = i
		begun := time.Now()
		show(long)
		slowest = max(slowest, time.Since(begun))
		time.Sleep(time.Millisecond)
	}
	<-read
	if slowest > 500*time.Millisecond {
		t.Errorf("a status took %v", slowest)
	}
	if testing.Short() {
		return
	}
	for end := time.Now().Add(3 * lineWait); s.hub.dropped.Load() == 0; time.Sleep(10 * time.Millisecond) {
		if time.Now().After(end) {
			t.Fatal("a viewer that takes nothing is never let go")
		}
		show(long)
	}
	for end := time.Now().Add(5 * time.Second); s.hub.skipped.Load() < n/2; time.Sleep(time.Millisecond) {
		if time.Now().After(end) {
			t.Fatalf("of %d statuses, %d are counted as missed", n, s.hub.skipped.Load())
		}
	}
}

func TestStreamEndsWithTheProgramAndBeatsBefore(t *testing.T) {
	s := serve(t, Access{})
	server := httptest.NewServer(s.Server)
	t.Cleanup(server.Close)
	conn, r := look(t, server.URL)
	awaitLine(t, r, `"program":"test"`)
	awaitLine(t, r, "event: beat")
	conn.Close()
	for end := time.Now().Add(5 * time.Second); ; time.Sleep(time.Millisecond) {
		s.hub.mu.Lock()
		n := len(s.hub.viewers)
		s.hub.mu.Unlock()
		if n == 0 {
			return
		}
		if time.Now().After(end) {
			t.Fatalf("%d viewers are left", n)
		}
	}
}

// BenchmarkFourViewers is the server's cost of one status for four viewers on
// TCP; at 10 statuses a second a core's share is 10 times that.
func BenchmarkFourViewers(b *testing.B) {
	ctx := b.Context()
	f := &fake{}
	s := New(ctx, f.deps())
	server := httptest.NewServer(s)
	b.Cleanup(server.Close)
	lines := make(chan struct{}, 64)
	for range 4 {
		_, r := look(b, server.URL)
		awaitLine(b, r, "event: desk")
		go func() {
			for {
				line, err := r.ReadString('\n')
				if err != nil {
					return
				}
				if strings.HasPrefix(line, "event: now") {
					lines <- struct{}{}
				}
			}
		}()
	}
	status := visit.Status{SettingSI: 5e6, StressPa: 65e6, Link: []string{"", ""}, Next: "pump up slowly", Phase: "loading"}
	runtime.GC()
	for b.Loop() {
		s.desk.show(status)
		for range 4 {
			<-lines
		}
	}
}
