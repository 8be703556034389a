// Command gosources writes the Go source of every model of testdata/golden as a
// package of one module, with a test of proven values where the response has
// numbers only:
//
//	gosources DIR && cd DIR && go vet ./... && go test ./...
package main

import (
	"context"
	"fmt"
	"log"
	"os"
	"path/filepath"
	"strings"

	"example.org/closedform/linsys"
)

func main() {
	log.SetFlags(0)
	if len(os.Args) != 2 {
		log.Fatal("usage: gosources DIR")
	}
	files, err := filepath.Glob("testdata/golden/*.model")
	if err != nil || len(files) < 40 {
		log.Fatalf("%d golden models, %v", len(files), err)
	}
	if err := os.WriteFile(filepath.Join(os.Args[1], "go.mod"), []byte("module example.org/responses\n\ngo 1.26\n"), 0o644); err != nil {
		log.Fatal(err)
	}
	tests := 0
	for _, file := range files {
		tested, err := write(file)
		if err != nil {
			log.Fatalf("%s: %v", file, err)
		}
		if tested {
			tests++
		}
	}
	fmt.Printf("%d packages, %d with a test of values\n", len(files), tests)
}

// write writes the package of a model, and tells whether it has a test.
func write(file string) (tested bool, err error) {
	text, err := os.ReadFile(file)
	if err != nil {
		return false, err
	}
	m, err := linsys.Read(string(text))
	if err != nil {
		return false, err
	}
	ctx := context.Background()
	r, err := m.ClosedForm(ctx)
	if err != nil {
		return false, err
	}
	name := strings.TrimSuffix(filepath.Base(file), ".model")
	dir := filepath.Join(os.Args[1], name)
	if err := os.Mkdir(dir, 0o755); err != nil {
		return false, err
	}
	opt := linsys.GoOptions{Package: strings.ReplaceAll(name, "-", "")}
	src, err := r.GoSource(ctx, opt)
	if err != nil {
		return false, err
	}
	if err := os.WriteFile(filepath.Join(dir, "response.go"), src, 0o644); err != nil {
		return false, err
	}
	if len(r.Parameters()) > 0 {
		return false, nil
	}
	test, err := r.GoTest(ctx, opt)
	if err != nil {
		return false, err
	}
	return true, os.WriteFile(filepath.Join(dir, "response_test.go"), test, 0o644)
}
