package sqlite

import (
	"context"
	"database/sql"
	"encoding/json"
	"time"

	"swardbook/planner"
)

var (
	_ planner.PostLedger = (*Team)(nil)
	_ planner.LineKeeper = (*Team)(nil)
	_ planner.DataKeeper = (*Team)(nil)
)

// Postings returns, by post, day and part, the rows of the day and after,
// every claimed row, and of each post the rows of its newest day.
func (t *Team) Postings(ctx context.Context, from planner.Day) ([]planner.Posting, error) {
	postings, err := collect(ctx, t.db.reader, func(rows *sql.Rows) (p planner.Posting, err error) {
		var at int64
		var figures string
		err = rows.Scan(&p.Post, &p.Day, &p.Part, &p.State, &at, &p.Message, &p.Reason, &p.Partial, &figures, &p.Channel, &p.Unsure)
		p.At = time.Unix(at, 0).UTC()
		if err == nil && figures != "" {
			err = json.Unmarshal([]byte(figures), &p.Figures)
		}
		return p, err
	}, `SELECT post, day, part, state, at, message, reason, partial, figures, channel, unsure FROM posting AS p
		WHERE team = ?1 AND (day >= ?2 OR state = 'claimed'
			OR day = (SELECT max(day) FROM posting WHERE team = ?1 AND post = p.post))
		ORDER BY post, day, part`, t.id, from)
	return postings, storeError(t.db.name, "read the ledger of posts", err)
}

// Claim adds a row, and reports false when the post has one for that day and
// part already. A post that is not the team's is a NotFound problem.
func (t *Team) Claim(ctx context.Context, p planner.Posting) (claimed bool, err error) {
	err = t.db.write(ctx, "claim a post", func(conn *sql.Conn) error {
		if err := mustExist(ctx, conn, "post", int64(p.Post), `SELECT 1 FROM post WHERE team = ? AND id = ?`, t.id, p.Post); err != nil {
			return err
		}
		result, err := conn.ExecContext(ctx, `INSERT INTO posting (team, post, day, part, state, at, message, reason, partial, channel, unsure)
			VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?) ON CONFLICT DO NOTHING`,
			t.id, p.Post, p.Day, p.Part, p.State, p.At.Unix(), p.Message, p.Reason, p.Partial, p.Channel, p.Unsure)
		if err != nil {
			return err
		}
		rows, err := result.RowsAffected()
		claimed = rows == 1
		return err
	})
	return claimed && err == nil, err
}

// Settle says what became of a claimed row. A row that is not there, or no
// longer claimed, is a NotFound problem.
func (t *Team) Settle(ctx context.Context, p planner.Posting) error {
	figures := ""
	if len(p.Figures) > 0 {
		text, err := encode(p.Figures)
		if err != nil {
			return err
		}
		figures = text
	}
	return t.db.write(ctx, "settle a post", func(conn *sql.Conn) error {
		result, err := conn.ExecContext(ctx, `UPDATE posting SET state = ?, at = ?, message = ?, reason = ?, partial = ?, figures = ?, channel = ?, unsure = ?
			WHERE team = ? AND post = ? AND day = ? AND part = ? AND state = 'claimed'`,
			p.State, p.At.Unix(), p.Message, p.Reason, p.Partial, figures, p.Channel, p.Unsure, t.id, p.Post, p.Day, p.Part)
		if err != nil {
			return err
		}
		if rows, err := result.RowsAffected(); err != nil || rows == 1 {
			return err
		}
		return planner.Problemf(planner.NotFound, "the post of %s is not claimed", p.Day)
	})
}

// lineCounter gives the numbers of kept lines.
const lineCounter = "line"

// KeepLine keeps the line and returns its number; the same line has one.
func (t *Team) KeepLine(ctx context.Context, line string, at time.Time) (number int64, err error) {
	find := func(on session) error {
		return on.QueryRowContext(ctx, `SELECT id FROM line WHERE team = ? AND line = ?`, t.id, line).Scan(&number)
	}
	if err := find(t.db.reader); err != sql.ErrNoRows {
		return number, storeError(t.db.name, "look up a line", err)
	}
	err = t.db.write(ctx, "keep a line", func(conn *sql.Conn) error {
		if err := find(conn); err != sql.ErrNoRows {
			return err
		}
		if number, err = next(ctx, conn, t.id, lineCounter); err != nil {
			return err
		}
		_, err = conn.ExecContext(ctx, `INSERT INTO line (team, id, line, at) VALUES (?, ?, ?, ?)`, t.id, number, line, at.Unix())
		return err
	})
	return number, err
}

// Line returns the line with the number, or a NotFound problem.
func (t *Team) Line(ctx context.Context, number int64) (line string, err error) {
	err = t.db.reader.QueryRowContext(ctx, `SELECT line FROM line WHERE team = ? AND id = ?`, t.id, number).Scan(&line)
	if err == sql.ErrNoRows {
		return "", planner.Problemf(planner.NotFound, "this button is too old").WithHint("Type the command instead.")
	}
	return line, storeError(t.db.name, "look up a line", err)
}
