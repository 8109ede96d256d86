package command

import (
	"archive/zip"
	"bytes"
	"context"
	"fmt"
	"slices"
	"time"

	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) setupData() []Command {
	return []Command{
		{Path: "setup data export", Short: "all that is kept of a site, as open files", Who: Lead, Options: []Option{d.siteOption()},
			Long:     "A zip of comma-separated files: readings, days, log, set-up, changes. Days are dates, times are UTC, temperatures °C. A site that was dropped is named with site:.",
			Examples: []string{"/setup data export"}, Run: d.runDataExport},
		{Path: "setup data erase", Short: "erase a site, or all that is kept, for good; asks twice", Who: Lead,
			Options: []Option{
				{Name: "sure", Kind: Yes, Help: "yes once you have read what will be gone"},
				{Name: "everything", Kind: Yes, Help: "not one site but all sites, posts and people of this server"},
				d.siteOption(),
			},
			Examples: []string{"/setup data erase site:Quillmere"}, Run: d.runDataErase},
	}
}

func (d Desk) runDataExport(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.siteOrDropped(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	if d.Data == nil {
		return reply.Reply{}, planner.Problemf(planner.Refused, "data cannot be exported here")
	}
	files, err := d.Data.Export(ctx, v.site.ID)
	if err != nil {
		return reply.Reply{}, err
	}
	packed, err := pack(files, v.NowAt(v.zone))
	if err != nil {
		return reply.Reply{}, err
	}
	if len(packed) > reply.MaxFileBytes {
		return reply.Reply{}, planner.Problemf(planner.Refused, "The export has %d MB, too much for a chat.", len(packed)>>20).
			WithHint("Whoever runs the program can copy the database file: it is an open format.")
	}
	name := planner.NameKey(v.site.Name)
	if !fileSafe(name) {
		name = fmt.Sprintf("site-%d", v.site.ID)
	}
	out := reply.Of(reply.Textf("All that is kept of %s, in %d files.", v.site.Name, len(files)),
		reply.File{Name: name + "-data.zip", Content: packed})
	out.Private = true
	return out, nil
}

func fileSafe(name string) bool {
	return !slices.ContainsFunc([]rune(name), func(r rune) bool {
		return (r < 'a' || r > 'z') && (r < '0' || r > '9') && r != '-'
	})
}

// pack puts files into a zip.
func pack(files []planner.DataFile, at time.Time) ([]byte, error) {
	var out bytes.Buffer
	archive := zip.NewWriter(&out)
	for _, file := range files {
		into, err := archive.CreateHeader(&zip.FileHeader{Name: file.Name, Method: zip.Deflate, Modified: at})
		if err == nil {
			_, err = into.Write(file.Content)
		}
		if err != nil {
			return nil, fmt.Errorf("pack %s: %w", file.Name, err)
		}
	}
	err := archive.Close()
	return out.Bytes(), err
}

// runDataErase asks twice: first it says what will be gone and gives the line
// to go on with; that line asks once more.
func (d Desk) runDataErase(ctx context.Context, req Request) (reply.Reply, error) {
	if d.Data == nil {
		return reply.Reply{}, planner.Problemf(planner.Refused, "data cannot be erased here")
	}
	what, erase := "everything that is kept of this server: all sites, the log, posts, people", d.Data.EraseTeam
	line, export := "/setup data erase sure:yes everything:yes", "/setup data export"
	if all, _ := req.Values.Yes("everything"); !all {
		v, err := d.siteOrDropped(ctx, req)
		if err != nil {
			return reply.Reply{}, err
		}
		what = "all that is kept of " + v.site.Name + ": weather, log, set-up, posts, the change log"
		erase = func(ctx context.Context) error { return d.Data.EraseSite(ctx, v.site.ID) }
		line = Line("setup data erase", Pair{"sure", "yes"}, Pair{"site", v.site.Name})
		export = Line("setup data export", Pair{"site", v.site.Name})
	}
	sure, _ := req.Values.Yes("sure")
	switch {
	case !sure:
		return reply.Reply{Private: true, Blocks: []reply.Block{
			reply.Textf("This erases %s. It cannot be undone; copies that you exported stay yours.", what),
			reply.Actions{{Label: "Export first", Line: export}, {Label: "Erase…", Line: line}}}}, nil
	case !req.Confirmed:
		return reply.Reply{Private: true, Blocks: []reply.Block{reply.Textf("Erases %s.", what)},
			Confirm: &reply.Confirm{Question: "Erase it for good?", Line: line}}, nil
	}
	if err := erase(ctx); err != nil {
		return reply.Reply{}, err
	}
	return reply.Reply{Private: true, Blocks: []reply.Block{reply.Textf("Erased %s.", what)}}, nil
}
