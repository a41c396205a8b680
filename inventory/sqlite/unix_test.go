//go:build unix

package sqlite

import (
	"context"
	"fmt"
	"io"
	"os"
	"os/signal"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"

	"tickdrawer/inventory"
)

// asAnyone runs the child as a user without privileges, for whom permissions
// hold. The test binary is copied to where that user may run it.
func asAnyone(t *testing.T, name, path string) string {
	t.Helper()
	command := childOf(name, path)
	if os.Getuid() == 0 {
		binary := filepath.Join(t.TempDir(), "child")
		from, err := os.Open(os.Args[0])
		if err != nil {
			t.Fatal(err)
		}
		defer from.Close()
		to, err := os.OpenFile(binary, os.O_CREATE|os.O_WRONLY, 0o755)
		if err != nil {
			t.Fatal(err)
		}
		if _, err := io.Copy(to, from); err != nil {
			t.Fatal(err)
		}
		to.Close()
		for folder := filepath.Dir(binary); folder != os.TempDir() && folder != "/"; folder = filepath.Dir(folder) {
			os.Chmod(folder, 0o755)
		}
		for folder := filepath.Dir(filepath.Dir(path)); folder != os.TempDir() && folder != "/"; folder = filepath.Dir(folder) {
			os.Chmod(folder, 0o755)
		}
		command.Path = binary
		command.SysProcAttr = &syscall.SysProcAttr{Credential: &syscall.Credential{Uid: 65534, Gid: 65534}}
		command.Dir = "/"
	}
	out, err := command.CombinedOutput()
	if err == nil {
		return ""
	}
	return strings.TrimSpace(string(out))
}

func TestReadOnlyIsSaid(t *testing.T) {
	for _, c := range []struct {
		name         string
		folder, file os.FileMode // file 0: none there
		says         []string
	}{
		{"a folder that is read-only, with nothing in it", 0o555, 0, []string{"the file cannot be opened", "permissions"}},
		{"a folder that is read-only", 0o555, 0o666, []string{"check the", "permissions"}},
		{"a file that is read-only", 0o777, 0o444, []string{"it is read-only", "permissions"}},
		{"a file that cannot be read", 0o777, 0o000, []string{"the file cannot be opened", "permissions"}},
		{"a folder that cannot be entered", 0o000, 0o666, []string{"cannot be reached", "permission denied"}},
		{"all allowed", 0o777, 0o666, nil},
	} {
		t.Run(c.name, func(t *testing.T) {
			folder := filepath.Join(t.TempDir(), "folder")
			path := filepath.Join(folder, "stock.drawer")
			if err := os.Mkdir(folder, 0o755); err != nil {
				t.Fatal(err)
			}
			if c.file != 0 || c.name == "a file that cannot be read" {
				content, err := empty()
				if err != nil {
					t.Fatal(err)
				}
				if err := os.WriteFile(path, content, 0o644); err != nil {
					t.Fatal(err)
				}
				if err := os.Chmod(path, c.file); err != nil {
					t.Fatal(err)
				}
			}
			if err := os.Chmod(folder, c.folder); err != nil {
				t.Fatal(err)
			}
			t.Cleanup(func() { os.Chmod(folder, 0o755) })
			said := asAnyone(t, "look", path)
			if (said == "") != (c.says == nil) {
				t.Errorf("it says %q", said)
			}
			for _, part := range c.says {
				if !strings.Contains(said, part) || !strings.Contains(said, path) {
					t.Errorf("it says %q, want %q and the file's name", said, part)
				}
			}
		})
	}
}

// failAtAnySize books under a limit on the size of files, which makes every
// write beyond it fail, and raises the limit until the booking goes through.
func failAtAnySize(path string) error {
	ctx := context.Background()
	signal.Ignore(syscall.SIGXFSZ)
	d, err := Open(ctx, path, Options{Now: time.Now, Who: "child"})
	if err != nil {
		return err
	}
	defer d.Close()
	var all syscall.Rlimit
	if err := syscall.Getrlimit(syscall.RLIMIT_FSIZE, &all); err != nil {
		return err
	}
	var receipts []inventory.Receipt
	for i := range 200 {
		receipts = append(receipts, inventory.Receipt{Part: inventory.Part{Kind: inventory.Resistor, Value: float64(100 + i)}, Quantity: 5, Note: strings.Repeat("n", 200)})
	}
	refused := 0
	for most := uint64(0); ; most += 8192 + 100 {
		limit := all
		limit.Cur = most
		if err := syscall.Setrlimit(syscall.RLIMIT_FSIZE, &limit); err != nil {
			return err
		}
		_, err := d.Book(ctx, Intake{Files: []IntakeFile{file("rows", receipts...)}})
		if err := syscall.Setrlimit(syscall.RLIMIT_FSIZE, &all); err != nil {
			return err
		}
		if err == nil {
			break
		}
		refused++
		if said := err.Error(); inventory.ReasonOf(err) != inventory.Invalid || !strings.Contains(said, "the disk") || !strings.Contains(said, "nothing was changed") {
			return fmt.Errorf("at %d bytes it says %q", most, said)
		}
		lots, err := d.Lots(ctx)
		if err != nil || len(lots) != 1 || lots[0].OnHand != 10 {
			return fmt.Errorf("at %d bytes the drawer has changed: %v, %v", most, lots, err)
		}
		if findings, err := d.Verify(ctx); err != nil || len(findings) > 0 {
			return fmt.Errorf("at %d bytes: %v, %v", most, findings, err)
		}
	}
	if refused < 10 {
		return fmt.Errorf("only %d writes failed", refused)
	}
	fmt.Println("refused", refused)
	return nil
}

func init() { children["fail"] = failAtAnySize }

func TestFailedWriteLeavesTheDrawerAsItWas(t *testing.T) {
	d := stocked(t, 10)
	out, err := childOf("fail", d.path).CombinedOutput()
	if err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	t.Logf("%s", out)
	wantSound(t, d)
	if lots, err := d.Lots(context.Background()); err != nil || len(lots) != 201 {
		t.Errorf("%d lots, %v", len(lots), err)
	}
}
