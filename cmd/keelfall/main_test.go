package main

import (
	"bufio"
	"bytes"
	"context"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"keelfall": main})
}

// The scripts in testdata read like the manual; each starts in a folder of its own.
func TestScripts(t *testing.T) {
	testscript.Run(t, testscript.Params{Dir: "testdata", Setup: func(e *testscript.Env) error {
		e.Setenv("XDG_CONFIG_HOME", e.WorkDir+"/config") // no settings of the person who tests
		return nil
	}})
}

// Every keelfall command that README.md shows runs, in the order it stands there.
func TestREADME(t *testing.T) {
	b, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	t.Setenv("XDG_CONFIG_HOME", t.TempDir())
	t.Chdir(t.TempDir())
	ran := 0
	for sc := bufio.NewScanner(bytes.NewReader(b)); sc.Scan(); {
		line := strings.TrimSpace(sc.Text())
		line, ok := strings.CutPrefix(line, "keelfall ")
		if !ok {
			line, ok = strings.CutPrefix(strings.TrimSpace(sc.Text()), "go run ./cmd/keelfall ")
		}
		if !ok || !strings.HasPrefix(sc.Text(), "    ") {
			continue
		}
		line, _, _ = strings.Cut(line, "  #")
		line, to, redirected := strings.Cut(line, " > ")
		var out, errs bytes.Buffer
		if status := Main(context.Background(), split(line), Streams{&out, &errs}); status != exitDone {
			t.Errorf("keelfall %s: exit status %d\n%s", line, status, errs.String())
		}
		if redirected {
			if err := os.WriteFile(filepath.Base(strings.TrimSpace(to)), out.Bytes(), 0o644); err != nil {
				t.Fatal(err)
			}
		}
		ran++
	}
	if ran < 8 {
		t.Fatalf("README shows %d keelfall commands; it should show at least 8", ran)
	}
}

