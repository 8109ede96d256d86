package sqlite

import (
	"context"
	"database/sql"

	"swardbook/planner"
)

// Conditions on what is under a site or a surface: it is hidden with it.
const (
	notArchived = `archived = 0`
	siteOpen    = notArchived + ` AND (team, site) IN (SELECT team, id FROM site WHERE archived = 0)`
	onOpen      = `(team, surface) IN (SELECT team, id FROM surface WHERE ` + siteOpen + `)`
	surfaceOpen = notArchived + ` AND ` + onOpen
)

// Setup returns all that is set up and not archived, each list in the order in
// which it was added, and the works that were dropped. What is under an archived site or surface is left out
// with it, and comes back with it.
func (t *Team) Setup(ctx context.Context) (planner.Setup, error) {
	var setup planner.Setup
	err := t.db.read(ctx, "read what is set up", func(conn *sql.Conn) (err error) {
		if setup.Sites, err = (sites{}).list(ctx, conn, t.id, notArchived); err != nil {
			return err
		}
		if setup.Stations, err = (stations{}).list(ctx, conn, t.id, siteOpen); err != nil {
			return err
		}
		if setup.Surfaces, err = (surfaces{}).list(ctx, conn, t.id, siteOpen); err != nil {
			return err
		}
		if setup.Works, err = (works{}).list(ctx, conn, t.id, surfaceOpen); err != nil {
			return err
		}
		if setup.Dropped, err = (works{}).list(ctx, conn, t.id, `archived = 1 AND `+onOpen); err != nil {
			return err
		}
		if setup.Totals, err = (totals{}).list(ctx, conn, t.id, siteOpen); err != nil {
			return err
		}
		if setup.Closed, err = (closedDays{}).list(ctx, conn, t.id, siteOpen); err != nil {
			return err
		}
		if setup.Posts, err = (posts{}).list(ctx, conn, t.id, siteOpen); err != nil {
			return err
		}
		if setup.People, err = (peopleBound{}).list(ctx, conn, t.id, notArchived); err != nil {
			return err
		}
		setup.Channels, err = channels{}.list(ctx, conn, t.id, siteOpen)
		return err
	})
	if err != nil {
		return planner.Setup{}, err
	}
	return setup, nil
}
