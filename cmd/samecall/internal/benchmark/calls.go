package main

import (
	"bufio"
	"fmt"
	"math/rand/v2"
	"os"
	"strconv"
)

const (
	parts      = 1_000_000
	appraisers = 5
	trials     = 2
)

// order is the order of the rows of a calls file: for each position, which
// part, and which of the ten passes through the parts.
type order struct {
	name string
	rows func(yield func(part, pass int))
}

var orders = []order{
	{"by part", func(yield func(part, pass int)) {
		for part := range parts {
			for pass := range appraisers * trials {
				yield(part, pass)
			}
		}
	}},
	{"by trial", func(yield func(part, pass int)) {
		for pass := range appraisers * trials {
			for part := range parts {
				yield(part, pass)
			}
		}
	}},
	// As a blind study is run: each pass in a random order of its own.
	{"in run order", func(yield func(part, pass int)) {
		rng := rand.New(rand.NewPCG(7, 7))
		for pass := range appraisers * trials {
			for _, part := range rng.Perm(parts) {
				yield(part, pass)
			}
		}
	}},
}

// writeCalls writes ten million invented calls and returns the size of the
// file: one part in three is bad, one call in twenty wrong.
func writeCalls(name string, o order) (int64, error) {
	f, err := os.Create(name)
	if err != nil {
		return 0, err
	}
	w := bufio.NewWriterSize(f, 1<<20)
	rng := rand.New(rand.NewPCG(1, 1))
	if _, err := fmt.Fprintln(w, "part,appraiser,trial,call,reference"); err != nil {
		return 0, err
	}
	line := make([]byte, 0, 64)
	o.rows(func(part, pass int) {
		good := part%3 > 0
		call := good != (rng.IntN(20) == 0)
		line = strconv.AppendInt(line[:0], int64(part+1), 10)
		line = append(line, ",st"...)
		line = append(line, byte('1'+pass%appraisers), ',', byte('1'+pass/appraisers), ',')
		line = append(line, map[bool]string{true: "accept", false: "reject"}[call]...)
		line = append(line, ',', map[bool]byte{true: '1', false: '0'}[good], '\n')
		if err == nil {
			_, err = w.Write(line)
		}
	})
	if err == nil {
		err = w.Flush()
	}
	if err != nil {
		return 0, err
	}
	info, err := f.Stat()
	if err != nil {
		return 0, err
	}
	return info.Size(), f.Close()
}
