package main

import (
	"bytes"
	"fmt"
	"os"
	"os/exec"
	"time"
)

// one is the first argument with which the benchmark measures a single process
// and does nothing else. A process counts as its own the memory of the one that
// started it, at that moment: this one is small, and the one that wrote ten
// million calls is not.
const one = "one"

// timed runs a process and returns how long it took and the most memory it held.
func timed(args []string) (took time.Duration, memory int64, err error) {
	self, err := os.Executable()
	if err != nil {
		return 0, 0, err
	}
	var errs bytes.Buffer
	cmd := exec.Command(self, append([]string{one}, args...)...)
	cmd.Stderr = &errs
	out, err := cmd.Output()
	if err != nil {
		return 0, 0, fmt.Errorf("%w\n%s", err, errs.Bytes())
	}
	_, err = fmt.Sscan(string(out), &took, &memory)
	return took, memory, err
}

// measureOne runs a process, prints what timed returns, and returns the exit
// status.
func measureOne(args []string) int {
	cmd := exec.Command(args[0], args[1:]...)
	begun := time.Now()
	out, err := cmd.CombinedOutput()
	took := time.Since(begun)
	if err != nil {
		fmt.Fprintf(os.Stderr, "%v\n%s", err, out)
		return 1
	}
	fmt.Println(int64(took), peakMemory(cmd.ProcessState))
	return 0
}
