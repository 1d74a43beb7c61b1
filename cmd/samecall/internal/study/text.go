package study

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"unicode/utf8"

	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
	"golang.org/x/text/transform"
)

const (
	chunkSize = 512 << 10 // a chunk stays in a core's own cache while it is parsed
	maxLine   = 16 << 20
)

// chunk is a piece of the text in UTF-8 that ends at a line end or at the end
// of the text. Lines end in \n or \r\n.
type chunk struct {
	data []byte
	line int // number of the first line
}

// chunker cuts text into chunks.
//
// The encoding follows from the text itself as it goes by, so that standard
// input need not be kept: a byte order mark or NUL bytes tell UTF-16; else the
// first character beyond ASCII tells UTF-8 from Windows-1252, of which
// Latin-1 is a part.
type chunker struct {
	in    io.Reader
	tail  []byte // read, but not yet part of a chunk
	line  int    // lines in the chunks so far
	utf8  bool   // a character beyond ASCII was valid UTF-8
	latin bool   // one was not
	done  bool
	size  int         // of a chunk, as far as lines allow
	free  chan []byte // buffers to use again
}

// newChunker looks at the first bytes of the text for its encoding. The error
// is a textError where they are no text.
func newChunker(in io.Reader, size int) (*chunker, error) {
	head := make([]byte, 4096)
	n, err := io.ReadFull(in, head)
	if err != nil && err != io.EOF && err != io.ErrUnexpectedEOF {
		return nil, err
	}
	head = head[:n]
	c := &chunker{size: size, free: make(chan []byte, 8)}
	order, isUTF16 := utf16Order(head)
	switch {
	case isUTF16:
	case bytes.HasPrefix(head, []byte("\xef\xbb\xbf")):
		head, c.utf8 = head[3:], true
	case bytes.HasPrefix(head, []byte("\xd0\xcf\x11\xe0")):
		return nil, &textError{Text: "this is an old .xls workbook or one with a password; save it as .xlsx without a password, or as CSV"}
	case bytes.IndexByte(head, 0) >= 0:
		return nil, &textError{Text: "this is no text file; expected calls as CSV or .xlsx"}
	}
	c.in = io.MultiReader(bytes.NewReader(head), in)
	if isUTF16 {
		c.in = transform.NewReader(c.in, unicode.UTF16(order, unicode.UseBOM).NewDecoder())
	}
	return c, nil
}

// textError says what makes bytes no text.
type textError Problem

func (e *textError) Error() string { return Problem(*e).String() }

// utf16Order tells UTF-16 by its byte order mark, or by NULs in every second
// byte where most of the text is ASCII.
func utf16Order(head []byte) (unicode.Endianness, bool) {
	switch {
	case bytes.HasPrefix(head, []byte("\xff\xfe")):
		return unicode.LittleEndian, true
	case bytes.HasPrefix(head, []byte("\xfe\xff")):
		return unicode.BigEndian, true
	}
	var nul [2]int
	for i, b := range head {
		if b == 0 {
			nul[i&1]++
		}
	}
	switch pairs := len(head) / 2; {
	case nul[0] == 0 && nul[1] > pairs/2:
		return unicode.LittleEndian, true
	case nul[1] == 0 && nul[0] > pairs/2:
		return unicode.BigEndian, true
	}
	return unicode.LittleEndian, false
}

// next returns the next chunk, and io.EOF after the last one.
func (c *chunker) next() (chunk, error) {
	if c.done {
		return chunk{}, io.EOF
	}
	buf := append(c.buffer(), c.tail...)
	for {
		n, err := readUpTo(c.in, buf[len(buf):cap(buf)])
		buf = buf[:len(buf)+n]
		if err != nil && err != io.EOF {
			return chunk{}, err
		}
		atEnd := err == io.EOF
		endLines(buf, atEnd)
		cut := len(buf)
		if !atEnd {
			cut = bytes.LastIndexByte(buf, '\n') + 1
		}
		if cut > 0 || atEnd {
			c.tail, c.done = append(c.tail[:0], buf[cut:]...), atEnd
			return c.decode(buf[:cut])
		}
		if len(buf) >= maxLine {
			return chunk{}, &textError{Line: c.line + 1, Text: fmt.Sprintf("the line is longer than %d bytes; is this a table of calls?", maxLine)}
		}
		buf = append(make([]byte, 0, c.size+2*cap(buf)), buf...)
	}
}

func (c *chunker) buffer() []byte {
	select {
	case b := <-c.free:
		return b[:0]
	default:
		return make([]byte, 0, c.size)
	}
}

// release gives back the memory of a chunk.
func (c *chunker) release(k chunk) {
	if cap(k.data) < c.size/2 { // what is left behind a header may be short
		return
	}
	select {
	case c.free <- k.data:
	default:
	}
}

