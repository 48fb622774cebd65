package report

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
)

// markFile says that a folder is keelfall's own and may be replaced.
const markFile = ".keelfall"

// Folder collects the files of one result under a temporary name beside its place,
// and moves them there whole.
type Folder struct {
	place, temp string
}

// CheckFolder says whether results may be written to place: it is free, or a folder
// that keelfall wrote.
func CheckFolder(place string) error {
	info, err := os.Stat(place)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return nil
	case err != nil:
		return err
	case !info.IsDir():
		return fmt.Errorf("%s is a file; results need a folder", place)
	}
	if _, err := os.Stat(filepath.Join(place, markFile)); err == nil {
		return nil
	}
	if entries, err := os.ReadDir(place); err == nil && len(entries) == 0 {
		return nil
	}
	return fmt.Errorf("%s is a folder that keelfall did not write; it is left as it is: choose another with --out", place)
}

// NewFolder starts a folder for place.
func NewFolder(place string) (*Folder, error) {
	if err := CheckFolder(place); err != nil {
		return nil, err
	}
	place = filepath.Clean(place)
	if err := os.MkdirAll(filepath.Dir(place), 0o777); err != nil {
		return nil, err
	}
	temp, err := os.MkdirTemp(filepath.Dir(place), "."+filepath.Base(place)+".part-")
	if err != nil {
		return nil, err
	}
	f := &Folder{place, temp}
	if err := os.Chmod(temp, 0o755); err != nil {
		f.Abandon()
		return nil, err
	}
	return f, f.Write(markFile, []byte("Written by keelfall; replaced when the same result is written again.\n"))
}

// Path returns where a file of the folder lies until it is finished.
func (f *Folder) Path(name string) string { return filepath.Join(f.temp, name) }

// Write adds a file.
func (f *Folder) Write(name string, b []byte) error {
	return os.WriteFile(f.Path(name), b, 0o644)
}

// Finish moves the folder to its place; an older result there is removed.
func (f *Folder) Finish() error {
	if err := CheckFolder(f.place); err != nil {
		return err
	}
	old := f.temp + "-old"
	err := os.Rename(f.place, old)
	if err != nil && !errors.Is(err, fs.ErrNotExist) {
		return err
	}
	if err := os.Rename(f.temp, f.place); err != nil {
		os.Rename(old, f.place) // put the older result back
		return err
	}
	return os.RemoveAll(old)
}

// Abandon removes what was written so far.
func (f *Folder) Abandon() { os.RemoveAll(f.temp) }
