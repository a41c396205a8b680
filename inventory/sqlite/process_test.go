package sqlite

import (
	"bufio"
	"context"
	"fmt"
	"io"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"tickdrawer/inventory"
)

// The test binary runs itself as other programs that use the same drawer.
const childVariable = "TICKDRAWER_TEST_CHILD"

// children are what the test binary does as a child, by name. They write to
// standard output what they have done.
var children = map[string]func(path string) error{
	"make": func(path string) error { return tryOpen(path, true) },
	"look": look,
	"busy": beBusy,
	"pull": pullWhenTold,
}

func TestMain(m *testing.M) {
	child, asked := children[os.Getenv(childVariable)]
	if !asked {
		os.Exit(m.Run())
	}
	if err := child(os.Args[len(os.Args)-1]); err != nil {
		fmt.Println(err)
		os.Exit(1)
	}
}

func childOf(name, path string) *exec.Cmd {
	command := exec.Command(os.Args[0], path)
	command.Env = append(os.Environ(), childVariable+"="+name)
	return command
}

const rowsOfIntake = 40

// beBusy books, plans, reserves, pulls and puts back until it is killed, and
// says what it has done once that is acknowledged.
func beBusy(path string) error {
	ctx := context.Background()
	d, err := Open(ctx, path, Options{Now: time.Now, Who: "child"})
	if err != nil {
		return err
	}
	for i := 0; ; i++ {
		name := fmt.Sprintf("%d-%d", os.Getpid(), i)
		var receipts []inventory.Receipt
		for row := range rowsOfIntake {
			receipts = append(receipts, inventory.Receipt{Part: inventory.Part{Kind: inventory.Resistor, Value: float64(1 + row + i%3)}, Quantity: 2})
		}
		if _, err := d.Book(ctx, Intake{Files: []IntakeFile{file(name, receipts...)}}); err != nil {
			return err
		}
		fmt.Println("booked", name)
		kit := inventory.Kit{Job: name, State: inventory.KitReserved, Picks: []inventory.Pick{{Lot: 1, Quantity: 1}, {Lot: 2, Quantity: 2}, {Lot: 3, Quantity: 1}}}
		id, err := d.SaveKit(ctx, kit)
		if err != nil {
			return err
		}
		fmt.Println("reserved", id)
		if _, err := d.Pull(ctx, id); err != nil {
			return err
		}
		fmt.Println("pulled", id)
		if i%2 == 0 {
			if _, err := d.PutBack(ctx, id, 0, 0); err != nil {
				return err
			}
			fmt.Println("returned", id)
		}
	}
}

// TestKilledAtAnyMoment kills a busy program again and again: each time the
// drawer must be sound, hold every acknowledged work, and nothing by halves.
// TICKDRAWER_KILLS says how often; 2,000 take about five minutes.
func TestKilledAtAnyMoment(t *testing.T) {
	kills := 30
	if text := os.Getenv("TICKDRAWER_KILLS"); text != "" {
		var err error
		if kills, err = strconv.Atoi(text); err != nil {
			t.Fatal(err)
		}
	}
	var path string
	var done map[string]bool // what was acknowledged in it
	acknowledged := 0
	for kill := range kills {
		if kill%25 == 0 { // or the checks would take ever longer
			d := fresh(t)
			d.Close() // so that the next to open it recovers its log
			path, done = d.path, map[string]bool{}
		}
		child := childOf("busy", path)
		output, err := child.StdoutPipe()
		if err != nil {
			t.Fatal(err)
		}
		if err := child.Start(); err != nil {
			t.Fatal(err)
		}
		// From before it opens the drawer to some bookings later; the moment is
		// the operating system's, so no seed would bring it back.
		time.Sleep(time.Duration(rand.IntN(120_000)) * time.Microsecond)
		if err := child.Process.Kill(); err != nil {
			t.Fatal(err)
		}
		said, err := io.ReadAll(output)
		if err != nil {
			t.Fatal(err)
		}
		child.Wait()
		for line := range strings.Lines(string(said)) {
			if !strings.HasSuffix(line, "\n") {
				continue
			}
			switch word, _, _ := strings.Cut(line, " "); word {
			case "booked", "reserved", "pulled", "returned":
				acknowledged++
				done[strings.TrimSpace(line)] = true
			default:
				t.Fatalf("the child says %q", line)
			}
		}
		checkAfterKill(t, path, done)
		if t.Failed() {
			return
		}
	}
	if acknowledged < kills {
		t.Errorf("%d works acknowledged in %d kills: they came too early to test anything", acknowledged, kills)
	}
	t.Logf("%d kills, %d works acknowledged", kills, acknowledged)
}

// A program killed while it makes a drawer leaves one that the next makes whole.
func TestKilledWhileTheDrawerIsMade(t *testing.T) {
	folder := t.TempDir()
	unmade := 0
	for kill := range 12 {
		path := filepath.Join(folder, "new", fmt.Sprint(kill))
		child := childOf("make", path)
		if err := child.Start(); err != nil {
			t.Fatal(err)
		}
		began := time.Now()
		for time.Since(began) < time.Second { // until there is a file: what comes before is of no interest
			if _, err := os.Stat(path); err == nil {
				break
			}
			time.Sleep(100 * time.Microsecond)
		}
		time.Sleep(time.Duration(rand.IntN(12_000)) * time.Microsecond)
		if err := child.Process.Kill(); err != nil {
			t.Fatal(err)
		}
		child.Wait()
		switch err := tryOpen(path, false); inventory.ReasonOf(err) {
		case inventory.NotFound: // nothing is in it yet
			unmade++
		default:
			if err != nil {
				t.Error(err)
			}
		}
		d := open(t, path)
		stock(t, d, 3)
		wantSound(t, d)
	}
	t.Logf("%d of 12 were killed before the drawer was whole", unmade)
}

