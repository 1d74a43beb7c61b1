// Command samecall tells whether a pass/fail inspection can be trusted.
package main

import (
	"os"
	"os/signal"
	"syscall"

	"samecall/cmd/samecall/internal/output"
)

func main() {
	tidyWhenStopped()
	os.Exit(run(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}

// tidyWhenStopped removes unfinished files when the program is stopped by a
// signal, and ends as the shell expects: with 128 and the signal's number.
func tidyWhenStopped() {
	stop := make(chan os.Signal, 1)
	for _, s := range []os.Signal{syscall.SIGINT, syscall.SIGTERM, syscall.SIGHUP} {
		if !signal.Ignored(s) { // as under nohup
			signal.Notify(stop, s)
		}
	}
	go func() {
		s := <-stop
		output.Abandon()
		number, _ := s.(syscall.Signal)
		os.Exit(128 + int(number))
	}()
}
