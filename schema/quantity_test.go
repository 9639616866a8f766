package schema

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

const (
	iec60062  = "IEC 60062:2016, clause 3 (letter codes), from memory"
	siUnits   = "SI brochure, 9th edition, 2019, tables 4 and 7"
	inFormat  = "common practice"
	decibelIs = "20·log10 of a ratio of amplitudes, ISO 80000-1:2009 annex C, from memory"
)

type quantityCase struct {
	text              string
	dim               Dimension
	min, nominal, max float64
	source            string
}

// one is a case without spread.
func one(text string, dim Dimension, value float64, source string) quantityCase {
	return quantityCase{text, dim, value, value, value, source}
}

func quantityCases() []quantityCase {
	return []quantityCase{
		one("0.000022", Inductance, 22e-6, siUnits),
		one("22e-6", Inductance, 22e-6, siUnits),
		one("2.2E-5", Inductance, 22e-6, siUnits),
		one("22 uH", Inductance, 22e-6, siUnits),
		one("22uH", Inductance, 22e-6, siUnits),
		one("22 \u00b5H", Inductance, 22e-6, siUnits),
		one("22 \u03bcH", Inductance, 22e-6, siUnits),
		one("22\u00a0uH", Inductance, 22e-6, siUnits),
		one("0.022 mH", Inductance, 22e-6, siUnits),
		one("22000 nH", Inductance, 22e-6, siUnits),
		one("22e6 pH", Inductance, 22e-6, siUnits),
		one("1 F", Capacitance, 1, siUnits),
		one("25 m\u03a9", Resistance, 0.025, siUnits),
		one("25 m\u2126", Resistance, 0.025, siUnits),
		one("25 mohm", Resistance, 0.025, siUnits),
		one("2 ohms", Resistance, 2, siUnits),
		one("4.7 MΩ", Resistance, 4.7e6, siUnits),
		one("4.7 mΩ", Resistance, 4.7e-3, siUnits),
		one("10 R", Resistance, 10, iec60062),
		one("250 kHz", Frequency, 250e3, siUnits),
		one("1.5 MHz", Frequency, 1.5e6, siUnits),
		one("1 GHz", Frequency, 1e9, siUnits),
		one("100000", Frequency, 1e5, siUnits),
		one("1 TΩ", Resistance, 1e12, siUnits),
		one("100 ns", Time, 1e-7, siUnits),
		one("6.67 us", Time, 6.67e-6, siUnits),
		one("60 mV/us", Slope, 60e3, siUnits),
		one("0.25 V/us", Slope, 0.25e6, siUnits),
		one("25 mV/µs", Slope, 25e3, siUnits),
		one("3 V/s", Slope, 3, siUnits),
		one("1 kV/ms", Slope, 1e6, siUnits),
		one("50 mV/A", Transresistance, 0.05, siUnits),
		one("50 mΩ", Transresistance, 0.05, siUnits),
		one("1000 uS", Conductance, 1e-3, siUnits),
		one("1 mA/V", Conductance, 1e-3, siUnits),
		one("2 A/V", Conductance, 2, siUnits),
		one("-9 V", Voltage, -9, siUnits),
		one("\u22129 V", Voltage, -9, siUnits),
		one("+9 V", Voltage, 9, siUnits),
		one(".5 V", Voltage, 0.5, inFormat),

		one("4k7", Resistance, 4700, iec60062),
		one("4K7", Resistance, 4700, iec60062),
		one("47K", Resistance, 47e3, iec60062),
		one("0R022", Resistance, 0.022, iec60062),
		one("R47", Resistance, 0.47, iec60062),
		one("4R7", Resistance, 4.7, iec60062),
		one("470R", Resistance, 470, iec60062),
		one("4M7", Resistance, 4.7e6, iec60062),
		one("4m7", Resistance, 4.7e-3, iec60062),
		one("4L7", Resistance, 4.7e-3, iec60062),
		one("1G5", Resistance, 1.5e9, iec60062),
		one("100k", Resistance, 100e3, iec60062),
		one("4u7", Capacitance, 4.7e-6, iec60062),
		one("4\u00b57", Capacitance, 4.7e-6, iec60062),
		one("4n7", Capacitance, 4.7e-9, iec60062),
		one("p47", Capacitance, 0.47e-12, iec60062),
		one("100n", Capacitance, 100e-9, iec60062),
		one("2m2", Capacitance, 2.2e-3, iec60062),
		one("4F7", Capacitance, 4.7, iec60062),
		one("4u7F", Capacitance, 4.7e-6, iec60062),
		one("4u7", Inductance, 4.7e-6, iec60062),
		one("4k7 Ω", Resistance, 4700, iec60062),
		one("R015", Transresistance, 0.015, iec60062),

		one("1/4", Ratio, 0.25, inFormat),
		one("1 / 5", Ratio, 0.2, inFormat),
		one("3 %", Ratio, 0.03, inFormat),
		one("3%", Ratio, 0.03, inFormat),
		one("0.8", Ratio, 0.8, inFormat),
		one("20 dB", Gain, 10, decibelIs),
		one("90 dB", Gain, 31622.776601683792, decibelIs),
		one("-6 dB", Gain, 0.5011872336272722, decibelIs),
		one("100k", Gain, 1e5, inFormat),
		one("100000", Gain, 1e5, inFormat),
		one("50 deg", Angle, 50, inFormat),
		one("50°", Angle, 50, inFormat),
		one("50", Angle, 50, inFormat),
		one("10 dB", Decibel, 10, decibelIs),
		one("8", Decibel, 8, decibelIs),
		one("16", Plain, 16, inFormat),
		one("2", Count, 2, inFormat),

		{"22 uH ± 20 %", Inductance, 17.6e-6, 22e-6, 26.4e-6, inFormat},
		{"22 uH +/- 20%", Inductance, 17.6e-6, 22e-6, 26.4e-6, inFormat},
		{"22uH±20%", Inductance, 17.6e-6, 22e-6, 26.4e-6, inFormat},
		{"22uH+/-20%", Inductance, 17.6e-6, 22e-6, 26.4e-6, inFormat},
		{"22 uH ± 0.2", Inductance, 17.6e-6, 22e-6, 26.4e-6, inFormat},
		{"22 uH ± 0 %", Inductance, 22e-6, 22e-6, 22e-6, inFormat},
		{"5k49 ± 1 %", Resistance, 5435.1, 5490, 5544.9, iec60062},
		{"220 uF +30/-10 %", Capacitance, 198e-6, 220e-6, 286e-6, inFormat},
		{"220 uF -10/+30 %", Capacitance, 198e-6, 220e-6, 286e-6, inFormat},
		{"220 uF +30 %/-10 %", Capacitance, 198e-6, 220e-6, 286e-6, inFormat},
		{"220 uF +30% -10%", Capacitance, 198e-6, 220e-6, 286e-6, inFormat},
		{"220 uF +0.3/-0.1", Capacitance, 198e-6, 220e-6, 286e-6, inFormat},
		{"220 uF +30/\u221210 %", Capacitance, 198e-6, 220e-6, 286e-6, inFormat},
		{"220 uF +120/-20 %", Capacitance, 176e-6, 220e-6, 484e-6, inFormat},
		{"-9 V ± 5 %", Voltage, -9.45, -9, -8.55, inFormat},
		{"-9 V +10/-5 %", Voltage, -9.9, -9, -8.55, inFormat},
		{"100 % ± 30 %", Ratio, 0.7, 1, 1.3, inFormat},
		{"1.25", Voltage, 1.25, 1.25, 1.25, siUnits},
	}
}

