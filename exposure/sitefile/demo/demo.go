// Package demo holds an invented site, complete enough to try everything on: a
// factory roof with mobile, broadcast, private radio and radio link antennas
// above the roof, the yard and the neighbours' windows. Its building,
// operators, antennas, readings and limit table are made up.
package demo

import (
	"embed"
	"io/fs"
)

//go:embed site
var files embed.FS

// FS is the site folder: the tables as CSV files and the pattern files that
// they name.
var FS = site()

func site() fs.FS {
	sub, err := fs.Sub(files, "site")
	if err != nil {
		panic("demo: " + err.Error()) // the embedded folder is part of the program
	}
	return sub
}
