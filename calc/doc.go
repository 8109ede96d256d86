// Package calc is Swardbook's arithmetic with temperatures: daily means, degree
// days, growth potential, the nitrogen it draws, unit conversions, and the day
// on which a running total reaches a target.
//
// Everything inside is in °C, g/m² and days; the unit stands in the name
// (highC, ceilingGM2). Other units are converted once, at the edge, with the
// functions of this package.
//
// The package uses the standard library only. It must not know of sites,
// stations, surfaces, dates, time zones, files, logs or the clock: a day is
// here no more than its readings, or its high and low.
//
// Data is never a programmer's mistake: readings that are missing, swapped or
// not finite give an error which wraps one of the Err sentinels and says what to
// do. No function that returns an error ever returns NaN or an infinity, and
// when the error is not nil the number beside it is 0 and means nothing.
package calc
