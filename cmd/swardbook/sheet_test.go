package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// The week is saved under --out, each issue under a number of its own, and a
// bad number of weeks is refused with the range.
func TestSheetIsSaved(t *testing.T) {
	folder := t.TempDir()
	lines := strings.Join([]string{
		"/setup site add name:Quillmere lat:40 lon:-74 zone:UTC",
		"/setup surface add name:greens grass:cool",
		"/setup work add surface:greens name:cut counts:days target:3",
		"/done surfaces:greens works:cut when:2024-06-09",
		"/sheet get", "/sheet get greens weeks:2 paper:letter",
	}, "\n")
	_, errOut, status := program(t, lines, "chat", "--db", filepath.Join(folder, "course.db"), "--as", "lead", "--now", "2024-06-11T05:30", "--out", folder)
	if status != 0 {
		t.Fatalf("status %d: %s", status, errOut)
	}
	for _, name := range []string{"week-2024-06-11-1.xlsx", "week-2024-06-11-2.xlsx"} {
		content, err := os.ReadFile(filepath.Join(folder, name))
		if err != nil || !bytes.HasPrefix(content, []byte("PK")) {
			t.Errorf("%s: %v", name, err)
		}
	}
	out, errOut, status := program(t, "/sheet get weeks:9", "chat", "--db", filepath.Join(folder, "course.db"), "--now", "2024-06-11T05:30", "--out", folder)
	if status == 0 || !strings.Contains(out+errOut, "Weeks cannot be 9") {
		t.Errorf("9 weeks: status %d, %s%s", status, out, errOut)
	}
}
