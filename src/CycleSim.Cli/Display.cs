using System.Globalization;

namespace CycleSim.Cli;

/// <summary>Turns SI values into the units asked for: a heading with the unit and the bare number with sensible digits.</summary>
internal sealed class Display(bool us, string temperatures)
{
    public static readonly string[] TemperatureScales = ["K", "C", "F", "R"];

    public string ForceUnit => us ? "lbf" : "kN";

    public string Force(double n) => us ? Fixed(n / 4.4482216152605, 0) : Fixed(n / 1000.0, 2);

    public string FlowUnit => us ? "lb/s" : "kg/s";

    public string Flow(double kg) => us ? Fixed(kg / 0.45359237, 2) : Fixed(kg, 3);

    public string FuelFlowUnit => us ? "lb/h" : "kg/s";

    public string FuelFlow(double kg) => us ? Fixed(kg * 3600.0 / 0.45359237, 1) : Fixed(kg, 4);

    public string SfcUnit => us ? "lb/(h lbf)" : "g/(kN s)";

    public string Sfc(double si) => us ? Fixed(si * 3600.0 * 9.80665, 4) : Fixed(si * 1e6, 3);

    public string PressureUnit => us ? "psi" : "kPa";

    public string Pressure(double pa) => us ? Fixed(pa / 6894.757293168361, 2) : Fixed(pa / 1000.0, 2);

    public string AltitudeUnit => us ? "ft" : "m";

    public string Altitude(double m) => us ? Fixed(m / 0.3048, 0) : Fixed(m, 0);

    public string SpeedUnit => us ? "ft/s" : "m/s";

    public string Speed(double si) => us ? Fixed(si / 0.3048, 1) : Fixed(si, 1);

    public string AreaUnit => us ? "in2" : "m2";

    public string Area(double m2) => us ? Fixed(m2 / 0.00064516, 1) : Fixed(m2, 4);

    public string PowerUnit => us ? "hp" : "kW";

    public string Power(double w) => us ? Fixed(w / 745.6998715822702, 1) : Fixed(w / 1000.0, 1);

    public string WorkUnit => us ? "Btu/lb" : "kJ/kg";

    public string Work(double si) => us ? Fixed(si / 2326.0, 2) : Fixed(si / 1000.0, 2);

    public string TemperatureUnit => temperatures == "K" ? "K" : "°" + temperatures;

    public string Temperature(double k) => Temperature(k, 1);

    public string Temperature(double k, int digits) =>
        Fixed(
            temperatures switch
            {
                "C" => k - 273.15,
                "F" => k * 1.8 - 459.67,
                "R" => k * 1.8,
                _ => k,
            },
            digits
        );

    /// <summary>Unit of a difference of temperature.</summary>
    public string DifferenceUnit => temperatures is "F" or "R" ? "°F" : "K";

    public string Difference(double k, int digits = 1)
    {
        var zeros = "0." + new string('0', digits);
        return double.IsFinite(k)
            ? (temperatures is "F" or "R" ? k * 1.8 : k).ToString(
                $"+{zeros};-{zeros};{zeros}",
                CultureInfo.InvariantCulture
            )
            : "-";
    }

    /// <summary>A change of temperature with its sign; zero has none.</summary>
    public string SignedDifference(double k, int digits) => Signed(temperatures is "F" or "R" ? k * 1.8 : k, digits);

    /// <summary>A change in per cent or points with its sign; zero has none.</summary>
    public static string SignedPercent(double ratio, int digits) => Signed(ratio * 100.0, digits);

    /// <summary>A change with its sign; zero has none.</summary>
    public static string Signed(double value, int digits)
    {
        var text = Fixed(value, digits);
        if (!double.IsFinite(value))
            return text;
        return text.Trim('-', '0', '.').Length == 0 ? text.TrimStart('-')
            : value > 0.0 ? "+" + text
            : text;
    }

    public static string Percent(double ratio, int digits = 2) => Fixed(ratio * 100.0, digits);

    public static string Fixed(double value, int digits) =>
        double.IsFinite(value) ? value.ToString("F" + digits, CultureInfo.InvariantCulture) : "-";
}
