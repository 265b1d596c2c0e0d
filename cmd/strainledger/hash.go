package main

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"io"
	"os"
	"sync"

	"strainledger/energy"
)

// hashSources fills in the SHA-256 of every source of a ledger, so many files at a
// time. disk gives the file that holds a source's bytes.
func hashSources(ctx context.Context, sources []energy.SourceFile, workers int, disk func(string) string) error {
	var all sync.WaitGroup
	faults := make([]error, len(sources))
	places := make(chan struct{}, max(workers, 1))
	for i := range sources {
		all.Go(func() {
			places <- struct{}{}
			defer func() { <-places }()
			var sum string
			sum, faults[i] = hashFile(ctx, disk(sources[i].Path))
			sources[i].SHA256 = energy.Text(sum)
		})
	}
	all.Wait()
	for _, err := range faults {
		if err != nil {
			return err
		}
	}
	return nil
}

// hashFile returns the SHA-256 of a file in hexadecimal.
func hashFile(ctx context.Context, path string) (string, error) {
	file, err := os.Open(path)
	if err != nil {
		return "", err
	}
	defer file.Close()
	sum := sha256.New()
	buffer := make([]byte, 1<<20)
	for {
		if err := ctx.Err(); err != nil {
			return "", err
		}
		count, err := file.Read(buffer)
		sum.Write(buffer[:count])
		if err == io.EOF {
			return hex.EncodeToString(sum.Sum(nil)), nil
		}
		if err != nil {
			return "", err
		}
	}
}
