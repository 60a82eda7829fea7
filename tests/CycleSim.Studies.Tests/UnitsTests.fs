module CycleSim.Studies.Tests.UnitsTests

open System
open CycleSim.Studies
open Expecto
open FSharp.Data.UnitSystems.SI.UnitSymbols

/// A value as a source prints it agrees to half a unit of the last of its figures.
let private printed name (actual: float<'u>) (source: float) figures =
    test name {
        let lastFigure =
            10.0 ** (Math.Floor(Math.Log10(Math.Abs source)) + 1.0 - float figures)

        let tolerance = {
            absolute = 0.5 * lastFigure
            relative = 0.0
        }

        Expect.floatClose tolerance (float actual) source name
    }

/// There and back costs at most the rounding of four multiplications or divisions, each 2^-53 of the value.
let private returns name (there: float<'a> -> float<'b>) (back: float<'b> -> float<'a>) =
    testProperty name (fun (numerator: int) ->
        let value = LanguagePrimitives.FloatWithMeasure<'a>(float numerator / 7.0)
        let bound = abs value * 5.0 * Math.Pow(2.0, -53.0)
        abs (back (there value) - value) <= bound)

let private refuses name words convert =
    test name {
        Expect.throwsC (fun () -> convert () |> ignore) (fun refusal ->
            Expect.isTrue (refusal :? ArgumentOutOfRangeException) "the kind of the refusal"

            for word: string in words do
                Expect.stringContains refusal.Message word "the words of the refusal")
    }

// NIST Special Publication 811 (2008), appendix B.8, seven figures: cited from memory.
let private publishedFactors =
    testList "published factors" [
        printed "foot" (Units.feetToMetres 1.0<ft>) 0.3048 7
        printed "pound" (Units.poundsToKilograms 1.0<lb>) 0.4535924 7
        printed "pound-force" (Units.poundsForceToNewtons 1.0<lbf>) 4.448222 7
        printed "pound per hour" (Units.poundsPerHourToKilogramsPerSecond 1.0<lb / h>) 1.259979e-4 7
        printed "revolution per minute" (Units.rpmToRadiansPerSecond 1.0<rpm>) 0.1047198 7
        printed "hour" (Units.hoursToSeconds 1.0<h>) 3600.0 7
    ]

// From memory: the tropopause of ISO 2533:1975, 11 000 m, as tables in feet print it; the nautical mile, 1852 m by
// definition, in feet; reciprocals of the factors above; 30/pi.
let private wellKnownValues =
    testList "well-known values" [
        printed "tropopause" (Units.metresToFeet 11000.0<m>) 36089.24 7
        printed "nautical mile" (Units.metresToFeet 1852.0<m>) 6076.115 7
        printed "kilogram" (Units.kilogramsToPounds 1.0<kg>) 2.2046226 8
        printed "newton" (Units.newtonsToPoundsForce 1.0<N>) 0.22480894 8
        printed "kilogram per second" (Units.kilogramsPerSecondToPoundsPerHour 1.0<kg / s>) 7936.641 7
        printed "radian per second" (Units.radiansPerSecondToRpm 1.0<rad / s>) 9.5492966 8
    ]

// 28.325 g/(kN s) at 1 lb/(h lbf): from memory. The way back by hand from the definition: 1 g/(kN s) is 1e-6 s/m, times
// 3600 s/h x 9.80665 m/s2 = 35303.94 m/(s h). Fuel flow over thrust: 13 500 / 27 000 by hand.
let private specificFuelConsumption =
    testList "specific fuel consumption" [
        printed "1 lb/(h lbf)" (Units.specificFuelConsumptionToSI 1.0<lb / (h lbf)>) 2.8325e-5 5
        printed "1 g/(kN s)" (Units.specificFuelConsumptionFromSI 1.0e-6<kg / (N s)>) 0.03530394 7

        test "fuel flow over thrust" {
            let flow = Units.poundsPerHourToKilogramsPerSecond 13500.0<lb / h>
            let thrust = Units.poundsForceToNewtons 27000.0<lbf>

            Expect.floatClose
                Accuracy.veryHigh
                (float (Units.specificFuelConsumptionFromSI (flow / thrust)))
                0.5
                "13 500 lb/h for 27 000 lbf is 0.5 lb/(h lbf)"
        }
    ]

// By the definitions of the prefix and of the hundredth.
let private prefixes =
    testList "prefixes" [
        test "kilonewton" {
            Expect.equal (Units.kilonewtonsToNewtons 120.0<kN>) 120000.0<N> "120 kN"
            Expect.equal (Units.newtonsToKilonewtons 500.0<N>) 0.5<kN> "500 N"
        }
        test "percent" {
            Expect.equal (Units.percentToFraction 4.5<percent>) 0.045 "4.5 %"
            Expect.equal (Units.fractionToPercent 0.25) 25.0<percent> "a quarter"
        }
        test "hour" { Expect.equal (Units.secondsToHours 5400.0<s>) 1.5<h> "5400 s" }
    ]

// ISO 2533:1975 for sea level and tropopause; steam point at one atmosphere on the older scale, 373.15 K: from memory.
let private celsius =
    testList "Celsius" [
        printed "sea level" (Units.celsiusToKelvin 15.0<degC>) 288.15 12
        printed "tropopause" (Units.celsiusToKelvin -56.5<degC>) 216.65 12
        printed "steam point" (Units.kelvinToCelsius 373.15<K>) 100.0 12

        test "absolute zero is the lowest reading" {
            Expect.equal (Units.celsiusToKelvin -273.15<degC>) 0.0<K> "absolute zero"
            Expect.equal (Units.kelvinToCelsius 0.0<K>) -273.15<degC> "absolute zero"
        }

        // Two roundings to 2^-42 K each: below 4096 K doubles stand 2^-41 K apart.
        testProperty "there and back" (fun (numerator: uint16) ->
            let kelvin = float numerator / 17.0 * 1.0<K>

            abs (Units.celsiusToKelvin (Units.kelvinToCelsius kelvin) - kelvin)
            <= Math.Pow(2.0, -41.0) * 1.0<K>)

        refuses "below absolute zero in Celsius" [ "-273.15"; "-300"; "°C" ] (fun () ->
            Units.celsiusToKelvin -300.0<degC>)
        refuses "below absolute zero in kelvin" [ "0 K"; "-5 K" ] (fun () -> Units.kelvinToCelsius -5.0<K>)
        refuses "no number in Celsius" [ "NaN" ] (fun () -> Units.celsiusToKelvin (nan * 1.0<degC>))
        refuses "no number in kelvin" [ "NaN" ] (fun () -> Units.kelvinToCelsius (nan * 1.0<K>))
        refuses "infinity in Celsius" [ "number" ] (fun () -> Units.celsiusToKelvin (infinity * 1.0<degC>))
        refuses "infinity in kelvin" [ "number" ] (fun () -> Units.kelvinToCelsius (infinity * 1.0<K>))
    ]

let private thereAndBack =
    testList "there and back" [
        returns "length" Units.feetToMetres Units.metresToFeet
        returns "mass" Units.poundsToKilograms Units.kilogramsToPounds
        returns "force" Units.poundsForceToNewtons Units.newtonsToPoundsForce
        returns "kilonewtons" Units.kilonewtonsToNewtons Units.newtonsToKilonewtons
        returns "time" Units.hoursToSeconds Units.secondsToHours
        returns "fuel flow" Units.poundsPerHourToKilogramsPerSecond Units.kilogramsPerSecondToPoundsPerHour
        returns "specific fuel consumption" Units.specificFuelConsumptionToSI Units.specificFuelConsumptionFromSI
        returns "speed of turning" Units.rpmToRadiansPerSecond Units.radiansPerSecondToRpm
        returns "percent" Units.percentToFraction Units.fractionToPercent
    ]

[<Tests>]
let units =
    testList "units" [
        publishedFactors
        wellKnownValues
        specificFuelConsumption
        prefixes
        celsius
        thereAndBack
    ]
