using CsCheck;
using CycleSim.Gas;

namespace CycleSim.Tests.Gas;

public class ThermallyPerfectGasTests
{
    private static readonly ThermallyPerfectGas Kerosene = new(Fuel.JetA1);

    // Ideal-gas table of air of engineering thermodynamics textbooks (from memory): T, h kJ/kg, s0 kJ/(kg K).
    private static readonly (double T, double H, double S)[] Handbook =
    [
        (300.0, 300.19, 1.70203),
        (500.0, 503.02, 2.21952),
        (600.0, 607.02, 2.40902),
        (800.0, 821.95, 2.71787),
        (1000.0, 1046.04, 2.96770),
        (1200.0, 1277.79, 3.17888),
        (1500.0, 1635.97, 3.44516),
        (2000.0, 2252.1, 3.7994),
    ];

    [Fact]
    public void Air_follows_the_handbook_to_a_tenth_of_a_per_cent()
    {
        Kerosene.AtTemperature(300.0, 0.0, 0.0, out var start);
        foreach (var (t, h, s) in Handbook.Skip(1))
        {
            Kerosene.AtTemperature(t, 0.0, 0.0, out var p);
            Assert.Equal(1.0, (p.H - start.H) / 1000.0 / (h - Handbook[0].H), 0.001);
            Assert.Equal(1.0, (p.Phi - start.Phi) / 1000.0 / (s - Handbook[0].S), 0.001);
        }
    }

    // cp of air 1.004 to 1.005 kJ/(kg K) at 300 K, 1.141 to 1.142 at 1000 K; of steam 1.864 at 300 K (from memory, handbooks).
    [Fact]
    public void Specific_heats_are_those_of_the_handbook()
    {
        Kerosene.AtTemperature(300.0, 0.0, 0.0, out var cold);
        Kerosene.AtTemperature(1000.0, 0.0, 0.0, out var hot);
        Kerosene.AtTemperature(300.0, 0.0, 1.0, out var steam);
        Assert.InRange(cold.Cp, 1003.5, 1006.0);
        Assert.InRange(hot.Cp, 1140.0, 1143.0);
        Assert.Equal(1864.0, steam.Cp, 5.0);
        Assert.Equal(287.05, Kerosene.GasConstant(0.0, 0.0), 0.05);
        Assert.Equal(461.5, Kerosene.GasConstant(0.0, 1.0), 0.1);
    }

    // Data/combustion-reference.csv (source in the file), full equilibrium; complete combustion may differ by what
    // dissociation takes: 0.2 % up to 1500 K, 0.4 % up to 1700 K, 1.1 % up to 2025 K.
    [Theory]
    [InlineData("jet-a")]
    [InlineData("hydrogen")]
    public void Combustor_temperatures_agree_with_the_equilibrium_code(string fuel)
    {
        var gas = fuel == "jet-a" ? Kerosene : new ThermallyPerfectGas(Fuel.Dihydrogen);
        var rows = 0;
        foreach (var row in TestData.Rows("combustion-reference.csv").Where(r => r["fuel"] == fuel))
        {
            var t4 = CompleteCombustion(gas, row.Number("T3_K"), row.Number("fuel_air_ratio"));
            var reference = row.Number("T4_K");
            if (reference > 2025.0)
                continue;
            var allowed =
                reference <= 1500.0 ? 0.002
                : reference <= 1700.0 ? 0.004
                : 0.011;
            Assert.True(
                Math.Abs(t4 / reference - 1.0) < allowed,
                $"T3 {row["T3_K"]} f {row["fuel_air_ratio"]}: {t4:F2} K against {reference:F2} K"
            );
            rows++;
        }

        Assert.True(rows > 60, $"{rows} rows");
    }

    [Fact]
    public void Inverses_return_to_where_they_came_from() =>
        Composition.Sample(
            (t, y, q) =>
            {
                Kerosene.AtTemperature(t, y, q, out var p);
                Kerosene.AtEnthalpy(p.H, y, q, out var h);
                Kerosene.AtEntropy(p.Phi, y, q, out var s);
                return Math.Abs(h.T / t - 1.0) < 1e-13
                    && Math.Abs(s.T / t - 1.0) < 1e-13
                    && Math.Abs(h.Phi - p.Phi) < 1e-9
                    && Math.Abs(s.H - p.H) < 1e-6;
            },
            iter: 20000
        );

