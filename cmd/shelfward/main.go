// Command shelfward plans syntheses backwards, from an unknown target to what stands on the shelf.
package main

import (
	"os"

	"shelfward/cmd/shelfward/cli"
)

func main() {
	os.Exit(cli.Main(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}
