package workspace

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"runtime/debug"
	"testing"

	"github.com/stretchr/testify/require"

	"halfplane/analysis"
)

// folder fills a folder with n copies of the reference designs and gives their paths.
func folder(b *testing.B, n int) (root string, paths []string) {
	names, err := filepath.Glob("../testdata/reference/*.converter.yaml")
	require.NoError(b, err)
	root = b.TempDir()
	for i := range n {
		text, err := os.ReadFile(names[i%len(names)])
		require.NoError(b, err)
		path := filepath.Join(root, fmt.Sprintf("%05d.converter.yaml", i))
		require.NoError(b, os.WriteFile(path, text, 0o666))
		paths = append(paths, path)
	}
	return root, paths
}

// BenchmarkCheckOneFile is what a person waits for: reading, validating, analysing and judging one boost.
func BenchmarkCheckOneFile(b *testing.B) {
	const name = "../testdata/reference/beacon-boost-type3.converter.yaml"
	for _, depth := range []struct {
		name string
		analysis.Depth
	}{{"quick", analysis.Quick}, {"full", analysis.Full}} {
		b.Run(depth.name, func(b *testing.B) {
			defer debug.SetGCPercent(debug.SetGCPercent(400)) // as the program does
			w := Open(filepath.Dir(name))
			b.ReportAllocs()
			for b.Loop() {
				if f := w.CheckFile(context.Background(), name, Options{Depth: depth.Depth}); f.Result == nil {
					b.Fatal("not analysed")
				}
			}
		})
	}
}

// BenchmarkCheckFolder checks 200 designs of every topology at quick depth, searching included.
func BenchmarkCheckFolder(b *testing.B) {
	root, paths := folder(b, 200)
	b.ReportAllocs()
	checked := 0
	for b.Loop() {
		items, err := Find([]string{root}, "")
		if err != nil || len(items) != len(paths) {
			b.Fatal("not all files found")
		}
		Each(context.Background(), items, Options{Depth: analysis.Quick}, func(f File) { checked++ })
	}
	b.ReportMetric(float64(checked)/b.Elapsed().Seconds(), "designs/s")
}

// BenchmarkDependents answers which of 200 designs use a shared file, after the first time from memory.
func BenchmarkDependents(b *testing.B) {
	root, _ := folder(b, 200)
	w := Open(root)
	w.Dependents(filepath.Join(root, "store.parts.yaml"))
	for b.Loop() {
		w.Dependents(filepath.Join(root, "store.parts.yaml"))
	}
}
