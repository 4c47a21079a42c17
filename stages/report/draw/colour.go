package draw

import (
	"fmt"
	"math"
	"strings"
)

// Levels is the number of steps of the colour scale of displacements.
const Levels = 16

// scale is a path of colours in the OKLCh space (B. Ottosson, A perceptual
// color space for image processing, 2020): lightness runs evenly from one end
// to the other, so that the order of the steps survives any kind of colour
// blindness and a grey printer.
type scale struct {
	light0, light1   float64
	chroma0, chroma1 float64
	hue0, hue1       float64 // degrees
}

var (
	onLight = scale{0.90, 0.40, 0.035, 0.165, 240, 385} // pale blue to deep red, by way of violet
	onDark  = scale{0.36, 0.90, 0.045, 0.135, 250, 435} // slate to pale amber, by way of red
)

// at gives step k of Levels as #rrggbb.
func (s scale) at(k int) string {
	r, g, b := s.mixed(float64(k) / (Levels - 1))
	return fmt.Sprintf("#%02x%02x%02x", r, g, b)
}

// mixed gives the colour at a share 0 to 1 of the way.
func (s scale) mixed(t float64) (r, g, b uint8) {
	mix := func(a, b float64) float64 { return a + t*(b-a) }
	return oklch(mix(s.light0, s.light1), mix(s.chroma0, s.chroma1), mix(s.hue0, s.hue1))
}

// oklch converts to sRGB; chroma is lowered until the colour exists there.
func oklch(light, chroma, hue float64) (r, g, b uint8) {
	h := hue * math.Pi / 180
	for ; ; chroma -= 0.002 {
		rgb, fits := oklab(light, chroma*math.Cos(h), chroma*math.Sin(h))
		if fits || chroma <= 0 {
			return uint8(rgb[0]), uint8(rgb[1]), uint8(rgb[2])
		}
	}
}

func oklab(light, a, b float64) (rgb [3]int, fits bool) {
	cube := func(x float64) float64 { return x * x * x }
	l := cube(light + 0.3963377774*a + 0.2158037573*b)
	m := cube(light - 0.1055613458*a - 0.0638541728*b)
	s := cube(light - 0.0894841775*a - 1.2914855480*b)
	fits = true
	for i, x := range [3]float64{
		4.0767416621*l - 3.3077115913*m + 0.2309699292*s,
		-1.2684380046*l + 2.6097574011*m - 0.3413193965*s,
		-0.0041960863*l - 0.7034186147*m + 1.7076147010*s,
	} {
		if x < -1e-4 || x > 1+1e-4 {
			fits = false
		}
		x = math.Min(1, math.Max(0, x))
		if x <= 0.0031308 {
			x *= 12.92
		} else {
			x = 1.055*math.Pow(x, 1/2.4) - 0.055
		}
		rgb[i] = int(math.Round(255 * x))
	}
	return rgb, fits
}

// OnLight gives a colour of the scale on a light page, 0 to 1.
func OnLight(t float64) (r, g, b uint8) { return onLight.mixed(t) }

// level gives the class of a share 0 to 1 of the largest displacement.
func level(share float64) int {
	return max(0, min(Levels-1, int(share*Levels)))
}

// Style gives the rules of the colour scale, classes k0 to k15, on a light and on a dark page.
func Style() (light, dark string) {
	rules := func(s scale) string {
		var b strings.Builder
		for k := range Levels {
			c := s.at(k)
			fmt.Fprintf(&b, ".k%d{fill:%s;stroke:%s}", k, c, c)
		}
		return b.String() + "\n"
	}
	return rules(onLight), rules(onDark)
}

// Scales gives the steps of the colour scale, on a light and on a dark page.
func Scales() (light, dark []string) {
	for k := range Levels {
		light, dark = append(light, onLight.at(k)), append(dark, onDark.at(k))
	}
	return light, dark
}
