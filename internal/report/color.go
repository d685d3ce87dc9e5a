package report

import (
	"fmt"
	"image/color"
	"math"
)

// curveColors are for light and dark paper: Okabe and Ito, by B. Wong, Nature Methods 8, 441
// (2011), from memory; the dark ones are lightened where they would sink.
func curveColors() (light, dark []string) {
	return []string{"#0072b2", "#d55e00", "#009e73", "#a8487f", "#b07800", "#2e7fa8", "#444444"},
		[]string{"#56b4e9", "#ff8c42", "#2fd3a4", "#e39ac6", "#e69f00", "#9ad1f0", "#cccccc"}
}

// dashes tell curves apart without colours.
func dashes() []string { return []string{"", "7 3", "2 3", "9 3 2 3", "12 4", "1 2", "5 2 1 2"} }

// labColor is a colour of CIE 1976 L*a*b* (ISO/CIE 11664-4): lightness and two hues.
type labColor struct{ l, a, b float64 }

// mapColor is the colour of a part of the way from the lowest to the highest value. The lightness
// rises evenly.
func mapColor(part float64) color.NRGBA {
	dark, grey, pale := labColor{16, 14, -40}, labColor{56, 0, 0}, labColor{96, -4, 38}
	part = math.Min(1, math.Max(0, part))
	from, to, t := dark, grey, 2*part
	if part > 0.5 {
		from, to, t = grey, pale, 2*part-1
	}
	return labColor{
		from.l + t*(to.l-from.l), from.a + t*(to.a-from.a), from.b + t*(to.b-from.b),
	}.rgb()
}

// rgb converts to sRGB (IEC 61966-2-1), white D65.
func (c labColor) rgb() color.NRGBA {
	inverse := func(t float64) float64 {
		const delta = 6.0 / 29
		if t > delta {
			return t * t * t
		}
		return 3 * delta * delta * (t - 4.0/29)
	}
	fy := (c.l + 16) / 116
	x := 0.95047 * inverse(fy+c.a/500)
	y := inverse(fy)
	z := 1.08883 * inverse(fy-c.b/200)
	channel := func(v float64) uint8 {
		if v <= 0.0031308 {
			v *= 12.92
		} else {
			v = 1.055*math.Pow(v, 1/2.4) - 0.055
		}
		return uint8(math.Round(255 * math.Min(1, math.Max(0, v))))
	}
	return color.NRGBA{
		R: channel(3.2406*x - 1.5372*y - 0.4986*z),
		G: channel(-0.9689*x + 1.8758*y + 0.0415*z),
		B: channel(0.0557*x - 0.2040*y + 1.0570*z), A: 255,
	}
}

// MapColors are n colours from the lowest to the highest value, as a web page writes them.
func MapColors(n int) []string {
	list := make([]string, n)
	for i := range list {
		c := mapColor(float64(i) / float64(n-1))
		list[i] = fmt.Sprintf("#%02x%02x%02x", c.R, c.G, c.B)
	}
	return list
}
