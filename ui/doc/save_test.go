package doc

import (
	"bufio"
	"errors"
	"io/fs"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"
)

const saverVariable = "BANDWRIGHT_TEST_SAVES_TO"

// TestMain lets the test binary be the program that saves without end.
func TestMain(m *testing.M) {
	if file := os.Getenv(saverVariable); file != "" {
		a, b := studyPair()
		for first := true; ; {
			for _, d := range []Document{a, b} {
				if err := Save(file, d); err != nil {
					os.Stderr.WriteString(err.Error() + "\n")
					os.Exit(1)
				}
				if first {
					os.Stdout.WriteString("saving\n")
					first = false
				}
			}
		}
	}
	os.Exit(m.Run())
}

// studyPair is two studies of different length.
func studyPair() (a, b Document) {
	a = New()
	a.Title = "one"
	b = a
	b.Title = strings.Repeat("the other ", 40)
	b.PinA = &Pin{Crystal: a.Crystal, Model: a.Model, Level: 2}
	return a, b
}

// A program that is killed while it saves leaves the old study or the new one.
func TestSaveIsAtomic(t *testing.T) {
	file := filepath.Join(t.TempDir(), "x.bandstudy")
	a, b := studyPair()
	if err := Save(file, a); err != nil {
		t.Fatal(err)
	}
	kills := 200
	if testing.Short() {
		kills = 20
	}
	random := rand.New(rand.NewPCG(1, 2))
	seen := map[string]int{}
	for range kills {
		cmd := exec.Command(os.Args[0])
		cmd.Env = append(os.Environ(), saverVariable+"="+file)
		out, err := cmd.StdoutPipe()
		if err != nil {
			t.Fatal(err)
		}
		if err := cmd.Start(); err != nil {
			t.Fatal(err)
		}
		if _, err := bufio.NewReader(out).ReadString('\n'); err != nil {
			t.Fatal(err)
		}
		time.Sleep(time.Duration(random.IntN(3000)) * time.Microsecond)
		cmd.Process.Signal(syscall.SIGKILL)
		cmd.Wait()
		d, err := Load(file)
		if err != nil {
			t.Fatalf("after a kill: %v", err)
		}
		if !d.Equal(a) && !d.Equal(b) {
			t.Fatalf("after a kill the file is neither of the two: %+v", d)
		}
		seen[d.Title[:3]]++
	}
	if kills == 200 && len(seen) != 2 {
		t.Errorf("the kills never met both studies: %v", seen)
	}
}

func TestSaveKeepsModeAndLink(t *testing.T) {
	dir := t.TempDir()
	file, link := filepath.Join(dir, "x.bandstudy"), filepath.Join(dir, "link.bandstudy")
	if err := Save(file, New()); err != nil {
		t.Fatal(err)
	}
	if err := os.Chmod(file, 0o600); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink("x.bandstudy", link); err != nil {
		t.Fatal(err)
	}
	_, b := studyPair()
	if err := Save(link, b); err != nil {
		t.Fatal(err)
	}
	if info, err := os.Lstat(link); err != nil || info.Mode()&fs.ModeSymlink == 0 {
		t.Error("the link became a file")
	}
	if info, err := os.Stat(file); err != nil || info.Mode().Perm() != 0o600 {
		t.Errorf("the mode is %v", info.Mode())
	}
	if d, err := Load(file); err != nil || !d.Equal(b) {
		t.Errorf("%v", err)
	}
	if list, err := os.ReadDir(dir); err != nil || len(list) != 2 {
		t.Errorf("files are left over: %v", list)
	}
}

func TestFilesThatCannotBe(t *testing.T) {
	dir := t.TempDir()
	if err := Save(filepath.Join(dir, "gone", "x.bandstudy"), New()); err == nil || !errors.Is(err, fs.ErrNotExist) || !strings.Contains(err.Error(), "does not exist") {
		t.Errorf("a folder that is not there: %v", err)
	}
	if err := Save(dir, New()); err == nil {
		t.Error("a study was saved over a folder")
	}
	if _, err := Load(dir); err == nil || !strings.Contains(err.Error(), "folder") {
		t.Errorf("a folder was read: %v", err)
	}
	if _, err := Load(filepath.Join(dir, "gone")); err == nil || !strings.Contains(err.Error(), "check the name") {
		t.Errorf("a file that is not there: %v", err)
	}
	if os.Getuid() != 0 { // root writes anywhere
		locked := filepath.Join(dir, "locked")
		if err := os.Mkdir(locked, 0o555); err != nil {
			t.Fatal(err)
		}
		if err := Save(filepath.Join(locked, "x"), New()); err == nil || !strings.Contains(err.Error(), "choose another folder") {
			t.Errorf("a locked folder: %v", err)
		}
	}
}
