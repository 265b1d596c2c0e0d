// Strainledger keeps an account of the strain energy that finite-element results
// hold: how much each region of a part stores, which cells are past the proportional
// limit, and where energy gathers.
package main

import "os"

func main() {
	os.Exit(run(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}
