package sim

import (
	"bytes"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"strconv"
	"strings"
	"sync"
	"syscall"
	"time"

	"golang.org/x/sys/unix"
)

// Board is an image at work in a simulator.
type Board struct {
	// Line is the far end of the board's serial line. The board is held up while
	// nobody reads it: that is no board that drops lines, but time standing still.
	Line *os.File
	// Stimulus is what its sensors are told by. An AVR's time stands still until
	// the next record is known, or the stream is closed.
	Stimulus *os.File

	process *exec.Cmd
	said    bytes.Buffer // standard error; to be read after exited
	exited  chan struct{}
	err     error // of the process; set before exited is closed
	stop    sync.Once
}

// AVROptions is how an AVR is simulated.
type AVROptions struct {
	Speed  float64 // times real time; 0 means as fast as it goes
	NoiseV float64 // at the converter's input, standard deviation; 0 means 4 mV
	Seed   uint64  // of that noise
}

// StartAVR runs an image of boards/avr328 in a harness of Notes.Harness.
func StartAVR(harness, image string, o AVROptions) (*Board, error) {
	if o.NoiseV == 0 {
		o.NoiseV = 0.004
	}
	return start(harness, "-s", fmt.Sprint(o.Speed), "-d", fmt.Sprint(o.NoiseV*1e6), "-r", fmt.Sprint(o.Seed), image)
}

// StartCortexM runs an image of boards/cortexm3 in real time.
func StartCortexM(image string) (*Board, error) {
	const qemu = "qemu-system-arm"
	if err := need(qemu, qemu); err != nil {
		return nil, err
	}
	return start(qemu, "-M", "mps2-an385", "-nographic", "-monitor", "none", "-kernel", image,
		"-chardev", "socket,id=s0,fd=3", "-serial", "chardev:s0", "-chardev", "socket,id=s1,fd=4", "-serial", "chardev:s1")
}

// start runs a simulator with two sockets as descriptors 3 and 4.
func start(name string, args ...string) (*Board, error) {
	b := &Board{exited: make(chan struct{}), process: exec.Command(name, args...)}
	for _, ours := range []**os.File{&b.Line, &b.Stimulus} {
		fds, err := unix.Socketpair(unix.AF_UNIX, unix.SOCK_STREAM|unix.SOCK_CLOEXEC, 0)
		if err != nil {
			return nil, errors.Join(fmt.Errorf("starting %s: %w", name, err), b.closeEnds())
		}
		theirs := os.NewFile(uintptr(fds[1]), name)
		defer theirs.Close()
		b.process.ExtraFiles = append(b.process.ExtraFiles, theirs)
		// Non-blocking before NewFile: deadlines and Close then reach a blocked Read.
		if err := unix.SetNonblock(fds[0], true); err != nil {
			return nil, errors.Join(err, unix.Close(fds[0]), b.closeEnds())
		}
		*ours = os.NewFile(uintptr(fds[0]), name)
	}
	b.process.Stderr = &b.said
	b.process.SysProcAttr = &syscall.SysProcAttr{Pdeathsig: syscall.SIGKILL}
	if err := b.process.Start(); err != nil {
		return nil, errors.Join(fmt.Errorf("starting %s: %w", name, err), b.closeEnds())
	}
	go func() {
		defer close(b.exited)
		b.err = b.process.Wait()
	}()
	return b, nil
}

func (b *Board) closeEnds() error {
	var errs []error
	for _, f := range []*os.File{b.Line, b.Stimulus} {
		if f == nil {
			continue
		}
		if err := f.Close(); !errors.Is(err, os.ErrClosed) {
			errs = append(errs, err)
		}
	}
	return errors.Join(errs...)
}

// Exited is closed when the simulator has ended, by itself or by Stop.
func (b *Board) Exited() <-chan struct{} { return b.exited }

// Figures is what the AVR's harness says of a run; QEMU says nothing.
type Figures struct {
	SimulatedS, WallS  float64
	LatestS            float64 // most real seconds by which it fell behind its speed
	Boots, Conversions int
	Edges              int // of the driven pins
	Sent, Received     int // bytes
	WaitedCycles       int // most that a byte received has waited for its interrupt
}

// Stop ends the simulator, if it has not ended, and frees everything. Called
// again it only tells the figures again.
func (b *Board) Stop() (Figures, error) {
	var err error
	b.stop.Do(func() {
		err = b.end()
		err = errors.Join(err, b.closeEnds())
	})
	<-b.exited
	return figures(b.said.String()), err
}

func (b *Board) end() error {
	asked := false
	select {
	case <-b.exited:
	default:
		asked = true
		// It may end by itself in this instant: then there is nobody to be told.
		if err := b.process.Process.Signal(syscall.SIGTERM); err != nil && !errors.Is(err, os.ErrProcessDone) {
			return err
		}
	}
	select {
	case <-b.exited:
	case <-time.After(3 * time.Second):
		err := b.process.Process.Kill()
		<-b.exited
		return errors.Join(errors.New("the simulator did not end on SIGTERM"), err)
	}
	var exit *exec.ExitError
	if asked && errors.As(b.err, &exit) && exit.Sys().(syscall.WaitStatus).Signaled() {
		return nil
	}
	if b.err != nil {
		return fmt.Errorf("the simulator: %w\n%s", b.err, b.said.String())
	}
	return nil
}

func figures(said string) (f Figures) {
	at := strings.LastIndex(said, "simulated=")
	if at < 0 {
		return f
	}
	number := map[string]float64{}
	for _, field := range strings.Fields(said[at:]) {
		key, text, _ := strings.Cut(field, "=")
		if v, err := strconv.ParseFloat(text, 64); err == nil {
			number[key] = v
		}
	}
	return Figures{
		SimulatedS: number["simulated"], WallS: number["wall"], LatestS: number["latest"],
		Boots: int(number["boots"]), Conversions: int(number["conversions"]), Edges: int(number["edges"]),
		Sent: int(number["sent"]), Received: int(number["received"]), WaitedCycles: int(number["waited"]),
	}
}
