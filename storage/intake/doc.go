// Package intake reads station files into rows: readings, or daily highs and
// lows, in °C and UTC. It streams: a file of any length costs the memory of its
// longest line, which is bounded.
//
// It must not know where rows are kept, which site or team they belong to
// (beyond the site's standard time, which times without an offset are in), or
// what day it is now. It decides about rows only; whether a file with refused
// rows is still taken is decided by whoever reads it.
//
// A format is one file of code and one row in the table formats.
package intake
