package main

import (
	"bufio"
	"fmt"
	"net/http"
	"os"
	"os/exec"
	"strconv"
	"strings"
	"sync/atomic"
	"testing"
	"time"
)

// BenchmarkPageWithFourViewers runs the program itself, capture and page, on a
// board that sends 100 samples a second, with four viewers, and reports the
// share of one core that its process takes.
func BenchmarkPageWithFourViewers(b *testing.B) {
	b.Chdir(b.TempDir())
	p := newPuppet(b, 1)
	p.every(10*time.Millisecond, 10)
	program := exec.CommandContext(b.Context(), "tautramp", "page", "--no-open", "--listen", "127.0.0.1:0")
	out, err := program.StdoutPipe()
	if err != nil {
		b.Fatal(err)
	}
	if err := program.Start(); err != nil {
		b.Fatal(err)
	}
	b.Cleanup(func() { _ = program.Wait() }) // killed by the context
	line, err := bufio.NewReader(out).ReadString('\n')
	if err != nil {
		b.Fatal(err)
	}
	address := strings.TrimSpace(strings.TrimPrefix(line, "page: "))
	p.begin(address)
	var statuses atomic.Int64
	for range 4 {
		answer, err := http.Get(address + "live")
		if err != nil {
			b.Fatal(err)
		}
		b.Cleanup(func() { answer.Body.Close() })
		go func() {
			for lines := bufio.NewScanner(answer.Body); lines.Scan(); {
				if lines.Text() == "event: now" {
					statuses.Add(1)
				}
			}
		}()
	}
	time.Sleep(2 * time.Second)
	const length = 10 * time.Second
	for b.Loop() {
		before, seen := ticksOf(b, program.Process.Pid), statuses.Load()
		time.Sleep(length)
		const ticksPerS = 100 // USER_HZ, the unit of /proc
		b.ReportMetric(float64(ticksOf(b, program.Process.Pid)-before)/(ticksPerS*length.Seconds())*100, "%-of-a-core")
		b.ReportMetric(float64(statuses.Load()-seen)/4/length.Seconds(), "statuses/s")
	}
}

// ticksOf is the processor time of a process, proc(5).
func ticksOf(b *testing.B, pid int) int {
	text, err := os.ReadFile(fmt.Sprintf("/proc/%d/stat", pid))
	if err != nil {
		b.Fatal(err)
	}
	fields := strings.Fields(string(text[strings.LastIndexByte(string(text), ')')+1:]))
	sum := 0
	for _, f := range fields[11:13] {
		n, err := strconv.Atoi(f)
		if err != nil {
			b.Fatal(err)
		}
		sum += n
	}
	return sum
}
