package study

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"math/rand/v2"
	"os"
	"path/filepath"
)

// largest is the size in bytes up to which a study file is read.
const largest = 256 << 20

// Load reads a study file. A fault in its text is a *FileError.
func Load(path string) (*Study, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, reason(path, "opened", err)
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil {
		return nil, reason(path, "opened", err)
	}
	switch {
	case !info.Mode().IsRegular():
		return nil, &FileError{Name: filepath.Base(path), Reason: "this is not a file"}
	case info.Size() > largest:
		return nil, &FileError{Name: filepath.Base(path), Reason: fmt.Sprintf("with %d MB this is too large for a study", info.Size()>>20)}
	}
	text, err := io.ReadAll(io.LimitReader(f, largest))
	if err != nil {
		return nil, reason(path, "read", err)
	}
	return Read(path, text)
}

// Save writes a study file whole or not at all: into a new file beside it,
// which then takes its place. A file that is there keeps its permissions; a
// link is followed.
func Save(path string, s *Study) error {
	if real, err := filepath.EvalSymlinks(path); err == nil {
		path = real
	}
	beside := filepath.Join(filepath.Dir(path), fmt.Sprintf(".%s.%08x.part", filepath.Base(path), rand.Uint32()))
	if err := writeWhole(beside, path, Write(s)); err != nil {
		os.Remove(beside) // it may not exist; nothing to add to the first error
		return reason(path, "saved", err)
	}
	syncFolder(filepath.Dir(path))
	return nil
}

func writeWhole(beside, path string, text []byte) error {
	f, err := os.OpenFile(beside, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return err
	}
	if info, err := os.Stat(path); err == nil {
		if !info.Mode().IsRegular() {
			f.Close()
			return errors.New("this is not a file")
		}
		if info.Mode().Perm()&0o200 == 0 {
			f.Close()
			return errors.New("the file is write-protected")
		}
		if err := f.Chmod(info.Mode().Perm()); err != nil {
			f.Close()
			return err
		}
	}
	_, err = f.Write(text)
	if err == nil {
		err = f.Sync()
	}
	if closed := f.Close(); err == nil {
		err = closed
	}
	if err != nil {
		return err
	}
	return os.Rename(beside, path)
}

// syncFolder makes the renaming last through a power cut where the system can
// do that. The file is whole either way, so a failure is no error.
func syncFolder(folder string) {
	if d, err := os.Open(folder); err == nil {
		d.Sync()
		d.Close()
	}
}

// reason puts an error of the system in words, without its folder.
func reason(path, done string, err error) error {
	name := filepath.Base(path)
	var system *fs.PathError
	why := err
	if errors.As(err, &system) {
		why = system.Err
	}
	switch {
	case errors.Is(err, fs.ErrNotExist) && done == "saved":
		return fmt.Errorf("%s could not be saved: the folder %s does not exist", name, filepath.Dir(path))
	case errors.Is(err, fs.ErrNotExist):
		return fmt.Errorf("%s could not be %s: there is no such file", name, done)
	case errors.Is(err, fs.ErrPermission):
		return fmt.Errorf("%s could not be %s: permission is denied", name, done)
	}
	return fmt.Errorf("%s could not be %s: %w", name, done, why)
}