func TestEveryWayToWriteAQuantityGivesItsSIValue(t *testing.T) {
	for _, c := range quantityCases() {
		t.Run(c.dim.facts().name+" "+c.text, func(t *testing.T) {
			q, err := ParseQuantity(c.text, c.dim)
			require.NoError(t, err, c.source)
			assert.InDelta(t, c.min, q.Min, 1e-12*math.Abs(c.nominal), c.source)
			assert.InDelta(t, c.nominal, q.Nominal, 1e-12*math.Abs(c.nominal), c.source)
			assert.InDelta(t, c.max, q.Max, 1e-12*math.Abs(c.nominal), c.source)
			assert.Equal(t, c.dim.Unit(), q.Unit)
			assert.LessOrEqual(t, q.Min, q.Nominal)
			assert.LessOrEqual(t, q.Nominal, q.Max)
		})
	}
}

func TestWhatIsNoQuantityIsRefusedInADesignersWords(t *testing.T) {
	cases := []struct {
		text string
		dim  Dimension
		want string
	}{
		{"22 uF", Inductance, "expects henries, found '22 uF'"},
		{"12", Capacitance, ""},
		{"", Voltage, "expects volts, found an empty text"},
		{"lots", Voltage, "expects volts, found 'lots': write for example '12 V'"},
		{"22 uh", Inductance, "did you mean '22 uH'?"},
		{"1 mhz", Frequency, "did you mean '1 mHz' or '1 MHz'?"},
		{"4,7k", Resistance, "the decimal sign is a point, '4.7k'"},
		{"4,7 uH", Inductance, "the decimal sign is a point, '4.7 uH'"},
		{"100,000", Frequency, "write '100000' without separators, or '100.000' with a decimal point"},
		{"100'000 Hz", Frequency, "write the number without separators"},
		{"100 000", Frequency, "write the number without separators"},
		{"4N7", Capacitance, "did you mean '4n7'?"},
		{"100N", Capacitance, "did you mean '100 n'?"},
		{"4R7", Inductance, "the letter code R stands for ohms"},
		{"4k7J", Resistance, "a tolerance is written as '± 5 %', not as a letter"},
		{"22 uX", Inductance, "'uX' is no unit that fits here"},
		{"NaN", Voltage, "that is not a number"},
		{".nan", Voltage, "that is not a number"},
		{"-.inf", Voltage, "the value must be finite"},
		{"1e999 V", Voltage, "the number is too large"},
		{"1e308 TΩ", Resistance, "the number is too large"},
		{"22 uH ± 20", Inductance, "a tolerance is a percentage or a ratio below 1, found '± 20': did you mean '20 %'?"},
		{"22 uH ± 1", Inductance, "a tolerance is a percentage or a ratio below 1"},
		{"22 uH ± 4 uH", Inductance, "a tolerance is a percentage or a ratio below 1"},
		{"22 uH ± -5 %", Inductance, "a tolerance is a percentage or a ratio below 1"},
		{"22 uH ± 100 %", Inductance, "takes the value down to zero or below"},
		{"22 uH ±", Inductance, "a tolerance is a percentage or a ratio below 1"},
		{"22 uH +30 %", Inductance, "needs both sides"},
		{"22 uH +30/+10 %", Inductance, "a tolerance is a percentage or a ratio below 1"},
		{"22 uH +30/-10", Inductance, "is the '%' missing?"},
		{"22 uH +30/-110 %", Inductance, "takes the value down to zero or below"},
		{"22 uH 20 %", Inductance, "'20 %' is not understood; a tolerance is written as '± 5 %'"},
		{"1/4", Inductance, "expects henries, found '1/4'"},
		{"1/0", Ratio, "a fraction is written as 1/4"},
		{"0.8 rad", Angle, "expects degrees, found '0.8 rad'"},
		{"0.9 m", Angle, "expects degrees, found '0.9 m'"},
		{"3 %", Voltage, "expects volts, found '3 %'"},
		{"about 3 V", Voltage, "a spread as a tolerance or a range"},
		{"12 V", Slope, "expects volts per second, found '12 V'"},
		{"--3 V", Voltage, "expects volts"},
		{"22 uH\x00", Inductance, "expects henries"},
	}
	for _, c := range cases {
		t.Run(c.dim.facts().name+" "+c.text, func(t *testing.T) {
			_, err := ParseQuantity(c.text, c.dim)
			if c.want == "" {
				require.NoError(t, err)
				return
			}
			require.Error(t, err)
			assert.Contains(t, err.Error(), c.want)
		})
	}
}

