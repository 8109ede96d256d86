package storage

import (
	"context"
	"crypto/sha256"
	"errors"
	"io"
	"strings"
	"testing"
	"testing/iotest"
)

// What is read through hashed is hashed once and in full, and a stopped context
// ends the reading.
func TestHashed(t *testing.T) {
	t.Parallel()
	content := "time,temp_c\n" + strings.Repeat("2013-07-01T05:00Z,17.8\n", 5000)
	ctx, cancel := context.WithCancel(t.Context())
	defer cancel()
	sum := sha256.New()
	read, err := io.ReadAll(hashed(ctx, iotest.HalfReader(strings.NewReader(content)), sum))
	if err != nil || string(read) != content {
		t.Fatalf("read %d bytes, error %v", len(read), err)
	}
	if want := sha256.Sum256([]byte(content)); string(sum.Sum(nil)) != string(want[:]) {
		t.Error("the sum is not that of the content")
	}
	reader := hashed(ctx, strings.NewReader(content), sha256.New())
	cancel()
	if n, err := reader.Read(make([]byte, 10)); n != 0 || !errors.Is(err, context.Canceled) {
		t.Errorf("read %d bytes, error %v after the context was stopped", n, err)
	}
}