// The experiment that README.md shows runs, and is judged.
func TestREADMEExperiment(t *testing.T) {
	b, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	_, rest, ok := strings.Cut(string(b), "```yaml\n")
	text, _, closed := strings.Cut(rest, "```")
	if !ok || !closed {
		t.Fatal("README shows no experiment")
	}
	t.Setenv("XDG_CONFIG_HOME", t.TempDir())
	t.Chdir(t.TempDir())
	if err := os.WriteFile("shown.yaml", []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	var out, errs bytes.Buffer
	if status := Main(context.Background(), []string{"run", "shown.yaml"}, Streams{&out, &errs}); status != exitDone {
		t.Fatalf("exit status %d: %s", status, errs.String())
	}
	if !strings.Contains(out.String(), "ANSWER    The root ") {
		t.Errorf("no verdict:\n%s", out.String())
	}
}

// The history that README.md shows runs: its root reacts, its clock closes or says why not.
func TestREADMEHistory(t *testing.T) {
	b, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	blocks := strings.Split(string(b), "```yaml\n")
	at := slices.IndexFunc(blocks, func(b string) bool { return strings.Contains(b, "clocks:") })
	if at < 1 {
		t.Fatal("README shows no history")
	}
	text, _, _ := strings.Cut(blocks[at], "```")
	t.Setenv("XDG_CONFIG_HOME", t.TempDir())
	t.Chdir(t.TempDir())
	if err := os.WriteFile("shown.yaml", []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	var out, errs bytes.Buffer
	if status := Main(context.Background(), []string{"history", "shown.yaml"}, Streams{&out, &errs}); status != exitDone {
		t.Fatalf("exit status %d: %s", status, errs.String())
	}
	for _, want := range []string{"sheet, 3 times", "K7, in crust", "root base, in root", "hornblende Ar-Ar at K7"} {
		if !strings.Contains(out.String(), want) {
			t.Errorf("no %q:\n%s", want, out.String())
		}
	}
}

// The measured section that README.md shows is read: its first two rows are one layer.
func TestREADMESection(t *testing.T) {
	b, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	_, rest, ok := strings.Cut(string(b), "\n    name,")
	rows, _, closed := strings.Cut(rest, "\n\n")
	_, entry, named := strings.Cut(string(b), "`- {section: ")
	entry, _, ends := strings.Cut(entry, "`")
	if !ok || !closed || !named || !ends {
		t.Fatal("README shows no section")
	}
	t.Setenv("XDG_CONFIG_HOME", t.TempDir())
	t.Chdir(t.TempDir())
	text := "base: {temperature: 1300 degC}\nlayers:\n  - {section: " + strings.ReplaceAll(entry, "\n", " ") + "\n" +
		"  - {name: mantle, thickness: 30 km, density: 3270 kg/m3, viscosity: 1e20 Pa s}\n"
	for name, content := range map[string]string{"s.yaml": text, "north-ridge.csv": "name," + rows + "\n"} {
		if err := os.WriteFile(name, []byte(content), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	var out, errs bytes.Buffer
	if status := Main(context.Background(), []string{"column", "s.yaml"}, Streams{&out, &errs}); status != exitDone || !strings.Contains(out.String(), "granulite             0-5.2") {
		t.Errorf("exit status %d: %s%s", status, errs.String(), out.String())
	}
}

// A place that cannot be written to is known before anything is computed, and an
// interrupted run leaves no folder behind, not even one above its own.
func TestPlaceComesFirst(t *testing.T) {
	t.Setenv("XDG_CONFIG_HOME", t.TempDir())
	t.Chdir(t.TempDir())
	long := strings.Repeat("x", 300) // longer than a name may be
	var out, errs bytes.Buffer
	start := time.Now()
	if status := Main(context.Background(), []string{"run", "--out", long}, Streams{&out, &errs}); status != exitFailed {
		t.Errorf("exit status %d, want %d: %s", status, exitFailed, errs.String())
	}
	if out.Len() > 0 || strings.Contains(errs.String(), ".part-") || time.Since(start) > 200*time.Millisecond {
		t.Errorf("after %v: %s", time.Since(start), errs.String())
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if status := Main(ctx, []string{"run", "--out", "a/b/c"}, Streams{&out, &errs}); status != exitInterrupted {
		t.Errorf("exit status %d, want %d", status, exitInterrupted)
	}
	if left, err := os.ReadDir("."); err != nil || len(left) > 0 {
		t.Errorf("left behind: %v (%v)", left, err)
	}
}

// A settings file that nobody named and that cannot be read is warned about; one that
// was named is an error.
func TestUnreadableSettings(t *testing.T) {
	dir := t.TempDir()
	t.Setenv("XDG_CONFIG_HOME", dir)
	t.Chdir(t.TempDir())
	file := filepath.Join(dir, "keelfall", "settings.yaml")
	if err := os.MkdirAll(file, 0o755); err != nil { // a folder where a file should be
		t.Fatal(err)
	}
	var text, out, errs bytes.Buffer
	Main(context.Background(), []string{"example"}, Streams{&text, &errs})
	if err := os.WriteFile("mine.yaml", text.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
	if status := Main(context.Background(), []string{"check", "mine.yaml"}, Streams{&out, &errs}); status != exitDone || !strings.Contains(errs.String(), "warning: settings are left out") {
		t.Errorf("exit status %d: %s", status, errs.String())
	}
	if status := Main(context.Background(), []string{"check", "mine.yaml", "--settings", file}, Streams{&out, &errs}); status != exitInput {
		t.Errorf("named: exit status %d: %s", status, errs.String())
	}
}

// Progress is said once a command has taken a while, not before and not after.
func TestProgress(t *testing.T) {
	var w lockedBuffer
	quick := newProgress(&w, time.Hour)
	quick.say("something quick")
	quick.stop()
	slow := newProgress(&w, time.Millisecond)
	slow.say("one thing")
	for range 500 {
		if time.Sleep(2 * time.Millisecond); w.String() != "" {
			break
		}
	}
	slow.say("another")
	slow.stop()
	slow.say("nothing more")
	if got, want := w.String(), "computing one thing\ncomputing another\n"; got != want {
		t.Errorf("%q, want %q", got, want)
	}
}

type lockedBuffer struct {
	mu sync.Mutex
	b  bytes.Buffer
}

func (l *lockedBuffer) Write(p []byte) (int, error) {
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.b.Write(p)
}

func (l *lockedBuffer) String() string {
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.b.String()
}

// split breaks a command line at spaces, quotes kept together.
func split(s string) []string {
	var out []string
	for i, part := range strings.Split(s, "\"") {
		if i%2 == 1 {
			out = append(out, part)
		} else {
			out = append(out, strings.Fields(part)...)
		}
	}
	return out
}

// A cancelled run writes nothing and says so with status 130.
func TestInterrupted(t *testing.T) {
	t.Setenv("XDG_CONFIG_HOME", t.TempDir())
	t.Chdir(t.TempDir())
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	var out, errs bytes.Buffer
	if status := Main(ctx, []string{"run"}, Streams{&out, &errs}); status != exitInterrupted {
		t.Errorf("exit status %d, want %d: %s", status, exitInterrupted, errs.String())
	}
	left, err := os.ReadDir(".")
	if err != nil || len(left) > 0 {
		t.Errorf("left behind: %v (%v)", left, err)
	}
}
