namespace CycleSim.Studies

open System
open CycleSim.Air
open FSharp.Data.UnitSystems.SI.UnitSymbols

// The SI units themselves are those of FSharp.Core; here stand only the trade's own.

/// International foot: 0.3048 m.
[<Measure>]
type ft

/// Avoirdupois pound, a mass: 0.45359237 kg.
[<Measure>]
type lb

/// Pound-force: the weight of one pound at standard gravity.
[<Measure>]
type lbf

/// Hour: 3600 s.
[<Measure>]
type h

/// Kilonewton: 1000 N.
[<Measure>]
type kN

/// Reading on the Celsius scale: a point, not a difference. A difference of temperature is in K.
[<Measure>]
type degC

/// One hundredth.
[<Measure>]
type percent

/// Revolutions per minute.
[<Measure>]
type rpm

/// Radian: kept apart from plain numbers so that rad/s and revolutions per second cannot be mixed.
[<Measure>]
type rad

/// <summary>
/// Conversions between the trade's units and SI. Sources of the factors: the international yard and pound agreement of
/// 1959 (foot, pound), the third General Conference on Weights and Measures of 1901 (standard gravity), the SI brochure
/// (degree Celsius).
/// </summary>
/// <remarks>
/// A factor is the unit's definition, never a rounded quotient. Every number converts, and not-a-number stays so; only
/// temperatures have a range, absolute zero upward, which is checked.
/// </remarks>
module Units =
    /// Definition of the international foot.
    let metresPerFoot = 0.3048<m / ft>

    /// Definition of the avoirdupois pound.
    let kilogramsPerPound = 0.45359237<kg / lb>

    /// Standard acceleration of free fall.
    let standardGravity =
        LanguagePrimitives.FloatWithMeasure<m / s^2> StandardAtmosphere.Gravity

    /// Definition of the pound-force: the pound times standard gravity.
    let newtonsPerPoundForce = kilogramsPerPound * standardGravity * 1.0<lb / lbf>

    /// Definition of the kilonewton.
    let newtonsPerKilonewton = 1000.0<N / kN>

    /// Definition of the hour.
    let secondsPerHour = 3600.0<s / h>

    /// Rate of turning, rad/s, at one revolution per minute.
    let radiansPerSecondPerRpm = Math.PI / 30.0 * 1.0<rad / (s rpm)>

    /// Specific fuel consumption, kg/(N s), at one pound of fuel an hour for each pound of thrust.
    let siPerPoundPerHourPerPoundForce =
        kilogramsPerPound / (secondsPerHour * newtonsPerPoundForce)

    /// The kelvin reading at 0 degrees Celsius.
    let kelvinAtZeroCelsius = 273.15<K>

    let feetToMetres (length: float<ft>) = length * metresPerFoot

    let metresToFeet (length: float<m>) = length / metresPerFoot

    let poundsToKilograms (mass: float<lb>) = mass * kilogramsPerPound

    let kilogramsToPounds (mass: float<kg>) = mass / kilogramsPerPound

    let poundsForceToNewtons (force: float<lbf>) = force * newtonsPerPoundForce

    let newtonsToPoundsForce (force: float<N>) = force / newtonsPerPoundForce

    let kilonewtonsToNewtons (force: float<kN>) = force * newtonsPerKilonewton

    let newtonsToKilonewtons (force: float<N>) = force / newtonsPerKilonewton

    let hoursToSeconds (time: float<h>) = time * secondsPerHour

    let secondsToHours (time: float<s>) = time / secondsPerHour

    let poundsPerHourToKilogramsPerSecond (flow: float<lb / h>) =
        flow * kilogramsPerPound / secondsPerHour

    let kilogramsPerSecondToPoundsPerHour (flow: float<kg / s>) =
        flow * secondsPerHour / kilogramsPerPound

    /// Thrust-specific fuel consumption from lb/(h lbf) to kg/(N s).
    let specificFuelConsumptionToSI (consumption: float<lb / (h lbf)>) : float<kg / (N s)> =
        consumption * siPerPoundPerHourPerPoundForce

    /// Thrust-specific fuel consumption from kg/(N s) to lb/(h lbf).
    let specificFuelConsumptionFromSI (consumption: float<kg / (N s)>) : float<lb / (h lbf)> =
        consumption / siPerPoundPerHourPerPoundForce

    let rpmToRadiansPerSecond (speed: float<rpm>) = speed * radiansPerSecondPerRpm

    let radiansPerSecondToRpm (speed: float<rad / s>) = speed / radiansPerSecondPerRpm

    let percentToFraction (share: float<percent>) = share / 100.0<percent>

    let fractionToPercent (share: float) = share * 100.0<percent>

    /// <exception cref="T:System.ArgumentOutOfRangeException">Below absolute zero, infinite or not a number.</exception>
    let celsiusToKelvin (reading: float<degC>) : float<K> =
        if not (reading >= -273.15<degC> && Double.IsFinite(float reading)) then
            raise (
                ArgumentOutOfRangeException(
                    nameof reading,
                    $"A temperature must be a number of at least -273.15 °C; {float reading} °C was given."
                )
            )

        float reading * 1.0<K> + kelvinAtZeroCelsius

    /// <exception cref="T:System.ArgumentOutOfRangeException">Below absolute zero, infinite or not a number.</exception>
    let kelvinToCelsius (temperature: float<K>) : float<degC> =
        if not (temperature >= 0.0<K> && Double.IsFinite(float temperature)) then
            raise (
                ArgumentOutOfRangeException(
                    nameof temperature,
                    $"A temperature must be a number of at least 0 K; {float temperature} K was given."
                )
            )

        float (temperature - kelvinAtZeroCelsius) * 1.0<degC>
