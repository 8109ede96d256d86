package sqlite

import (
	"context"
	"database/sql"
	"time"

	"swardbook/planner"
)

var _ planner.SheetKeeper = (*Team)(nil)

// sheetCounter gives the numbers of issued sheets.
const sheetCounter = "sheet"

// KeepSheet keeps a new sheet and returns it with its id. A site that is not
// the team's is a NotFound problem, and nothing is kept.
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
		return err
	})
	if err != nil {
		return planner.Sheet{}, err
	}
	return sheet, nil
}

// Sheet returns the issued sheet, or a NotFound problem.
func (t *Team) Sheet(ctx context.Context, id planner.SheetID) (planner.Sheet, error) {
	sheet := planner.Sheet{ID: id}
	var issued int64
	var inputs string
	err := t.db.reader.QueryRowContext(ctx, `SELECT site, form, as_of, issued, issuer, inputs, engine FROM sheet WHERE team = ? AND id = ?`, t.id, id).
		Scan(&sheet.Site, &sheet.Form, &sheet.AsOf, &issued, &sheet.By, &inputs, &sheet.Engine)
	if err == sql.ErrNoRows {
		return planner.Sheet{}, planner.Problemf(planner.NotFound, "there is no sheet %d", id).WithHint("/sheet get makes a new one.")
	}
	sheet.Issued, sheet.Inputs = time.Unix(issued, 0).UTC(), []byte(inputs)
	return sheet, storeError(t.db.name, "read a sheet", err)
}
