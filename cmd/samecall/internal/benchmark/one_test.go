//go:build unix

package main

import (
	"os"
	"os/exec"
	"testing"
)

func TestMain(m *testing.M) {
	if len(os.Args) > 2 && os.Args[1] == one {
		os.Exit(measureOne(os.Args[2:]))
	}
	os.Exit(m.Run())
}

// The memory of a process is its own, not that of the one that measures it.
func TestMemoryIsItsOwn(t *testing.T) {
	program, err := exec.LookPath("true")
	if err != nil {
		t.Skip(err)
	}
	held := make([]byte, 200<<20)
	for i := 0; i < len(held); i += 1 << 10 {
		held[i] = 1
	}
	took, memory, err := timed([]string{program})
	if err != nil || took <= 0 || memory <= 0 || memory > 50<<20 {
		t.Errorf("took %v, held %d bytes beside %d here; %v", took, memory, len(held), err)
	}
	if _, _, err := timed([]string{program + "-not-there"}); err == nil {
		t.Error("a process that cannot be started is no error")
	}
}
