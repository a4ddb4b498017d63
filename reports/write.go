package reports

import (
	"bufio"
	"bytes"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/survey"
)

// Options of a report.
type Options struct {
	// Survey, when not nil, is what was measured: it adds its sheets and figures
	// to the report, and the file readings.json.
	Survey *survey.Result
	// Force replaces a report that is there.
	Force bool
	// Context, when not nil, stops the writing; what was there before stays.
	Context context.Context
}

// manifest is the list of a report's files with their SHA-256, in the form that
// sha256sum -c reads. It tells a later run which files are the report's own.
const manifest = "files.sha256"

// ErrExists is returned, wrapped, where a report is in the way and Force is not
// set.
var ErrExists = errors.New("is there already; use --force to replace the report")

// Write writes the report into a folder, which it makes if need be, and returns
// the names of the files written, in the folder and in alphabetical order:
// report.xlsx, results.json, zones.geojson, settingout.csv, the figures as SVG
// and PNG, files.sha256, readings.json where there is a survey and, for a site with a position, zones-wgs84.geojson
// and zones.kml.
//
// Everything is written and synced beside its place first and moved into it at
// the end. If anything fails or Context is done, nothing is changed. Files of
// an earlier report that this one no longer has are removed with Force, unless
// someone has edited them.
func Write(a *exposure.Assessment, dir string, o Options) (files []string, err error) {
	if a == nil || a.Site == nil {
		return nil, errors.New("reports: an assessment needs its site")
	}
	return writeSet(dir, manifest, o, func(w *writer) error { return w.all(a, o.Survey, o.Force) })
}

// writeSet stages the files of a set and moves them into a folder, all or none.
func writeSet(dir, manifest string, o Options, stageAll func(w *writer) error) (files []string, err error) {
	ctx := o.Context
	if ctx == nil {
		ctx = context.Background()
	}
	made, err := makeFolder(dir)
	if err != nil {
		return nil, err
	}
	defer func() {
		if err != nil {
			for _, d := range made {
				os.Remove(d) // only if it is empty
			}
		}
	}()
	stage, err := os.MkdirTemp(dir, ".report-")
	if err != nil {
		return nil, err
	}
	defer os.RemoveAll(stage)
	w := &writer{ctx: ctx, dir: dir, stage: stage, manifest: manifest, sums: map[string]string{}}
	if err := stageAll(w); err != nil {
		return nil, err
	}
	if err := w.install(o.Force); err != nil {
		return nil, err
	}
	slices.Sort(w.files)
	return w.files, nil
}

// makeFolder makes a folder and returns those it had to make, innermost first.
func makeFolder(dir string) (made []string, err error) {
	for d := filepath.Clean(dir); ; d = filepath.Dir(d) {
		if _, err := os.Stat(d); err == nil || !errors.Is(err, fs.ErrNotExist) {
			break
		}
		made = append(made, d)
	}
	return made, os.MkdirAll(dir, 0o777)
}

// writer stages files and moves them into place.
type writer struct {
	ctx        context.Context
	dir, stage string
	manifest   string // name of the list of the set's files
	files      []string
	sums       map[string]string
}

// all stages every file of the report.
func (w *writer) all(a *exposure.Assessment, measured *survey.Result, force bool) error {
	if !force {
		// Before the work is done rather than after it.
		for _, name := range []string{"report.xlsx", "results.json", manifest} {
			if err := w.inTheWay(name); err != nil {
				return err
			}
		}
	}
	pictures, err := draw(w.ctx, a)
	if err != nil {
		return err
	}
	more, err := drawReadings(w.ctx, a, measured)
	if err != nil {
		return err
	}
	pictures = append(pictures, more...)
	steps := []struct {
		name  string
		write func(io.Writer) error
	}{
		{"report.xlsx", fromBytes(func() ([]byte, error) { return surveyWorkbook(a, pictures, measured) })},
		{"results.json", func(out io.Writer) error { return JSON(out, a) }},
		{"zones.geojson", fromBytes(func() ([]byte, error) { return GeoJSON(a, false) })},
		{"settingout.csv", fromBytes(func() ([]byte, error) { return SettingOut(a) })},
	}
	if measured != nil {
		steps = append(steps, struct {
			name  string
			write func(io.Writer) error
		}{"readings.json", func(out io.Writer) error { return readingsJSON(out, measured) }})
	}
	if a.Site.About.HasPosition {
		steps = append(steps, []struct {
			name  string
			write func(io.Writer) error
		}{
			{"zones-wgs84.geojson", fromBytes(func() ([]byte, error) { return GeoJSON(a, true) })},
			{"zones.kml", fromBytes(func() ([]byte, error) { return KML(a) })},
		}...)
	}
	for _, s := range steps {
		if err := w.put(s.name, s.write); err != nil {
			return err
		}
	}
	for _, p := range pictures {
		if err := w.putPicture(p, ""); err != nil {
			return err
		}
	}
	return w.list()
}

