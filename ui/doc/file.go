package doc

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"bandwright/physics/catalog"
)

// Load reads the study in a file.
func Load(file string) (Document, error) {
	data, err := readFile(file, maxStudy)
	if err != nil {
		return Document{}, plainly("the study cannot be read", err)
	}
	return Decode(filepath.Base(file), data)
}

// Save writes a study to a file. The file is at all times the old one or the
// new one: the text goes to a new file in the same folder, which is flushed to
// the disk and takes the name of the old one. Its permissions are kept.
func Save(file string, d Document) error {
	if err := save(file, d.Encode()); err != nil {
		return plainly("the study cannot be saved", err)
	}
	return nil
}

func save(file string, data []byte) error {
	mode := fs.FileMode(0o644)
	if real, err := filepath.EvalSymlinks(file); err == nil {
		file = real // a link stays a link
	}
	if info, err := os.Stat(file); err == nil {
		if !info.Mode().IsRegular() {
			return fmt.Errorf("%s is no file: choose another name", file)
		}
		mode = info.Mode().Perm()
	}
	dir := filepath.Dir(file)
	next, err := os.CreateTemp(dir, "."+filepath.Base(file)+".*")
	if err != nil {
		return err
	}
	defer os.Remove(next.Name()) // in vain once it has its name
	if _, err = next.Write(data); err == nil {
		err = next.Chmod(mode)
	}
	if err == nil {
		err = next.Sync()
	}
	if closed := next.Close(); err == nil {
		err = closed
	}
	if err == nil {
		err = os.Rename(next.Name(), file)
	}
	if err != nil {
		return err
	}
	// The new name is safe once the folder is.
	if folder, err := os.Open(dir); err == nil {
		folder.Sync()
		folder.Close()
	}
	return nil
}

// plainly says what an error of the file system means for the user.
func plainly(what string, err error) error {
	var p *fs.PathError
	name := ""
	if errors.As(err, &p) {
		name = p.Path
	}
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return fmt.Errorf("%s: %s does not exist; check the name: %w", what, name, err)
	case errors.Is(err, fs.ErrPermission):
		return fmt.Errorf("%s: no permission for %s; choose another folder: %w", what, name, err)
	}
	return fmt.Errorf("%s: %w", what, err)
}

// Check returns every problem of a study or of a parameter set; nil when there
// is none. dir is where files that a study names are looked for.
func Check(name, dir string, data []byte) []*Problem {
	if isSet(name, data) {
		var fe *Problem
		if _, err := catalog.ParseFile(name, data); errors.As(err, &fe) {
			return []*Problem{fe}
		} else if err != nil {
			return []*Problem{{File: name, Problem: err.Error()}}
		}
		return nil
	}
	d, r := decode(name, data)
	var problems *Problems
	if errors.As(r.err(), &problems) {
		return problems.List
	}
	checkBuild(r, "", d, dir)
	for _, p := range []struct {
		name string
		pin  *Pin
	}{{"pin.A", d.PinA}, {"pin.B", d.PinB}} {
		if p.pin == nil {
			continue
		}
		b := checkBuild(r, p.name, Document{Crystal: p.pin.Crystal, Model: p.pin.Model}, dir)
		if b == nil {
			continue
		}
		if n := len(b.Model.Basis()); p.pin.Level >= n {
			r.fail(p.name+".level", fmt.Sprintf("write a level from 0 to %d", n-1), "there is no level %d", p.pin.Level)
		}
	}
	if errors.As(r.err(), &problems) {
		return problems.List
	}
	return nil
}

// checkBuild builds a study, or a pin of the given name, and notes what keeps
// it from being built, which Decode cannot see: it reads no other files.
func checkBuild(r *reader, name string, d Document, dir string) *Built {
	model := join(name, "model")
	set, err := d.Model.MakeSet(dir)
	var inSet *Problem
	switch {
	case errors.As(err, &inSet):
		r.list = append(r.list, inSet)
		return nil
	case err != nil:
		r.fail(join(model, "file"), "correct the name, or put the set beside the study", "%v", err)
		return nil
	}
	c, err := d.MakeCrystal()
	if err != nil {
		problem, remedy := parts(err)
		r.fail(join(name, "crystal"), remedy, "%s", problem)
		return nil
	}
	before := len(r.list)
	if misfit(r, model, c, set, d.Model); len(r.list) > before {
		return nil
	}
	d.Mesh = [3]int{1, 1, 1} // the finest ones take long, and nothing here needs them
	b, err := d.Build(dir)
	if err != nil {
		problem, remedy := parts(err)
		r.fail(join(name, "crystal"), remedy, "%s", problem)
		return nil
	}
	if problem, remedy := b.Stretch(); problem != "" {
		r.fail(join(name, "crystal.prototype"), remedy, "%s", problem)
	}
	if b.PathErr != nil && name == "" {
		r.fail("path", "give the path by its points", "%v", b.PathErr)
	}
	return b
}