    [Fact]
    public void Partial_derivatives_are_those_of_central_differences() =>
        Composition.Sample(
            (t, y, q) =>
            {
                Kerosene.AtTemperature(t, y, q, out var p);
                bool Same(
                    double exact,
                    Func<double, GasPoint> at,
                    Func<GasPoint, double> f,
                    double step,
                    double scale
                ) => Math.Abs((f(at(step)) - f(at(-step))) / (2.0 * step) - exact) < 2e-6 * scale;
                GasPoint T(double d) => At(t + d, y, q);
                GasPoint Y(double d) => At(t, y + d, q);
                GasPoint Q(double d) => At(t, y, q + d);
                return Math.Abs(t - 1000.0) < 0.2
                    || Same(p.Cp, T, a => a.H, 0.1, 1e3)
                        && Same(p.Cp / t, T, a => a.Phi, 0.1, 1.0)
                        && Same(p.CpT, T, a => a.Cp, 0.1, 1.0)
                        && Same(p.Hy, Y, a => a.H, 1e-4, 4e7)
                        && Same(p.Phiy, Y, a => a.Phi, 1e-4, 1e4)
                        && Same(p.Hq, Q, a => a.H, 1e-4, 1e7)
                        && Same(p.Phiq, Q, a => a.Phi, 1e-4, 1e4);
            },
            iter: 2000
        );

    [Fact]
    public void Nothing_jumps_where_the_two_ranges_of_the_data_meet()
    {
        foreach (var (y, q) in new[] { (0.0, 0.0), (0.03, 0.01), (0.06, 0.0) })
        {
            Kerosene.AtTemperature(1000.0 - 1e-11, y, q, out var below);
            Kerosene.AtTemperature(1000.0 + 1e-11, y, q, out var above);
            Assert.Equal(1.0, above.H / below.H, 1e-13);
            Assert.Equal(1.0, above.Phi / below.Phi, 1e-13);
            Assert.Equal(1.0, above.Cp / below.Cp, 1e-6);
        }
    }

    [Fact]
    public void Fuel_for_a_temperature_has_the_slopes_of_central_differences()
    {
        Kerosene.AtTemperature(800.0, 0.0, 0.01, out var air);
        Kerosene.FuelForTemperature(800.0, air.H, 1600.0, 0.01, 0.99, out var slopes);
        double F(double h, double t4, double q) =>
            Kerosene.FuelForTemperature(0, air.H + h, 1600 + t4, 0.01 + q, 0.99, out _);
        Assert.Equal((F(0, 0.5, 0) - F(0, -0.5, 0)) / 1.0, slopes.T4, 1e-10);
        Assert.Equal((F(500, 0, 0) - F(-500, 0, 0)) / 1000.0, slopes.H3, 1e-13);
        Assert.Equal((F(0, 0, 1e-4) - F(0, 0, -1e-4)) / 2e-4, slopes.Q, 1e-7);
    }

    // C12H23: stoichiometric fuel-air ratio 0.06817, 3.156 kg CO2 and 1.238 kg H2O a kilogram (stoichiometry, by hand).
    // Heating value of Jet A-1: specifications ask for at least 42.8 MJ/kg, 43.0 to 43.2 is typical (from memory).
    [Fact]
    public void Jet_fuel_has_the_properties_of_its_formula()
    {
        Assert.Equal(0.06817, Fuel.JetA1.StoichiometricFuelAirRatio, 0.00005);
        Assert.InRange(Fuel.JetA1.LowerHeatingValue, 42.8e6, 43.4e6);
        Assert.Equal(119.96e6, Fuel.Dihydrogen.LowerHeatingValue, 0.02e6);
        Assert.Equal(0.1673, Fuel.JetA1.MolarMass, 0.0001);
    }

    private static Gen<(double T, double Y, double Q)> Composition =>
        Gen.Select(Gen.Double[160.0, 2600.0], Gen.Double[0.0, 0.06], Gen.Double[0.0, 0.04]);

    private static GasPoint At(double t, double y, double q)
    {
        Kerosene.AtTemperature(t, y, q, out var p);
        return p;
    }

    private static double CompleteCombustion(GasModel gas, double t3, double far)
    {
        gas.AtTemperature(t3, 0.0, 0.0, out var air);
        double low = t3,
            high = 2800.0;
        for (var i = 0; i < 60; i++)
        {
            var t = 0.5 * (low + high);
            if (gas.FuelForTemperature(t3, air.H, t, 0.0, 1.0, out _) < far)
                low = t;
            else
                high = t;
        }

        return low;
    }
}
