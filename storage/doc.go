// Package storage joins the two rooms of what is kept: station files are read
// by intake and merged into the record by sqlite.
//
// It must not know how a file is laid out or how the record is stored, and it
// decides one thing only: whether a file with refused rows is taken.
package storage
