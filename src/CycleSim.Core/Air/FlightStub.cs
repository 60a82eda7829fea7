namespace CycleSim.Air;
public readonly record struct FlightCondition(double PressureAltitude, double StaticPressure, double StaticTemperature, double Mach, double WaterAirRatio)
{
    public static FlightCondition AtIsaOffset(double h, double mach, double dT, double war = 0)
    {
        var t0 = Isa(h, out var p);
        return new(h, p, t0 + dT, mach, war);
    }
    public static double Isa(double h, out double p)
    {
        if (h <= 11000) { var t = 288.15 - 0.0065 * h; p = 101325 * Math.Pow(t / 288.15, 5.25588); return t; }
        p = 22632.04 * Math.Exp(-(h - 11000) * 9.80665 / 287.0528738 / 216.65); return 216.65;
    }
}
