package impedance

import (
	"math"
	"path"
	"regexp"
	"strconv"
	"strings"

	"brinkfield/physics/quantity"
)

// MaxTemperature is the highest temperature in K that is believed.
const MaxTemperature = 3500.0

const (
	temperatureNumber = `(-?\d+(?:[.,]\d+)?)`
	temperatureUnit   = `(?:(?:°|º|deg\.?|degrees?)\s*(C)|(C|K)|(?i:(celsius|kelvin)))`
)

var (
	// "T = 300 C", "temperature: 573,15 K", "T=300°C"
	textNamed = regexp.MustCompile(`(?:^|[^\pL])(?:[Tt]|(?i:temp|temperature|temperatur))(?:\s+(?i:of\s+\w+|sample))?\s*[=:,;]?\s*` + temperatureNumber + `\s*` + temperatureUnit + `(?:$|[^\pL])`)
	// "Temperature (°C): 300", "T/K = 573"
	textUnitFirst = regexp.MustCompile(`(?:^|[^\pL])(?:[Tt]|(?i:temp|temperature|temperatur))\s*[/\[(]\s*` + temperatureUnit + `\s*[\])]?\s*[=:,;\s]\s*` + temperatureNumber + `(?:$|[^\d.,])`)
	// "measured at 300 °C": without a name the degree sign or the word is needed
	textDegrees = regexp.MustCompile(temperatureNumber + `\s*(?:(?:°|º|deg\.?|degrees?)\s*(C)|(?i:(celsius|kelvin)))(?:$|[^\pL])`)
	// pellet_300C.csv, pellet-573K.txt, "run 2 300 °C.dat"
	nameTemperature = regexp.MustCompile(`(?:^|[_\-\s.,()])[Tt]?(\d+(?:[.,]\d+)?)[ _]{0,2}` + `(?:(?:°|º|deg)(C)|(C|K))` + `(?:$|[_\-\s.,()])`)
)

// temperatureIn finds a temperature in a line of text, in K.
func temperatureIn(text string) (float64, bool) {
	for _, re := range []*regexp.Regexp{textNamed, textDegrees} {
		if m := re.FindStringSubmatch(text); m != nil {
			return kelvin(m[1], strings.Join(m[2:], ""))
		}
	}
	if m := textUnitFirst.FindStringSubmatch(text); m != nil {
		return kelvin(m[4], m[1]+m[2]+m[3])
	}
	return 0, false
}

var twice = strings.NewReplacer("_", "__", "-", "--", " ", "  ")

// temperatureOfName finds the temperature in a file name, if there is exactly one.
func temperatureOfName(name string) (float64, bool) {
	base := path.Base(strings.ReplaceAll(name, "\\", "/"))
	if ext := path.Ext(base); len(ext) <= 5 && !strings.ContainsAny(ext, "0123456789CK") {
		base = strings.TrimSuffix(base, ext)
	}
	base = twice.Replace(base) // a separator may end one match and begin the next
	found, ok := 0.0, false
	for _, m := range nameTemperature.FindAllStringSubmatch(base, -1) {
		v, good := kelvin(m[1], m[2]+m[3])
		if !good || (ok && math.Abs(v-found) > 0.5) {
			return 0, false
		}
		found, ok = v, true
	}
	return found, ok
}

func kelvin(number, unit string) (float64, bool) {
	v, err := strconv.ParseFloat(strings.Replace(number, ",", ".", 1), 64)
	if err != nil {
		return 0, false
	}
	if u := strings.ToLower(unit); u == "c" || u == "celsius" {
		v += quantity.ZeroCelsius
	}
	return v, v > 0 && v <= MaxTemperature
}
