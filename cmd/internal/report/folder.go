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
	made        []string // folders above it that were made for it, the outermost first
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

// NewFolder starts a folder for place, so that a place that cannot be written to is
// known before anything is computed. It must be finished or abandoned.
func NewFolder(place string) (*Folder, error) {
	if err := CheckFolder(place); err != nil {
		return nil, err
	}
	f := &Folder{place: filepath.Clean(place)}
	above := filepath.Dir(f.place)
	for dir := above; ; dir = filepath.Dir(dir) {
		if _, err := os.Stat(dir); !errors.Is(err, fs.ErrNotExist) || dir == filepath.Dir(dir) {
			break
		}
		f.made = append([]string{dir}, f.made...)
	}
	err := os.MkdirAll(above, 0o777)
	if err == nil {
		f.temp, err = os.MkdirTemp(above, "."+filepath.Base(f.place)+".part-")
	}
	if err == nil {
		err = os.Chmod(f.temp, 0o755)
	}
	if err == nil {
		err = f.Write(markFile, []byte("Written by keelfall; replaced when the same result is written again.\n"))
	}
	if err != nil {
		f.Abandon()
		return nil, f.plain(err)
	}
	return f, nil
}

// plain says an error of the file system with the place the user knows instead of the
// temporary name.
func (f *Folder) plain(err error) error {
	var path *fs.PathError
	var link *os.LinkError
	switch {
	case errors.As(err, &path):
		err = path.Err
	case errors.As(err, &link):
		err = link.Err
	}
	return fmt.Errorf("%s cannot be written: %w", f.place, err)
}

// Write adds a file.
func (f *Folder) Write(name string, b []byte) error {
	if err := os.WriteFile(filepath.Join(f.temp, name), b, 0o644); err != nil {
		return f.plain(err)
	}
	return nil
}

// Finish moves the folder to its place; an older result there is removed.
func (f *Folder) Finish() error {
	if err := CheckFolder(f.place); err != nil {
		return err
	}
	old := f.temp + "-old"
	err := os.Rename(f.place, old)
	if err != nil && !errors.Is(err, fs.ErrNotExist) {
		return f.plain(err)
	}
	if err := os.Rename(f.temp, f.place); err != nil {
		os.Rename(old, f.place) // put the older result back
		return f.plain(err)
	}
	f.temp, f.made = "", nil
	if err := os.RemoveAll(old); err != nil {
		return f.plain(err)
	}
	return nil
}

// Abandon removes what was written so far; after Finish it does nothing.
func (f *Folder) Abandon() {
	if f.temp != "" {
		os.RemoveAll(f.temp)
	}
	for i := len(f.made) - 1; i >= 0; i-- {
		os.Remove(f.made[i]) // only where it is empty
	}
	f.temp, f.made = "", nil
}
