package protocol

import (
	"bytes"
	"io"
)

// Line is one line of a stream: a record, or the reason why it was refused.
type Line struct {
	// Text is the line as it came, without its LF; a CR before the LF is still
	// there, so that Parse(Text) says the same again. Of a line that is too long
	// it is the first MaxLine bytes. It is valid until the next line is read.
	Text   []byte
	Number int   // 1-based, empty lines counted
	Offset int64 // byte offset of the line's first byte in the stream
	Record Record
	Err    *SyntaxError
}

// Assembler makes lines from chunks of any size. It holds at most MaxLine bytes
// whatever comes in. The zero value is at the start of a stream. Empty lines
// are passed over (SPEC 2.9).
type Assembler struct {
	buf    [MaxLine]byte
	kept   int   // bytes of the open line in buf
	length int64 // bytes of the open line seen, also those not kept
	start  int64 // offset of the open line's first byte
	number int   // lines ended so far
}

// Feed takes the next bytes of the stream and yields every line that ends in
// them. Text is valid only during yield; the chunk may be used again after.
func (a *Assembler) Feed(chunk []byte, yield func(Line)) {
	for len(chunk) > 0 {
		line, rest, ok := a.next(chunk)
		if ok {
			yield(line)
		}
		chunk = rest
	}
}

// Flush says that the stream has ended. An open line is yielded as refused; the
// next Feed starts a new line.
func (a *Assembler) Flush(yield func(Line)) {
	if line, ok := a.flush(); ok {
		yield(line)
	}
}

// next takes one line, or all that is left; ok is false when none ended or the
// one that did was empty.
func (a *Assembler) next(chunk []byte) (line Line, rest []byte, ok bool) {
	end := bytes.IndexByte(chunk, '\n')
	if end < 0 {
		a.keep(chunk)
		return Line{}, nil, false
	}
	text, rest := chunk[:end], chunk[end+1:]
	if a.length > 0 {
		a.keep(text)
		text = a.buf[:a.kept]
	} else {
		a.length = int64(end)
		text = text[:min(end, MaxLine)]
	}
	line = Line{Text: text[:len(text):len(text)]}
	if len(dropCR(text)) > 0 {
		line.Record, line.Err = Parse(text)
		ok = true
	}
	a.close(&line, 1)
	return line, rest, ok
}

func (a *Assembler) flush() (Line, bool) {
	if a.length == 0 {
		return Line{}, false
	}
	line := Line{Text: a.buf[:a.kept:a.kept]}
	if a.length >= MaxLine {
		line.Err = refuse(TooLong, "2.3", "more than %d bytes with the LF", MaxLine)
	} else {
		line.Err = refuse(Unfinished, "2.2", "the stream ended inside this line")
	}
	a.close(&line, 0)
	return line, true
}

func (a *Assembler) keep(part []byte) {
	a.kept += copy(a.buf[a.kept:], part)
	a.length += int64(len(part))
}

// close stamps the line and opens the next one; ends is the length of its line
// end in the stream.
func (a *Assembler) close(line *Line, ends int64) {
	a.number++
	line.Number, line.Offset = a.number, a.start
	if line.Err != nil {
		line.Err.Line, line.Err.Offset = a.number, a.start
	}
	a.start += a.length + ends
	a.kept, a.length = 0, 0
}

// Scanner reads lines from a stream: Scan, then Line, until Scan is false;
// Err is about the stream alone. A refused line is a Line with Err set, and
// scanning goes on.
type Scanner struct {
	r       io.Reader
	a       Assembler
	buf     [4096]byte
	chunk   []byte // read, not yet taken
	line    Line
	err     error
	stopped bool
}

// NewScanner returns a scanner at the start of r.
func NewScanner(r io.Reader) *Scanner { return &Scanner{r: r} }

// maxEmptyReads is how often in a row a reader may return nothing.
const maxEmptyReads = 100

// Scan goes to the next line. It is false at the end of the stream or at an
// error of it, after the open line has been handed out as unfinished.
func (s *Scanner) Scan() bool {
	empty := 0
	for {
		for len(s.chunk) > 0 {
			line, rest, ok := s.a.next(s.chunk)
			s.chunk = rest
			if ok {
				s.line = line
				return true
			}
		}
		if s.stopped {
			line, ok := s.a.flush()
			s.line = line
			return ok
		}
		n, err := s.r.Read(s.buf[:])
		s.chunk = s.buf[:n]
		if empty++; n > 0 {
			empty = 0
		}
		if err == nil && empty > maxEmptyReads {
			err = io.ErrNoProgress
		}
		if err != nil {
			s.stopped, s.err = true, err
		}
	}
}

// Line is the line that Scan went to; its Text is valid until the next Scan.
func (s *Scanner) Line() Line { return s.line }

// Err is the error that ended the stream, nil at its ordinary end.
func (s *Scanner) Err() error {
	if s.err == io.EOF {
		return nil
	}
	return s.err
}
