package importers

import (
	"io"
	"runtime"
	"runtime/metrics"
	"strings"
	"testing"
	"time"
)

// repeating gives the same text over and over.
type repeating struct {
	block string // the text so often that copying it is quick
	at    int
}

func (r *repeating) Read(p []byte) (int, error) {
	for n := 0; n < len(p); {
		copied := copy(p[n:], r.block[r.at:])
		n += copied
		r.at = (r.at + copied) % len(r.block)
	}
	return len(p), nil
}

func endless(text string) io.Reader {
	return &repeating{block: strings.Repeat(text, 1+64<<10/len(text))}
}

// peakHeap begins to watch the heap, garbage and all; the function that it
// returns ends that and tells the most bytes seen.
func peakHeap() func() uint64 {
	stop, peak := make(chan bool), make(chan uint64)
	go func() {
		var most uint64
		sample := []metrics.Sample{{Name: "/memory/classes/heap/objects:bytes"}}
		tick := time.NewTicker(time.Millisecond)
		defer tick.Stop()
		for {
			metrics.Read(sample)
			most = max(most, sample[0].Value.Uint64())
			select {
			case <-stop:
				peak <- most
				return
			case <-tick.C:
			}
		}
	}()
	return func() uint64 { stop <- true; return <-peak }
}

func TestReadRefusesHostileFilesInBoundedMemory(t *testing.T) {
	const headings = "kind,value,quantity\n"
	const megabyte = 1 << 20
	for _, test := range []struct {
		name, want string
		content    func() io.Reader
	}{
		{"a file without end", "the file is larger than 64 MiB", func() io.Reader { return endless("kind,") }},
		{"a line of 60 MB in one cell", "the cell is longer than 32768 bytes", func() io.Reader { return io.LimitReader(endless("x"), 60*megabyte) }},
		{"a million columns of headings", "line 1 has more than 256 cells", func() io.Reader { return io.LimitReader(endless("kind,"), 5*megabyte) }},
		{"a million columns of a row", "line 2 has more than 256 cells", func() io.Reader {
			return io.MultiReader(strings.NewReader(headings), io.LimitReader(endless("x,"), 2*megabyte))
		}},
		{"megabytes of quotes", "line 2, column 1: the quote that opens the cell is not closed within 32768 bytes", func() io.Reader {
			return io.MultiReader(strings.NewReader(headings), io.LimitReader(endless(`"`), 8*megabyte))
		}},
		{"a quote that opens megabytes of text", "is not closed within 32768 bytes", func() io.Reader {
			return io.MultiReader(strings.NewReader(headings+`"`), io.LimitReader(endless("R,1k,1\n"), 8*megabyte))
		}},
		{"millions of rows", "there are more than 250000 rows", func() io.Reader {
			return io.MultiReader(strings.NewReader(headings), io.LimitReader(endless("\n\n?\n"), 8*megabyte))
		}},
		{"millions of totals", "there are more than 250000 rows", func() io.Reader {
			return io.MultiReader(strings.NewReader(headings), io.LimitReader(endless("sum\n"), 8*megabyte))
		}},
		{"millions of cells", "there are more than 8000000 cells", func() io.Reader {
			return io.MultiReader(strings.NewReader(headings), io.LimitReader(endless(strings.Repeat("x,", 199)+"\n"), 41_000*399))
		}},
		{"millions of blank lines", "no headings recognised", func() io.Reader {
			return io.MultiReader(strings.NewReader("x"), io.LimitReader(endless("\n"), 60*megabyte), strings.NewReader(headings))
		}},
		{"nothing but noughts", "nought", func() io.Reader { return io.LimitReader(endless("\x00"), 60*megabyte) }},
	} {
		t.Run(test.name, func(t *testing.T) {
			runtime.GC()
			peak := peakHeap()
			table, err := ReadFrom("hostile.csv", test.content(), Options{})
			mebibytes := peak() >> 20
			if err == nil {
				t.Fatalf("read: %s, %d rows", table.Detected, table.RowCount())
			}
			if !strings.Contains(err.Error(), test.want) || len(err.Error()) > 2000 {
				t.Errorf("error %q, want one that contains %q", err, test.want)
			}
			// The file, its text, and what was made of it before the refusal.
			if mebibytes > 8*MaxFileBytes>>20 {
				t.Errorf("the heap grew to %d MiB", mebibytes)
			}
			t.Logf("heap %d MiB", mebibytes)
		})
	}
}

func TestReadRefusesMoreThanItMayTake(t *testing.T) {
	if _, err := Read("large.csv", make([]byte, MaxFileBytes+1), Options{}); err == nil || !strings.Contains(err.Error(), "larger than 64 MiB") {
		t.Errorf("error %v", err)
	}
}

func TestLimitsThemselvesAreAllowed(t *testing.T) {
	wide := "kind,value,quantity" + strings.Repeat(",", MaxColumns-3) + "\n"
	got := mustRead(t, wide+"R,1k,0,"+strings.Repeat(`"`, 2)+strings.Repeat(",", MaxColumns-4)+"\n"+
		"R,1k,0,\"="+strings.Repeat(`""`, MaxCellBytes-1)+"\"\n", Options{})
	if len(got.Rejected) != 2 || len(got.Rejected[1].Cells[3]) != MaxCellBytes {
		t.Fatalf("rejected %d", len(got.Rejected))
	}
	// And their rejects, which have one more column and an apostrophe more.
	again := mustRead(t, string(Rejects(got)), Options{})
	if len(again.Rejected) != 2 || again.Rejected[1].Cells[4] != got.Rejected[1].Cells[3] {
		t.Errorf("rejected %d", len(again.Rejected))
	}
}
