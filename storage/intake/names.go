package intake

import "strings"

// columnNames is every column name that is understood, less its unit: lower
// case, accents taken off, everything but letters and digits as one space.
// "Temp_Max (°F)" is looked up as "temp max" in °F. All other columns are left
// alone. The words are those of the languages' everyday speech: English,
// German, French, Spanish, Italian, Portuguese, Dutch, Swedish, Danish,
// Norwegian and Polish.
var columnNames = []struct {
	role  role
	word  string // what a person calls it
	names []string
}{
	{timeRole, "time", []string{
		"time", "date", "datetime", "date time", "timestamp", "time stamp", "valid", "date and time", "time of day", "clock",
		"local time", "date time local", "date local", "time local", "day", "recorded at", "measured at", "observed at",
		"datum", "zeit", "uhrzeit", "datum zeit", "datum uhrzeit", "datum und uhrzeit", "zeitstempel", "messzeit", "zeitpunkt", "tag",
		"heure", "date heure", "date et heure", "horodatage", "jour",
		"fecha", "hora", "fecha hora", "fecha y hora", "dia",
		"data", "ora", "data ora", "data e ora", "giorno",
		"data hora", "data e hora",
		"tijd", "datum tijd", "datum en tijd", "tijdstip", "dag",
		"tid", "tidpunkt", "datum tid", "dato", "dato tid", "tidspunkt", "klokkeslett",
		"czas", "godzina", "data czas", "data i czas", "data godzina",
	}},
	{hourRole, "hour", []string{"hour", "hr", "hour of day", "stunde", "uur", "timme", "time h"}},
	{temperatureRole, "temperature", []string{
		"t", "temp", "temperature", "air temp", "air temperature", "airtemp", "temp air", "temperature air",
		"dry bulb", "dry bulb temp", "dry bulb temperature",
		"outdoor temp", "outdoor temperature", "outside temp", "outside temperature", "temp out", "temp outdoor",
		"temperatur", "lufttemperatur", "lufttemp", "aussentemperatur", "temperatur aussen", "temperatur luft",
		"temperature de l air", "temp de l air", "temperature exterieure", "temperature ext",
		"temperatura", "temperatura del aire", "temperatura aire", "temp aire", "temperatura exterior",
		"temperatura aria", "temperatura dell aria", "temperatura esterna",
		"temperatura do ar", "temp ar", "temperatura externa",
		"temperatuur", "luchttemperatuur", "buitentemperatuur",
		"utetemperatur", "utomhustemperatur",
		"temperatura powietrza", "temp powietrza",
	}},
	{highRole, "high", []string{
		"high", "max", "maximum", "tmax", "t max", "tempmax", "temp max", "max temp", "high temp", "temp high",
		"temperature max", "max temperature", "maximum temperature", "high temperature", "temperature high",
		"air temp max", "max air temp", "maximum air temperature",
		"hochst", "hochstwert", "hochsttemperatur", "maximaltemperatur", "temperatur max", "temperatur maximum", "tageshochst", "tx",
		"maximale", "temperature maximale", "temp maximale", "temperature maximum",
		"maxima", "temperatura maxima", "temp maxima", "temperatura max",
		"massima", "temperatura massima",
		"maximumtemperatuur", "temperatuur max", "hoogste temperatuur",
		"hogsta", "hogsta temperatur", "maxtemperatur", "hojeste temperatur", "hoyeste temperatur",
		"maks", "temperatura maksymalna",
	}},
	{lowRole, "low", []string{
		"low", "min", "minimum", "tmin", "t min", "tempmin", "temp min", "min temp", "low temp", "temp low",
		"temperature min", "min temperature", "minimum temperature", "low temperature", "temperature low",
		"air temp min", "min air temp", "minimum air temperature",
		"tiefst", "tiefstwert", "tiefsttemperatur", "minimaltemperatur", "temperatur min", "temperatur minimum", "tagestiefst", "tn",
		"minimale", "temperature minimale", "temp minimale", "temperature minimum",
		"minima", "temperatura minima", "temp minima", "temperatura min",
		"minimumtemperatuur", "temperatuur min", "laagste temperatuur",
		"lagsta", "lagsta temperatur", "mintemperatur", "laveste temperatur",
		"temperatura minimalna",
	}},
	{meanRole, "mean", []string{
		"mean", "avg", "average", "tmean", "t mean", "tmean24", "tavg", "t avg", "tempmean", "temp mean", "mean temp",
		"temp avg", "avg temp", "average temp", "mean24", "mean 24",
		"temperature mean", "mean temperature", "average temperature", "temperature avg",
		"air temp mean", "mean air temp", "mean air temperature",
		"mittel", "mittelwert", "mitteltemperatur", "tagesmittel", "temperatur mittel",
		"moyenne", "temperature moyenne", "temp moyenne",
		"media", "temperatura media", "temp media",
		"gemiddelde", "gemiddelde temperatuur",
		"medel", "medeltemperatur", "middeltemperatur",
		"srednia", "temperatura srednia",
	}},
	{sensorRole, "sensor", []string{
		"sensor", "sensor id", "sensor name", "probe", "probe id", "device", "device id", "device name", "logger", "logger id",
		"channel", "kanal", "fuhler", "capteur", "sonde", "sensore", "canal", "givare", "czujnik",
	}},
	{humidityRole, "humidity", []string{
		"rh", "humidity", "relative humidity", "rel humidity", "hum", "outdoor humidity", "air humidity",
		"luftfeuchte", "luftfeuchtigkeit", "relative feuchte", "relative luftfeuchte", "feuchte",
		"humidite", "humidite relative", "humedad", "humedad relativa", "umidita", "umidita relativa",
		"umidade", "umidade relativa", "luchtvochtigheid", "relatieve luchtvochtigheid",
		"luftfuktighet", "luftfugtighed", "wilgotnosc", "wilgotnosc wzgledna",
	}},
	{rainRole, "rain", []string{
		"rain", "rainfall", "precipitation", "precip", "rain 1h", "hourly rain",
		"regen", "niederschlag", "regenmenge", "pluie", "precipitations", "lluvia", "precipitacion",
		"pioggia", "precipitazione", "precipitazioni", "chuva", "precipitacao", "neerslag",
		"nederbord", "nedbor", "opad", "opady",
	}},
	{rainSumRole, "rain of a whole day", []string{
		"daily rain", "rain day", "rain today", "rain total", "total rain", "rain 24h", "tagesniederschlag", "pluie jour",
	}},
}

