package main

import (
	"os"
	"path/filepath"
)

// writeWhole writes a file whole or not at all: beside its place, synced, then
// renamed. A file that is there is replaced only with force.
func writeWhole(path string, data []byte, force bool) (err error) {
	if !force && exists(path) {
		return usageError{"file", path, "exists and is not overwritten; add --force, or give another name"}
	}
	f, err := os.CreateTemp(filepath.Dir(path), ".standclear-*")
	if err != nil {
		return err
	}
	defer func() {
		if err != nil {
			_ = f.Close()
			_ = os.Remove(f.Name())
		}
	}()
	if _, err = f.Write(data); err != nil {
		return err
	}
	if err = f.Chmod(0o644); err != nil {
		return err
	}
	if err = f.Sync(); err != nil {
		return err
	}
	if err = f.Close(); err != nil {
		return err
	}
	return os.Rename(f.Name(), path)
}
