// Command standclear tells where the fields of an antenna site exceed a limit
// table, and how far people must keep away.
package main

import "os"

func main() {
	os.Exit(run(os.Args[1:], streams{in: os.Stdin, out: os.Stdout, err: os.Stderr}))
}
