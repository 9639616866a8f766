package workspace

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
)

// WriteFile puts what write produces at path, whole or not at all: it is written beside the target, synced and renamed, and
// a file that was there keeps its mode. A link that leads out of its own folder is refused; a device or a pipe is written to
// as it is.
func WriteFile(path string, write func(io.Writer) error) error {
	target, mode, direct, err := writeTarget(path)
	if err != nil {
		return fmt.Errorf("writing %s: %w", path, err)
	}
	if direct {
		f, err := os.OpenFile(target, os.O_WRONLY, 0)
		if err != nil {
			return fmt.Errorf("writing %s: %w", path, reason(err))
		}
		return errors.Join(write(f), f.Close())
	}
	if err := replace(target, mode, write); err != nil {
		return fmt.Errorf("writing %s: %w", path, reason(err))
	}
	return nil
}

// newFile stands for the mode of a file that is not there yet: whatever the system gives a new file.
const newFile fs.FileMode = 0

// writeTarget finds what is really to be written: the path itself, or what a link in the same folder stands for.
func writeTarget(path string) (target string, mode fs.FileMode, direct bool, err error) {
	info, err := os.Stat(path)
	if errors.Is(err, fs.ErrNotExist) {
		if _, lerr := os.Lstat(path); lerr == nil {
			return "", 0, false, errors.New("this is a link to nothing")
		}
		return path, newFile, false, nil
	}
	if err != nil {
		return "", 0, false, reason(err)
	}
	if info.IsDir() {
		return "", 0, false, errors.New("this is a folder")
	}
	if !info.Mode().IsRegular() {
		return path, 0, true, nil
	}
	real, err := filepath.EvalSymlinks(path)
	if err != nil {
		return "", 0, false, reason(err)
	}
	folder, err := filepath.EvalSymlinks(filepath.Dir(path))
	if err != nil {
		return "", 0, false, reason(err)
	}
	if link, err := os.Lstat(path); err == nil && link.Mode()&fs.ModeSymlink != 0 && !within(absolute(folder), absolute(real)) {
		return "", 0, false, fmt.Errorf("this is a link out of its folder, to %s", real)
	}
	return real, info.Mode().Perm(), false, nil
}

func replace(target string, mode fs.FileMode, write func(io.Writer) error) (err error) {
	beside := filepath.Join(filepath.Dir(target), fmt.Sprintf(".%s.%d.new", filepath.Base(target), os.Getpid()))
	f, err := os.OpenFile(beside, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return err
	}
	defer func() {
		if err != nil {
			f.Close()
			os.Remove(f.Name())
		}
	}()
	if err = write(f); err != nil {
		return err
	}
	if mode != newFile {
		if err = f.Chmod(mode); err != nil {
			return err
		}
	}
	if err = f.Sync(); err != nil {
		return err
	}
	if err = f.Close(); err != nil {
		return err
	}
	return os.Rename(f.Name(), target)
}
