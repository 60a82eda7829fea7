using System.Globalization;

namespace CycleSim.Engine;

/// <summary>How quantities are written in messages: name and SI value with its unit.</summary>
public static class QuantityText
{
    public static string Format(Quantity quantity, double value) =>
        quantity switch
        {
            Quantity.NetThrust or Quantity.InstalledThrust => string.Create(
                CultureInfo.InvariantCulture,
                $"{value / 1000.0:F2} kN"
            ),
            Quantity.FuelFlow => string.Create(CultureInfo.InvariantCulture, $"{value:F4} kg/s"),
            Quantity.T4 or Quantity.T41 or Quantity.T45 or Quantity.T5 or Quantity.T3 => string.Create(
                CultureInfo.InvariantCulture,
                $"{value:F1} K"
            ),
            Quantity.P3 => string.Create(CultureInfo.InvariantCulture, $"{value / 1000.0:F1} kPa"),
            Quantity.Epr => string.Create(CultureInfo.InvariantCulture, $"{value:F4}"),
            _ => string.Create(CultureInfo.InvariantCulture, $"{value * 100.0:F2} %"),
        };

    /// <summary>The name as the trade writes it.</summary>
    public static string Name(Quantity quantity) =>
        quantity switch
        {
            Quantity.NetThrust => "net thrust",
            Quantity.InstalledThrust => "installed thrust",
            Quantity.FuelFlow => "fuel flow",
            Quantity.Epr => "EPR",
            Quantity.CorrectedN1 => "corrected N1",
            Quantity.Lever => "lever position",
            _ => quantity.ToString(),
        };
}
