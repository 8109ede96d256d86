package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"log/slog"
	"net"
	"net/http"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"time"

	"github.com/prometheus/client_golang/prometheus"
	"github.com/prometheus/client_golang/prometheus/collectors"
	"github.com/prometheus/client_golang/prometheus/promhttp"
	"github.com/spf13/cobra"

	"swardbook/bot/command"
	"swardbook/bot/discord"
	"swardbook/bot/schedule"
	"swardbook/planner"
	"swardbook/storage/sqlite"
)

// serving are the settings of serve: flags, then the environment.
type serving struct {
	db        string
	token     string // never printed
	tokenFile string
	// credentials is the folder in which systemd hands credentials over; it is
	// closed to others, and its files may show a group.
	credentials string
	chatURL     string
	listen      string
	unit        bool
	timing      discord.Timing
	now         func() time.Time
	// routeLog sends the client library's log to the program's, when not nil: the
	// library has one for all bots, so that only a program of one bot may.
	routeLog func(*slog.Logger)
}

// serveCommand is the bot in a chat server.
func serveCommand(env func(string) string) *cobra.Command {
	s := serving{token: env("SWARDBOOK_TOKEN"), chatURL: env("SWARDBOOK_CHAT_URL"), credentials: env("CREDENTIALS_DIRECTORY"), timing: discord.DefaultTiming(), now: time.Now,
		routeLog: discord.RouteLibraryLog}
	cmd := &cobra.Command{
		Use:   "serve",
		Short: "Be the bot in the team's chat server",
		Long: "Takes commands from the chat server and posts there, until it is told to stop (SIGTERM, SIGINT).\n" +
			"The token comes from SWARDBOOK_TOKEN, or from a file that only its owner can read. SWARDBOOK_CHAT_URL moves\n" +
			"REST, gateway and file downloads to another address, for tests and proxies.",
		Example: "  swardbook serve --db course.db --token-file token\n  swardbook serve --unit > /etc/systemd/system/swardbook.service",
		Args:    cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) error {
			if s.unit {
				return printUnit(cmd.OutOrStdout(), s)
			}
			return s.run(cmd.Context(), cmd.ErrOrStderr())
		},
	}
	cmd.Flags().StringVar(&s.db, "db", env("SWARDBOOK_DB"), "database file, made when it is not there (SWARDBOOK_DB)")
	cmd.Flags().StringVar(&s.tokenFile, "token-file", env("SWARDBOOK_TOKEN_FILE"), "file with the bot's token, readable by its owner only (SWARDBOOK_TOKEN_FILE)")
	cmd.Flags().StringVar(&s.listen, "listen", env("SWARDBOOK_LISTEN"), "loopback address for /healthz and /metrics, like 127.0.0.1:9464; none when not given (SWARDBOOK_LISTEN)")
	cmd.Flags().BoolVar(&s.unit, "unit", false, "print a systemd unit and do nothing else")
	return cmd
}

// grace is how long the data of a team that took the bot out is kept.
const grace = 30 * 24 * time.Hour

