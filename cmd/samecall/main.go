// Command samecall tells whether a pass/fail inspection can be trusted.
package main

import "os"

func main() {
	os.Exit(run(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}
