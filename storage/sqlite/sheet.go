package sqlite

import (
	"context"
	"crypto/sha256"
	"database/sql"
	"errors"
	"time"

	"swardbook/planner"
)

var _ planner.SheetKeeper = (*Team)(nil)

// These give the numbers of issued sheets and of the days ahead they stand on.
const (
	sheetCounter   = "sheet"
	outlookCounter = "outlook"
)

// KeepSheet keeps a new sheet and its outlook and returns them with their ids;
// equal outlooks are one. A site that is not the team's is a NotFound problem,
// and nothing is kept.
func (t *Team) KeepSheet(ctx context.Context, sheet planner.Sheet) (planner.Sheet, error) {
	err := t.db.write(ctx, "keep a sheet", func(conn *sql.Conn) error {
		if err := mustExist(ctx, conn, "site", int64(sheet.Site), `SELECT 1 FROM site WHERE team = ? AND id = ?`, t.id, sheet.Site); err != nil {
			return err
		}
		id, err := next(ctx, conn, t.id, sheetCounter)
		if err != nil {
			return err
		}
		sheet.ID = planner.SheetID(id)
		_, err = conn.ExecContext(ctx, `INSERT INTO sheet (team, id, site, form, as_of, issued, issuer, inputs, engine) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?)`,
			t.id, id, sheet.Site, sheet.Form, sheet.AsOf, sheet.Issued.Unix(), sheet.By, string(sheet.Inputs), sheet.Engine)
		if err != nil || len(sheet.Outlook.Path) == 0 {
			return err
		}
		if sheet.Outlook, err = t.keepOutlook(ctx, conn, sheet.Site, sheet.Outlook); err != nil {
			return err
		}
		_, err = conn.ExecContext(ctx, `INSERT INTO sheet_outlook (team, sheet, outlook) VALUES (?, ?, ?)`, t.id, id, sheet.Outlook.ID)
		return err
	})
	if err != nil {
		return planner.Sheet{}, err
	}
	return sheet, nil
}

// keepOutlook returns the outlook as kept: the one that is there with the same
// path on the same day, else this one with a new id.
func (t *Team) keepOutlook(ctx context.Context, conn *sql.Conn, site planner.SiteID, outlook planner.IssuedOutlook) (planner.IssuedOutlook, error) {
	digest := sha256.Sum256(outlook.Path)
	err := conn.QueryRowContext(ctx, `SELECT id FROM outlook WHERE team = ? AND site = ? AND as_of = ? AND revision = ? AND engine = ? AND start_day = ? AND digest = ?`,
		t.id, site, outlook.AsOf, outlook.Revision, outlook.Engine, outlook.Start, digest[:]).Scan(&outlook.ID)
	switch {
	case err == nil:
		return readOutlook(ctx, conn, t.id, outlook.ID)
	case !errors.Is(err, sql.ErrNoRows):
		return planner.IssuedOutlook{}, err
	}
	id, err := next(ctx, conn, t.id, outlookCounter)
	if err != nil {
		return planner.IssuedOutlook{}, err
	}
	_, err = conn.ExecContext(ctx, `INSERT INTO outlook (team, id, site, as_of, at, revision, sources, typed, years, seed, engine, start_day, path, digest)
		VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
		t.id, id, site, outlook.AsOf, outlook.Issued.Unix(), outlook.Revision, outlook.Sources, outlook.Typed, outlook.Years, outlook.Seed,
		outlook.Engine, outlook.Start, string(outlook.Path), digest[:])
	outlook.ID = planner.OutlookID(id)
	return outlook, err
}

// readOutlook reads an outlook that is there.
func readOutlook(ctx context.Context, on session, team int64, id planner.OutlookID) (planner.IssuedOutlook, error) {
	outlook := planner.IssuedOutlook{ID: id}
	var at int64
	var path string
	err := on.QueryRowContext(ctx, `SELECT as_of, at, revision, sources, typed, years, seed, engine, start_day, path FROM outlook WHERE team = ? AND id = ?`, team, id).
		Scan(&outlook.AsOf, &at, &outlook.Revision, &outlook.Sources, &outlook.Typed, &outlook.Years, &outlook.Seed, &outlook.Engine, &outlook.Start, &path)
	outlook.Issued, outlook.Path = time.Unix(at, 0).UTC(), []byte(path)
	return outlook, err
}

// Sheet returns the issued sheet and its outlook, or a NotFound problem.
func (t *Team) Sheet(ctx context.Context, id planner.SheetID) (planner.Sheet, error) {
	sheet := planner.Sheet{ID: id}
	err := t.db.read(ctx, "read a sheet", func(conn *sql.Conn) error {
		var issued int64
		var inputs string
		var outlook sql.NullInt64
		err := conn.QueryRowContext(ctx, `SELECT s.site, s.form, s.as_of, s.issued, s.issuer, s.inputs, s.engine, o.outlook
			FROM sheet AS s LEFT JOIN sheet_outlook AS o ON o.team = s.team AND o.sheet = s.id WHERE s.team = ? AND s.id = ?`, t.id, id).
			Scan(&sheet.Site, &sheet.Form, &sheet.AsOf, &issued, &sheet.By, &inputs, &sheet.Engine, &outlook)
		if errors.Is(err, sql.ErrNoRows) {
			return planner.Problemf(planner.NotFound, "there is no sheet %d", id).WithHint("/sheet get makes a new one.")
		}
		sheet.Issued, sheet.Inputs = time.Unix(issued, 0).UTC(), []byte(inputs)
		if err == nil && outlook.Valid {
			sheet.Outlook, err = readOutlook(ctx, conn, t.id, planner.OutlookID(outlook.Int64))
		}
		return err
	})
	return sheet, err
}
