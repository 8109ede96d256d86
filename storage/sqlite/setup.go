package sqlite

import (
	"context"
	"database/sql"

	"swardbook/planner"
)

// Conditions on what is under a site or a surface: it is hidden with it.
const (
	notArchived = `archived = 0`
	isArchived  = `archived = 1`
	siteOpen    = notArchived + underOpenSite
	surfaceOpen = notArchived + underOpenSurface

	underOpenSite    = ` AND (team, site) IN (SELECT team, id FROM site WHERE archived = 0)`
	underOpenSurface = ` AND (team, surface) IN (SELECT team, id FROM surface WHERE archived = 0` + underOpenSite + `)`
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
		if setup.Dropped, err = (works{}).list(ctx, conn, t.id, isArchived+underOpenSurface); err != nil {
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

// Dropped returns the sites, surfaces and works that are archived, each list in
// the order in which it was added; surfaces and works only of what is not
// archived itself.
func (t *Team) Dropped(ctx context.Context) (planner.Setup, error) {
	var dropped planner.Setup
	err := t.db.read(ctx, "read what was dropped", func(conn *sql.Conn) (err error) {
		if dropped.Sites, err = (sites{}).list(ctx, conn, t.id, isArchived); err != nil {
			return err
		}
		if dropped.Surfaces, err = (surfaces{}).list(ctx, conn, t.id, isArchived+underOpenSite); err != nil {
			return err
		}
		dropped.Works, err = (works{}).list(ctx, conn, t.id, isArchived+underOpenSurface)
		return err
	})
	if err != nil {
		return planner.Setup{}, err
	}
	return dropped, nil
}