// putPicture stages a figure in both its forms.
func (w *writer) putPicture(p picture, prefix string) error {
	if err := w.put(prefix+p.name+".svg", content(p.svg)); err != nil {
		return err
	}
	return w.put(prefix+p.name+".png", content(p.png))
}

// list stages the list of the files staged so far.
func (w *writer) list() error {
	names := slices.Sorted(slices.Values(w.files))
	return w.put(w.manifest, func(out io.Writer) error {
		for _, name := range names {
			if _, err := fmt.Fprintf(out, "%s  %s\n", w.sums[name], name); err != nil {
				return err
			}
		}
		return nil
	})
}

func content(b []byte) func(io.Writer) error {
	return func(w io.Writer) error {
		_, err := w.Write(b)
		return err
	}
}

func fromBytes(make func() ([]byte, error)) func(io.Writer) error {
	return func(w io.Writer) error {
		b, err := make()
		if err != nil {
			return err
		}
		_, err = w.Write(b)
		return err
	}
}

func (w *writer) inTheWay(name string) error {
	path := filepath.Join(w.dir, name)
	if _, err := os.Lstat(path); err == nil {
		return fmt.Errorf("%s %w", path, ErrExists)
	}
	return nil
}

// put stages one file, synced to the disk.
func (w *writer) put(name string, write func(io.Writer) error) (err error) {
	if err := w.ctx.Err(); err != nil {
		return err
	}
	f, err := os.Create(filepath.Join(w.stage, name))
	if err != nil {
		return err
	}
	defer func() {
		if closing := f.Close(); err == nil {
			err = closing
		}
	}()
	sum := sha256.New()
	out := bufio.NewWriterSize(io.MultiWriter(f, sum), 1<<16)
	if err := write(out); err != nil {
		return fmt.Errorf("%s: %w", name, err)
	}
	if err := out.Flush(); err != nil {
		return err
	}
	if err := f.Sync(); err != nil {
		return err
	}
	w.files = append(w.files, name)
	w.sums[name] = hex.EncodeToString(sum.Sum(nil))
	return nil
}

// install moves the staged files into place, the manifest last. What it
// replaces is kept until all are in place and comes back if one fails.
func (w *writer) install(force bool) (err error) {
	if err := w.ctx.Err(); err != nil {
		return err
	}
	if !force {
		for _, name := range w.files {
			if err := w.inTheWay(name); err != nil {
				return err
			}
		}
	}
	stale := w.stale()
	kept := filepath.Join(w.stage, "kept")
	if err := os.Mkdir(kept, 0o777); err != nil {
		return err
	}
	var undo []func()
	defer func() {
		if err != nil {
			for _, u := range slices.Backward(undo) {
				u()
			}
		}
	}()
	for _, name := range w.files {
		to, old := filepath.Join(w.dir, name), filepath.Join(kept, name)
		if info, err := os.Lstat(to); err == nil {
			if info.IsDir() {
				return fmt.Errorf("%s is a folder: the report needs that name", to)
			}
			// A second name keeps the old file while the new one takes its place
			// in one step, so that the name is never without a whole file.
			if err := os.Link(to, old); err != nil {
				return err
			}
			undo = append(undo, func() { os.Rename(old, to) })
		} else {
			undo = append(undo, func() { os.Remove(to) })
		}
		if err := os.Rename(filepath.Join(w.stage, name), to); err != nil {
			return err
		}
	}
	for _, name := range stale {
		os.Remove(filepath.Join(w.dir, name))
	}
	return syncFolder(w.dir)
}

// stale lists the files of an earlier report here that this one does not have
// and that are as they were written.
func (w *writer) stale() []string {
	text, err := os.ReadFile(filepath.Join(w.dir, w.manifest))
	if err != nil {
		return nil
	}
	var out []string
	for line := range bytes.Lines(text) {
		sum, name, ok := strings.Cut(strings.TrimSpace(string(line)), "  ")
		if !ok || name != filepath.Base(name) || slices.Contains(w.files, name) {
			continue
		}
		was, err := os.ReadFile(filepath.Join(w.dir, name))
		if err != nil {
			continue
		}
		if is := sha256.Sum256(was); hex.EncodeToString(is[:]) == sum {
			out = append(out, name)
		}
	}
	return out
}

// syncFolder makes the new names last through a power cut.
func syncFolder(dir string) error {
	d, err := os.Open(dir)
	if err != nil {
		return err
	}
	defer d.Close()
	if err := d.Sync(); err != nil && !errors.Is(err, errors.ErrUnsupported) {
		return err
	}
	return nil
}
