package chart_test

import (
	"image"
	"image/color"
)

// inks counts the greys, in eighths, that cover a visible part of the picture.
func inks(picture image.Image) int {
	const visible = 300 // dots
	counts := map[uint8]int{}
	bounds := picture.Bounds()
	for y := bounds.Min.Y; y < bounds.Max.Y; y++ {
		for x := bounds.Min.X; x < bounds.Max.X; x++ {
			counts[color.GrayModel.Convert(picture.At(x, y)).(color.Gray).Y/32]++
		}
	}
	found := 0
	for _, count := range counts {
		if count > visible {
			found++
		}
	}
	return found
}

// levelLines counts the level lines of a picture, also dotted ones: runs of rows
// in which much of the width is darker than the grid, above axis and legend.
func levelLines(picture image.Image) int {
	bounds := picture.Bounds()
	lines, inside := 0, false
	for y := bounds.Min.Y; y < bounds.Max.Y*7/10; y++ {
		inked := 0
		for x := bounds.Min.X; x < bounds.Max.X; x++ {
			if color.GrayModel.Convert(picture.At(x, y)).(color.Gray).Y < 190 {
				inked++
			}
		}
		if is := inked > bounds.Dx()/5; is != inside {
			inside = is
			if is {
				lines++
			}
		}
	}
	return lines
}