func checkAfterKill(t *testing.T, path string, done map[string]bool) {
	t.Helper()
	ctx := context.Background()
	d, err := Open(ctx, path, Options{Now: time.Now, Who: "parent"})
	if err != nil {
		t.Fatal(err)
	}
	defer d.Close()
	wantSound(t, d)
	movements, err := d.Movements(ctx, Filter{})
	if err != nil {
		t.Fatal(err)
	}
	rows := map[string]int{}
	for _, m := range movements {
		if m.Source != "" {
			rows[m.Source]++
		}
	}
	kits, err := d.Kits(ctx)
	if err != nil {
		t.Fatal(err)
	}
	reached := map[string]bool{}
	for name, n := range rows {
		if reached["booked "+name] = true; n != rowsOfIntake {
			t.Errorf("file %s: %d rows of %d are booked", name, n, rowsOfIntake)
		}
	}
	for _, head := range kits {
		kit, err := d.Kit(ctx, head.ID)
		if err != nil {
			t.Fatal(err)
		}
		reached[fmt.Sprint("reserved ", kit.ID)] = true
		reached[fmt.Sprint("pulled ", kit.ID)] = kit.State == inventory.KitPulled
		out := int64(0)
		for _, pick := range kit.Picks {
			out += pick.Quantity - pick.Returned
		}
		if len(kit.Picks) != 3 || out != 0 && out != 4 {
			t.Errorf("kit %d by halves: %+v", kit.ID, kit)
		}
		reached[fmt.Sprint("returned ", kit.ID)] = out == 0
	}
	for work := range done {
		if !reached[work] {
			t.Errorf("%q was acknowledged and is not there", work)
		}
	}
}

// pullWhenTold opens the drawer, waits for a kit's number, pulls it and says how
// it went.
func pullWhenTold(path string) error {
	d, err := Open(context.Background(), path, Options{Now: time.Now, Who: "child"})
	if err != nil {
		return err
	}
	defer d.Close()
	fmt.Println("ready")
	var kit inventory.KitID
	if _, err := fmt.Scan(&kit); err != nil {
		return err
	}
	switch _, err := d.Pull(context.Background(), kit); {
	case err == nil:
		fmt.Println("won")
	case inventory.ReasonOf(err) == inventory.Shortage:
		fmt.Println("short")
	default:
		return err
	}
	return nil
}

func TestLastPieceIsPulledByOneProcess(t *testing.T) {
	d := stocked(t, 1)
	type racer struct {
		command *exec.Cmd
		in      io.WriteCloser
		out     *bufio.Scanner
		kit     inventory.KitID
	}
	var racers []racer
	for range 8 {
		r := racer{command: childOf("pull", d.path), kit: planned(t, d, inventory.Pick{Lot: 1, Quantity: 1})}
		var err error
		if r.in, err = r.command.StdinPipe(); err != nil {
			t.Fatal(err)
		}
		out, err := r.command.StdoutPipe()
		if err != nil {
			t.Fatal(err)
		}
		r.out = bufio.NewScanner(out)
		if err := r.command.Start(); err != nil {
			t.Fatal(err)
		}
		t.Cleanup(func() { r.command.Process.Kill() })
		racers = append(racers, r)
	}
	for _, r := range racers {
		if !r.out.Scan() || r.out.Text() != "ready" {
			t.Fatalf("a child says %q", r.out.Text())
		}
	}
	for _, r := range racers {
		fmt.Fprintln(r.in, r.kit)
	}
	results := map[string]int{}
	for _, r := range racers {
		r.out.Scan()
		results[r.out.Text()]++
		if err := r.command.Wait(); err != nil {
			t.Error(err)
		}
	}
	if results["won"] != 1 || results["short"] != len(racers)-1 {
		t.Errorf("the racers say %v", results)
	}
	wantSound(t, d)
}

func TestDrawerIsMadeByManyProcessesAtOnce(t *testing.T) {
	path := filepath.Join(t.TempDir(), "new", "stock.drawer")
	var commands []*exec.Cmd
	var said []*strings.Builder
	for range 8 {
		command := childOf("make", path)
		out := &strings.Builder{}
		command.Stdout, command.Stderr = out, out
		if err := command.Start(); err != nil {
			t.Fatal(err)
		}
		commands, said = append(commands, command), append(said, out)
	}
	for i, command := range commands {
		if err := command.Wait(); err != nil {
			t.Errorf("%v: %s", err, said[i])
		}
	}
	wantSound(t, open(t, path))
}

// look opens the drawer, books a piece and says what went wrong.
func look(path string) error {
	ctx := context.Background()
	d, err := Open(ctx, path, Options{Create: true, Now: time.Now, Who: "child"})
	if err != nil {
		return err
	}
	defer d.Close()
	_, err = d.Book(ctx, Intake{Files: []IntakeFile{file("a piece", inventory.Receipt{Part: inventory.Part{Kind: inventory.Resistor, Value: 5}, Quantity: 1})}})
	return err
}