func TestCaseCountsForMegaAndMilliAndNotForKilo(t *testing.T) {
	for text, want := range map[string]float64{"4M7": 4.7e6, "4m7": 4.7e-3, "4k7": 4.7e3, "4K7": 4.7e3} {
		q, err := ParseQuantity(text, Resistance)
		require.NoError(t, err)
		assert.InEpsilon(t, want, q.Nominal, 1e-12, iec60062)
	}
}

func TestFormatShowsThreeDigitsWithPrefix(t *testing.T) {
	cases := []struct {
		value float64
		unit  string
		want  string
	}{
		{4900, "Hz", "4.90 kHz"}, {22e-6, "H", "22.0 µH"}, {56.1, "deg", "56.1°"}, {18.2, "dB", "18.2 dB"},
		{0.03, "%", "3.00 %"}, {9, "V", "9.00 V"}, {1.5, "A", "1.50 A"}, {2617.6, "Hz", "2.62 kHz"},
		{999.9, "Hz", "1.00 kHz"}, {999.4, "Hz", "999 Hz"}, {999.5, "Hz", "1.00 kHz"}, {9.996e-7, "F", "1.00 µF"},
		{1000, "Hz", "1.00 kHz"}, {1e6, "Hz", "1.00 MHz"}, {1, "V", "1.00 V"}, {1e-3, "V", "1.00 mV"},
		{0, "V", "0 V"}, {-9, "V", "-9.00 V"}, {-0.0125, "A", "-12.5 mA"}, {0.505, "", "0.505"}, {47.49, "", "47.5"},
		{31622.8, "", "31600"}, {0.012345, "", "0.0123"}, {60e3, "V/s", "60.0 mV/µs"}, {0.25e6, "V/s", "250 mV/µs"},
		{5, "V/s", "5.00 V/s"}, {0.05, "Ω", "50.0 mΩ"}, {1e-3, "S", "1.00 mS"}, {2e13, "Hz", "20.0 THz"},
		{2e15, "Hz", "2000 THz"}, {1e-15, "F", "0.00100 pF"}, {123.456, "deg", "123°"}, {-6.25, "deg", "-6.25°"},
		{0.05, "deg", "0.0500°"}, {math.NaN(), "Hz", "none"}, {math.Inf(1), "dB", "unlimited"}, {99.95, "", "100"},
		{0.9999, "", "1.00"}, {0, "deg", "0°"},
	}
	for _, c := range cases {
		assert.Equal(t, c.want, Format(c.value, c.unit), "%v %s", c.value, c.unit)
	}
}

