package main

import (
	"bufio"
	"bytes"
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"keelfall": main})
}

// The scripts in testdata read like the manual; each is a session of its own.
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