// run serves until the context ends: posts stop first, then the gateway, then
// what still runs is finished, then the file is closed.
func (s serving) run(ctx context.Context, errOut io.Writer) (err error) {
	token, err := s.secret()
	if err != nil {
		return err
	}
	if s.db == "" {
		return planner.Problemf(planner.Missing, "Which database?").
			WithHint("Add --db course.db (it is made when it is not there), or set SWARDBOOK_DB.")
	}
	lock, err := sqlite.LockServing(ctx, s.db)
	if err != nil {
		return err
	}
	defer func() { err = errors.Join(err, lock.Close()) }()
	db, err := sqlite.Open(ctx, s.db)
	if err != nil {
		return err
	}
	defer func() { err = errors.Join(err, db.Close()) }()
	log := slog.New(slog.NewJSONHandler(errOut, &slog.HandlerOptions{ReplaceAttr: discord.Redactor(token)}))
	if s.routeLog != nil {
		s.routeLog(log)
	}
	registry := prometheus.NewRegistry()
	registry.MustRegister(collectors.NewGoCollector())
	metrics, err := discord.NewMetrics(registry)
	if err != nil {
		return err
	}
	teams := newTeams(db, log)
	bot, err := discord.New(discord.Config{Token: token, BaseURL: s.chatURL, House: teams, Table: command.Desk{}.Table(nil),
		Log: log, Metrics: metrics, Now: s.now, Timing: s.timing})
	if err != nil {
		return err
	}
	health := &health{now: s.now}
	stopListening, err := s.serveHealth(health, registry, log)
	if err != nil {
		return err
	}
	defer stopListening()
	log.Info("serving", "db", s.db, "version", version())
	ticks, stopTicks := context.WithCancel(ctx)
	ticked := make(chan struct{})
	go func() {
		defer close(ticked)
		schedule.EachMinute(ticks, s.now, func(ctx context.Context, now time.Time) {
			tick(ctx, teams, bot, metrics, log, now)
			health.ticked()
		})
	}()
	err = bot.Run(ctx)
	stopTicks()
	<-ticked
	log.Info("stopped")
	return err
}

// secret is the token: from the environment, or from a file that nobody else
// can read.
func (s serving) secret() (string, error) {
	if s.token != "" {
		return strings.TrimPrefix(strings.TrimSpace(s.token), "Bot "), nil
	}
	if s.tokenFile == "" {
		return "", planner.Problemf(planner.Missing, "The bot's token is not there.").
			WithHint("Put it into SWARDBOOK_TOKEN, or into a file that only you can read: --token-file token")
	}
	info, err := os.Stat(s.tokenFile)
	if err != nil {
		return "", planner.Problemf(planner.NotFound, "there is no token file %s that can be read", s.tokenFile).WithCause(err).
			WithHint("Name another one with --token-file.")
	}
	if info.IsDir() {
		return "", planner.Problemf(planner.Invalid, "the token file %s is a folder", s.tokenFile).WithHint("Name the file in it.")
	}
	others := os.FileMode(0o077)
	if s.credentials != "" && filepath.Dir(s.tokenFile) == filepath.Clean(s.credentials) {
		others = 0o007
	}
	if info.Mode().Perm()&others != 0 {
		return "", planner.Problemf(planner.Refused, "the token file %s can be read by others.", s.tokenFile).
			WithHint("Close it: chmod 600 %s. Then make a new token, if anybody else was on the machine.", s.tokenFile)
	}
	raw, err := os.ReadFile(s.tokenFile)
	if err != nil {
		return "", planner.Problemf(planner.Refused, "the token file %s cannot be read", s.tokenFile).WithCause(err).
			WithHint("See that you own it.")
	}
	token := strings.TrimPrefix(strings.TrimSpace(string(raw)), "Bot ")
	if token == "" || strings.ContainsAny(token, " \t\r\n") {
		return "", planner.Problemf(planner.Invalid, "the token file %s does not hold one token.", s.tokenFile).
			WithHint("It holds the token from the application's Bot page and nothing else.")
	}
	return token, nil
}

// tick does what is due in every team, and erases what is past its grace.
func tick(ctx context.Context, teams *teams, bot *discord.Bot, metrics *discord.Metrics, log *slog.Logger, now time.Time) {
	servers, err := teams.Teams(ctx)
	if err != nil {
		log.Error("list servers", "error", err)
		return
	}
	var all sync.WaitGroup
	places := make(chan struct{}, atOnce)
	for _, server := range servers {
		places <- struct{}{}
		all.Go(func() {
			defer func() { <-places }()
			if err := tickTeam(ctx, teams, server, bot, metrics, log, now); err != nil && ctx.Err() == nil {
				log.Error("posts", "server", server, "error", err)
			}
		})
	}
	all.Wait()
	if now.Minute() == 0 {
		switch n, err := teams.db.EraseLeft(ctx, now.Add(-grace)); {
		case err != nil && ctx.Err() == nil:
			log.Error("erase what is past its grace", "error", err)
		case n > 0:
			log.Warn("erased teams that left", "teams", n)
		}
	}
}