func TestFormattedValuesReadBackWithinTheirThreeDigits(t *testing.T) {
	for _, dim := range Dimensions() {
		if dim == Count {
			continue
		}
		for exponent := -11; exponent <= 11; exponent++ {
			for _, mantissa := range []float64{1, 1.2345, 4.995, 9.9949, 9.9951} {
				value := mantissa * math.Pow(10, float64(exponent))
				q, err := ParseQuantity(Format(value, dim.Unit()), dim)
				require.NoError(t, err, "%v %s", value, dim)
				assert.InEpsilon(t, value, q.Nominal, 0.0051, "%v %s: %s", value, dim, Format(value, dim.Unit()))
			}
		}
	}
}

func FuzzQuantity(f *testing.F) {
	for _, c := range quantityCases() {
		f.Add(c.text, int(c.dim))
	}
	f.Add("22 uH ± 20", int(Inductance))
	f.Add("4,7k", int(Resistance))
	f.Add("1/0", int(Ratio))
	f.Add("\xe2\x88 5", int(Voltage))
	f.Fuzz(func(t *testing.T, text string, dimension int) {
		dim := Dimension(dimension)
		q, err := ParseQuantity(text, dim)
		if err != nil {
			assert.NotContains(t, err.Error(), "\n")
			return
		}
		require.False(t, math.IsNaN(q.Min) || math.IsInf(q.Min, 0) || math.IsNaN(q.Max) || math.IsInf(q.Max, 0))
		require.LessOrEqual(t, q.Min, q.Nominal)
		require.LessOrEqual(t, q.Nominal, q.Max)
		if size := math.Abs(q.Nominal); size < 1e-9 || size > 1e11 || dim == Ratio {
			return
		}
		back, err := ParseQuantity(Format(q.Nominal, dim.Unit()), dim)
		require.NoError(t, err, "%q shown as %q", text, Format(q.Nominal, dim.Unit()))
		require.InEpsilon(t, q.Nominal, back.Nominal, 0.0051)
	})
}
