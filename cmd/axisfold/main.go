// Axisfold turns a table of many numeric channels into principal components, a
// regression on them, and the evidence behind both.
package main

import (
	"os"

	"axisfold/cmd/internal/cli"
)

func main() {
	os.Exit(cli.Main(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}
