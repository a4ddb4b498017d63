package sitefile

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"example.org/standclear/exposure/sitefile/demo"
)

// InitOptions say what Init writes.
type InitOptions struct {
	Workbook bool // one workbook with drop-downs and checks, in place of CSV files
	Demo     bool // the complete invented demo site, in place of empty tables
}

// workbookName is the workbook that Init writes.
const workbookName = "site.xlsx"

// Init writes a new site into the folder dir, which is made where it is missing,
// and returns the files it wrote. It never overwrites: where one of the files
// exists it writes nothing.
func Init(dir string, o InitOptions) ([]string, error) {
	files, err := initFiles(o)
	if err != nil {
		return nil, err
	}
	for _, f := range files {
		name := filepath.Join(dir, filepath.FromSlash(f.name))
		if _, err := os.Lstat(name); err == nil {
			return nil, Faults{{File: name, Message: "the file exists and is not overwritten; name another folder, or move it away"}}
		} else if !errors.Is(err, fs.ErrNotExist) {
			return nil, err
		}
	}
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return nil, err
	}
	var written []string
	for _, f := range files {
		name := filepath.Join(dir, filepath.FromSlash(f.name))
		if err = os.MkdirAll(filepath.Dir(name), 0o777); err == nil {
			err = writeNew(name, f.data)
		}
		if err != nil {
			for _, w := range written { // all or nothing
				err = errors.Join(err, os.Remove(w))
			}
			return nil, err
		}
		written = append(written, name)
	}
	return written, nil
}

// initFile is a file to be written, by its slash-separated name in the folder.
type initFile struct {
	name string
	data []byte
}

func initFiles(o InitOptions) ([]initFile, error) {
	switch {
	case o.Demo:
		return demoFiles(o.Workbook)
	case o.Workbook:
		var b bytes.Buffer
		if err := writeFillIn(&b); err != nil {
			return nil, err
		}
		return []initFile{{workbookName, b.Bytes()}}, nil
	}
	var files []initFile
	for _, t := range schema {
		if t.Name == limitsAboutTable.Name || t.Name == limitsSpotsTable.Name {
			continue // leading rows of limits.csv
		}
		data, err := emptyTable(t)
		if err != nil {
			return nil, err
		}
		files = append(files, initFile{t.Name + ".csv", data})
	}
	return files, nil
}

// demoFiles are the files of the demo site; with workbook the tables are sheets
// of one, and the pattern files lie beside it.
func demoFiles(workbook bool) ([]initFile, error) {
	var files []initFile
	var grids []*grid
	err := fs.WalkDir(demo.FS, ".", func(name string, e fs.DirEntry, err error) error {
		if err != nil || e.IsDir() {
			return err
		}
		data, err := fs.ReadFile(demo.FS, name)
		if err != nil {
			return err
		}
		table := strings.TrimSuffix(name, ".csv")
		if workbook && table != name && tableSchema(table) != nil {
			g, faults := readCSV(name, table, data, false)
			if len(faults) > 0 {
				return faults
			}
			grids = append(grids, g)
			return nil
		}
		files = append(files, initFile{name, data})
		return nil
	})
	if err != nil || !workbook {
		return files, err
	}
	slices.SortStableFunc(grids, func(a, b *grid) int { return tableRank(a.table) - tableRank(b.table) })
	var b bytes.Buffer
	if err := writeGrids(&b, grids); err != nil {
		return nil, err
	}
	return append([]initFile{{workbookName, b.Bytes()}}, files...), nil
}

// emptyTable is a table with its header and one example row that starts with #,
// so that it is not read.
func emptyTable(t TableSchema) ([]byte, error) {
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	columns := slices.Clone(t.Columns)
	slices.SortStableFunc(columns, func(a, b ColumnSchema) int { return rank(a) - rank(b) })
	var rows [][]string
	switch {
	case t.Vertical:
		rows = append(rows, []string{"item", "value"}, []string{"# " + columns[0].Header(), columns[0].Example})
		for _, c := range columns {
			rows = append(rows, []string{c.Header(), ""})
		}
	default:
		if t.Name == limitsTable.Name {
			for _, c := range limitsAboutTable.Columns {
				rows = append(rows, []string{"# " + c.Name + ":"})
			}
			rows = append(rows, []string{"# example of a spot value, to be typed in without the word example: # spot: public, E, 900 MHz, 41.25 V/m"})
		}
		header, example := make([]string, len(columns)), make([]string, len(columns))
		for i, c := range columns {
			header[i], example[i] = c.Header(), c.Example
		}
		example[0] = "# " + example[0]
		rows = append(rows, header, example)
	}
	if err := w.WriteAll(rows); err != nil {
		return nil, err
	}
	return b.Bytes(), nil
}

// writeNew writes a file that does not exist yet, whole or not at all.
func writeNew(name string, data []byte) (err error) {
	f, err := os.CreateTemp(filepath.Dir(name), ".standclear-*")
	if err != nil {
		return err
	}
	defer func() {
		if e := os.Remove(f.Name()); e != nil && !errors.Is(e, fs.ErrNotExist) {
			err = errors.Join(err, e)
		}
	}()
	_, err = f.Write(data)
	err = errors.Join(err, f.Chmod(0o644), f.Sync(), f.Close())
	if err != nil {
		return err
	}
	// A link, unlike a rename, fails where somebody else was faster.
	if err = os.Link(f.Name(), name); err == nil || errors.Is(err, fs.ErrExist) {
		return err
	}
	if _, e := os.Lstat(name); e == nil {
		return fmt.Errorf("%s: the file exists and is not overwritten", name)
	}
	return os.Rename(f.Name(), name) // a file system without links
}