// readUpTo fills b as far as the input goes. Other than io.ReadFull it
// returns io.EOF with the last bytes.
func readUpTo(in io.Reader, b []byte) (n int, err error) {
	for n < len(b) && err == nil {
		var m int
		m, err = in.Read(b[n:])
		n += m
	}
	return n, err
}

// endLines turns each carriage return that has no line feed after it into a
// line feed. What follows the last byte is known only at the end.
func endLines(b []byte, atEnd bool) {
	for i := 0; ; i++ {
		j := bytes.IndexByte(b[i:], '\r')
		if j < 0 {
			return
		}
		i += j
		if i+1 == len(b) {
			if atEnd {
				b[i] = '\n'
			}
			return
		}
		if b[i+1] != '\n' {
			b[i] = '\n'
		}
	}
}

// decode makes UTF-8 of the bytes of one chunk.
func (c *chunker) decode(b []byte) (chunk, error) {
	k := chunk{data: b, line: c.line + 1}
	c.line += bytes.Count(b, []byte{'\n'})
	if nul := bytes.IndexByte(b, 0); nul >= 0 {
		return k, &textError{
			Line: k.line + bytes.Count(b[:nul], []byte{'\n'}), Found: "the byte 0x0", Expected: "text",
			Text: "the file is damaged, or no table of calls; save it again as CSV",
		}
	}
	i := beyondASCII(b)
	switch {
	case i < 0:
		return k, nil
	case c.latin || !c.utf8 && !startsUTF8(b[i:]):
		c.latin = true
		if j := alsoUTF8(b[i:]); j >= 0 {
			_, n := utf8.DecodeRune(b[i+j:])
			return k, &textError{
				Line: k.line + bytes.Count(b[:i+j], []byte{'\n'}), Found: fmt.Sprintf("the bytes %#x, a character in UTF-8", b[i+j:i+j+n]),
				Expected: "Windows-1252, as the text before is", Text: "save the file in one encoding, UTF-8 at best",
			}
		}
		var err error
		k.data, err = charmap.Windows1252.NewDecoder().Bytes(b)
		return k, err
	}
	c.utf8 = true
	if utf8.Valid(b[i:]) {
		return k, nil
	}
	for startsUTF8(b[i:]) {
		_, n := utf8.DecodeRune(b[i:])
		i += n
	}
	return k, &textError{
		Line: k.line + bytes.Count(b[:i], []byte{'\n'}), Found: fmt.Sprintf("the byte %#x", b[i]), Expected: "UTF-8, as the text before is",
		Text: "save the file in one encoding, UTF-8 at best",
	}
}

// alsoUTF8 returns the index of a character that is UTF-8 beyond doubt, in text
// that is not, or −1. A letter and a sign, as É» is, may happen to be UTF-8; such
// two bytes count where they begin with Â or Ã (Latin letters and signs in
// UTF-8), and else where another one follows.
func alsoUTF8(b []byte) int {
	for i := 0; i < len(b); {
		if b[i] < utf8.RuneSelf {
			i++
			continue
		}
		r, n := utf8.DecodeRune(b[i:])
		if r != utf8.RuneError && (n > 2 || b[i] == 0xc2 || b[i] == 0xc3 || i+n < len(b) && b[i+n] >= utf8.RuneSelf && startsUTF8(b[i+n:])) {
			return i
		}
		i += n
	}
	return -1
}

func startsUTF8(b []byte) bool {
	r, n := utf8.DecodeRune(b)
	return r != utf8.RuneError || n != 1
}

// beyondASCII returns the index of the first byte that is not ASCII, or −1.
func beyondASCII(b []byte) int {
	i := 0
	for ; i+8 <= len(b); i += 8 {
		if binary.LittleEndian.Uint64(b[i:])&0x8080808080808080 != 0 {
			break
		}
	}
	for ; i < len(b); i++ {
		if b[i] >= utf8.RuneSelf {
			return i
		}
	}
	return -1
}

// chunkReader is the text from one chunk on, for readers that want a stream.
type chunkReader struct {
	*chunker
	now  chunk
	left []byte
}

func (r *chunkReader) Read(p []byte) (int, error) {
	for len(r.left) == 0 {
		r.release(r.now)
		var err error
		if r.now, err = r.next(); err != nil {
			return 0, err
		}
		r.left = r.now.data
	}
	n := copy(p, r.left)
	r.left = r.left[n:]
	return n, nil
}

// problemOf turns the error of a chunker into a problem of the data, where it
// is one.
func problemOf(err error) (Problem, bool) {
	var e *textError
	if !errors.As(err, &e) {
		return Problem{}, false
	}
	return Problem(*e), true
}