// temperatureWords begin a word of a name that is likely one of several
// temperatures ("green 7 temp", "Sensor 2 Temperatur").
var temperatureWords = []string{"temp", "lufttemp"}

// notAirWords are in the names of temperatures that are not the air's, or no
// reading.
var notAirWords = []string{
	"soil", "dew", "wet", "index", "chill", "apparent", "feels", "body", "water", "surface", "max", "min", "high", "low", "mean", "avg",
	"average", "inside", "indoor", "in", "boden", "taupunkt", "innen", "sol", "rosee", "suelo", "rocio", "suolo", "rugiada", "solo",
	"bodem", "dauwpunt", "jord", "mark", "daggpunkt", "gleby", "diff", "target", "set", "alarm", "board", "battery", "cpu", "device",
	"flag", "quality", "qc", "status", "source", "unit", "attributes", "comfort", "alert", "trend",
}

// likelyTemperature reports whether a plain name is that of a temperature, and
// not of one that is another thing than the air's.
func likelyTemperature(plain string) bool {
	found := false
	for _, word := range strings.Fields(plain) {
		for _, other := range notAirWords {
			if word == other {
				return false
			}
		}
		for _, begin := range temperatureWords {
			found = found || strings.HasPrefix(word, begin)
		}
	}
	return found
}

// accents are the letters of those languages with the letter that stands for
// each in columnNames.
var accents = strings.NewReplacer(
	"ä", "a", "á", "a", "à", "a", "â", "a", "ã", "a", "å", "a", "ą", "a",
	"ç", "c", "ć", "c", "é", "e", "è", "e", "ê", "e", "ë", "e", "ę", "e",
	"í", "i", "ì", "i", "î", "i", "ï", "i", "ł", "l", "ñ", "n", "ń", "n",
	"ö", "o", "ó", "o", "ò", "o", "ô", "o", "õ", "o", "ø", "o",
	"ß", "ss", "ś", "s", "ü", "u", "ú", "u", "ù", "u", "û", "u", "ź", "z", "ż", "z", "æ", "ae", "œ", "oe",
)

// windows1252 are the characters of that encoding from 0x80 to 0x9F; from 0xA0
// on it is Latin-1.
const windows1252 = "€\u0081‚ƒ„…†‡ˆ‰Š‹Œ\u008dŽ\u008f\u0090‘’“”•–—˜™š›œ\u009džŸ"