// atOnce is how many teams' posts are seen to at a time, so that one server's
// trouble does not keep the others waiting.
const atOnce = 8

// mostTick bounds the posts of one team in one tick; what is left is settled
// by the next.
const mostTick = 2 * time.Minute

func tickTeam(ctx context.Context, teams *teams, server string, bot *discord.Bot, metrics *discord.Metrics, log *slog.Logger, now time.Time) (err error) {
	defer func() {
		if cause := recover(); cause != nil {
			err = fmt.Errorf("panic: %v", cause)
		}
	}()
	team, err := teams.Team(ctx, server)
	if err != nil {
		return err
	}
	ctx, cancel := context.WithTimeout(ctx, mostTick)
	defer cancel()
	runner := schedule.Runner{Setup: team.Book, Ledger: team.Posts, Writer: schedule.Desk{Table: team.Table, Book: team.Book},
		Channels: bot.Channels(team.Lines), Log: log.With("server", server), Count: metrics.Post}
	return runner.Tick(ctx, now)
}

// printUnit prints a systemd unit that runs this program as the user's own
// service.
func printUnit(out io.Writer, s serving) error {
	program, err := os.Executable()
	if err != nil {
		return fmt.Errorf("find the program: %w", err)
	}
	db := s.db
	if db == "" {
		db = "/var/lib/swardbook/course.db"
	}
	if db, err = filepath.Abs(db); err != nil {
		return fmt.Errorf("find the database: %w", err)
	}
	_, err = fmt.Fprintf(out, unit, program, db, filepath.Dir(db))
	return err
}

// unit runs the bot with no more rights than it needs. The token is a
// credential of the service: it stands in no environment and no command line.
const unit = `[Unit]
Description=Swardbook in the team's chat server
Wants=network-online.target
After=network-online.target

[Service]
ExecStart=%[1]s serve --db %[2]s --token-file %%d/token --listen 127.0.0.1:9464
# The token file: owned by root, mode 0600.
LoadCredential=token:/etc/swardbook/token
DynamicUser=yes
StateDirectory=swardbook
ReadWritePaths=-%[3]s
Restart=on-failure
RestartSec=10
# It finishes what it was asked for before it goes.
TimeoutStopSec=60
NoNewPrivileges=yes
ProtectSystem=strict
ProtectHome=yes
PrivateTmp=yes
PrivateDevices=yes
ProtectKernelTunables=yes
ProtectControlGroups=yes
RestrictAddressFamilies=AF_INET AF_INET6 AF_UNIX
SystemCallArchitectures=native

[Install]
WantedBy=multi-user.target
`

// serveHealth serves /healthz and /metrics on a loopback address, if one is
// given, and logs which it is: port 0 is any free one. Neither is for the outside.
func (s serving) serveHealth(health *health, registry *prometheus.Registry, log *slog.Logger) (stop func(), err error) {
	if s.listen == "" {
		return func() {}, nil
	}
	host, _, err := net.SplitHostPort(s.listen)
	if ip := net.ParseIP(host); err != nil || host != "localhost" && (ip == nil || !ip.IsLoopback()) {
		return nil, planner.Problemf(planner.Invalid, "--listen %q is no loopback address.", s.listen).
			WithHint("Write it like 127.0.0.1:9464; it is not for the outside.")
	}
	listener, err := net.Listen("tcp", s.listen)
	if err != nil {
		return nil, planner.Problemf(planner.Refused, "cannot listen on %s: %v", s.listen, err).WithHint("Choose another port.")
	}
	log.Info("listening", "address", listener.Addr().String())
	mux := http.NewServeMux()
	mux.Handle("/healthz", health)
	mux.Handle("/metrics", promhttp.HandlerFor(registry, promhttp.HandlerOpts{}))
	server := &http.Server{Handler: mux, ReadHeaderTimeout: 5 * time.Second}
	go func() { _ = server.Serve(listener) }() // ends with Close
	return func() { _ = server.Close() }, nil
}
