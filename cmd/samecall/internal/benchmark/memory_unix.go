//go:build unix

package main

import (
	"os"
	"runtime"
	"syscall"
)

// peakMemory returns the largest resident size of an ended process in bytes.
func peakMemory(p *os.ProcessState) int64 {
	u, ok := p.SysUsage().(*syscall.Rusage)
	if !ok {
		return 0
	}
	if runtime.GOOS == "darwin" { // bytes there, kilobytes elsewhere
		return int64(u.Maxrss)
	}
	return int64(u.Maxrss) * 1024
}
