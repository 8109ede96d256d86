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
