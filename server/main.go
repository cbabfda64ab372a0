// Command leeway is a browser lab for switching navigation designs: it serves
// benches, and runs scenarios on the command line. "leeway --help" says more.
package main

import (
	"os"

	"leeway/server/cli"
)

func main() { os.Exit(cli.Main(os.Args[1:], os.Stdin, os.Stdout, os.Stderr)) }
