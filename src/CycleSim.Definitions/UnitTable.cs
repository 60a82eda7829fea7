using UnitsNet;
using UnitsNet.Units;
using static CycleSim.Definitions.Dimension;

namespace CycleSim.Definitions;

/// <summary>
/// The units in which quantities may be written, by dimension. UnitsNet converts, and is touched only for a unit that is
/// used. The spellings are a list of our own, matched exactly: the library's reader takes "2,4 bar" for 24 bar and needs
/// half a second to start.
/// </summary>
internal static class UnitTable
{
    /// <summary>Spellings of one unit and its conversion to the unit used inside.</summary>
    public sealed record Unit(string[] Spellings, Func<double, double> ToInside);

    private static readonly Dictionary<Dimension, Unit[]> Units = new()
    {
        [Share] = [new(["%"], v => v / 100.0)],
        [Dimension.Length] =
        [
            Inside("m"),
            new(["km"], v => new Length(v, LengthUnit.Kilometer).Meters),
            new(["ft"], v => new Length(v, LengthUnit.Foot).Meters),
        ],
        [Dimension.Area] =
        [
            Inside("m2"),
            new(["cm2"], v => new Area(v, AreaUnit.SquareCentimeter).SquareMeters),
            new(["ft2"], v => new Area(v, AreaUnit.SquareFoot).SquareMeters),
            new(["in2"], v => new Area(v, AreaUnit.SquareInch).SquareMeters),
        ],
        [Dimension.Pressure] =
        [
            Inside("Pa"),
            new(["hPa", "mbar"], v => new Pressure(v, PressureUnit.Hectopascal).Pascals),
            new(["kPa"], v => new Pressure(v, PressureUnit.Kilopascal).Pascals),
            new(["bar"], v => new Pressure(v, PressureUnit.Bar).Pascals),
            new(["MPa"], v => new Pressure(v, PressureUnit.Megapascal).Pascals),
            new(["psi"], v => new Pressure(v, PressureUnit.PoundForcePerSquareInch).Pascals),
            new(["inHg"], v => new Pressure(v, PressureUnit.InchOfMercury).Pascals),
        ],
        [Dimension.Temperature] =
        [
            Inside("K"),
            new(["°C", "degC"], v => new Temperature(v, TemperatureUnit.DegreeCelsius).Kelvins),
            new(["°F", "degF"], v => new Temperature(v, TemperatureUnit.DegreeFahrenheit).Kelvins),
            new(["°R", "degR"], v => new Temperature(v, TemperatureUnit.DegreeRankine).Kelvins),
        ],
        [TemperatureDifference] =
        [
            Inside("K", "°C", "degC"),
            new(
                ["°F", "degF", "°R", "degR"],
                v => new TemperatureDelta(v, TemperatureDeltaUnit.DegreeFahrenheit).Kelvins
            ),
        ],
        [Dimension.MassFlow] =
        [
            Inside("kg/s"),
            new(["kg/h"], v => new MassFlow(v, MassFlowUnit.KilogramPerHour).KilogramsPerSecond),
            new(["lb/s", "lbm/s"], v => new MassFlow(v, MassFlowUnit.PoundPerSecond).KilogramsPerSecond),
            new(["lb/h", "lbm/h"], v => new MassFlow(v / 3600.0, MassFlowUnit.PoundPerSecond).KilogramsPerSecond),
        ],
        [Dimension.Force] =
        [
            Inside("N"),
            new(["kN"], v => new Force(v, ForceUnit.Kilonewton).Newtons),
            new(["lbf"], v => new Force(v, ForceUnit.PoundForce).Newtons),
        ],
        [Dimension.Power] =
        [
            Inside("W"),
            new(["kW"], v => 1e3 * v),
            new(["MW"], v => 1e6 * v),
            // 550 foot-pounds a second; the library has it rounded to five digits.
            new(
                ["hp"],
                v => 550.0 * new Length(1.0, LengthUnit.Foot).Meters * new Force(v, ForceUnit.PoundForce).Newtons
            ),
        ],
        [Dimension.RotationalSpeed] =
        [
            Inside("rpm", "1/min"),
            new(["1/s"], v => new RotationalSpeed(v, RotationalSpeedUnit.RevolutionPerSecond).RevolutionsPerMinute),
            new(["rad/s"], v => new RotationalSpeed(v, RotationalSpeedUnit.RadianPerSecond).RevolutionsPerMinute),
        ],
        [Dimension.SpecificEnergy] =
        [
            Inside("J/kg"),
            new(["kJ/kg"], v => new SpecificEnergy(v, SpecificEnergyUnit.KilojoulePerKilogram).JoulesPerKilogram),
            new(["MJ/kg"], v => new SpecificEnergy(v, SpecificEnergyUnit.MegajoulePerKilogram).JoulesPerKilogram),
            new(["Btu/lb"], v => new SpecificEnergy(v, SpecificEnergyUnit.BtuPerPound).JoulesPerKilogram),
        ],
        [SpecificHeat] =
        [
            Inside("J/(kg K)", "J/(kg·K)", "J/kg/K"),
            new(
                ["kJ/(kg K)", "kJ/(kg·K)", "kJ/kg/K"],
                v => new SpecificEntropy(v, SpecificEntropyUnit.KilojoulePerKilogramKelvin).JoulesPerKilogramKelvin
            ),
        ],
        [Dimension.Speed] =
        [
            Inside("m/s"),
            new(["km/h"], v => new Speed(v, SpeedUnit.KilometerPerHour).MetersPerSecond),
            new(["kt", "kn"], v => new Speed(v, SpeedUnit.Knot).MetersPerSecond),
            new(["ft/s"], v => new Speed(v, SpeedUnit.FootPerSecond).MetersPerSecond),
        ],
    };

    /// <summary>Dimensions that have units.</summary>
    public static IEnumerable<Dimension> Dimensions => Units.Keys;

    public static IEnumerable<string> Spellings(Dimension dimension) =>
        Units.GetValueOrDefault(dimension, []).SelectMany(u => u.Spellings);

    public static Unit? Find(Dimension dimension, string spelling) =>
        Units.GetValueOrDefault(dimension, []).FirstOrDefault(u => u.Spellings.Contains(spelling));

    private static Unit Inside(params string[] spellings) => new(spellings, v => v);
}
