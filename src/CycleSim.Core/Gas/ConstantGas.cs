namespace CycleSim.Gas;

/// <summary>
/// Air and burnt gas with constant specific heats, as textbook cycles use them. The composition y is the share of burnt
/// gas: 1 at the combustor exit whatever the fuel flow, less where air has been mixed in.
/// </summary>
/// <remarks>
/// Textbooks read the fuel-air ratio off a chart that was drawn for the real gas; so does this model: it asks the
/// thermally perfect gas given to it for the fuel between the two temperatures. Under equal Mach number and
/// corrected speeds everything except the fuel flow is exactly similar, which makes similarity a sharp test of the path.
/// </remarks>
public sealed class ConstantGas : GasModel
{
    private readonly double _cpAir,
        _cpBurnt;
    private readonly ThermallyPerfectGas _chart;
    private readonly bool _balancesHeat;

    /// <param name="cpAir">J/(kg K)</param>
    /// <param name="gammaAir">ratio of specific heats of air</param>
    /// <param name="cpBurnt">J/(kg K)</param>
    /// <param name="gammaBurnt">ratio of specific heats of burnt gas</param>
    /// <param name="chart">the gas whose combustion gives the fuel-air ratio</param>
    /// <param name="countsFuelMass">whether the fuel's mass joins the stream</param>
    /// <param name="balancesHeat">
    /// whether the fuel-air ratio is that of a heat balance with the constant specific heats, enthalpies counted from 0 K,
    /// instead of the real gas's
    /// </param>
    public ConstantGas(
        double cpAir,
        double gammaAir,
        double cpBurnt,
        double gammaBurnt,
        ThermallyPerfectGas chart,
        bool countsFuelMass = false,
        bool balancesHeat = false
    )
    {
        _balancesHeat = balancesHeat;
        (_cpAir, _cpBurnt, _chart, CountsFuelMass) = (cpAir, cpBurnt, chart, countsFuelMass);
        RAir = cpAir * (gammaAir - 1.0) / gammaAir;
        RFuelLine = cpBurnt * (gammaBurnt - 1.0) / gammaBurnt;
    }

    public override double RAir { get; }

    public override double RWater => RAir;

    public override double RFuelLine { get; }

    public override double HeatingValue => _chart.HeatingValue;

    public override double StoichiometricFuelAirRatio => _chart.StoichiometricFuelAirRatio;

    public override bool CarriesHumidity => false;

    public override bool CountsFuelMass { get; }

    public override void AtTemperature(double t, double y, double q, out GasPoint point)
    {
        point = default;
        Fill(t, Math.Log(t), y, ref point);
    }

    public override void AtEnthalpy(double h, double y, double q, out GasPoint point)
    {
        point = default;
        var t = h / Cp(y);
        Fill(t, Math.Log(t), y, ref point);
    }

    public override void AtEntropy(double phi, double y, double q, out GasPoint point)
    {
        point = default;
        var logT = phi / Cp(y);
        Fill(Math.Exp(logT), logT, y, ref point);
    }

    public override double SonicStart(double totalTemperature, double y, double q)
    {
        // h0 = h + a2/2 with cp constant: T*/T0 = 2/(gamma + 1).
        var gamma = Cp(y) / (Cp(y) - GasConstant(y, q));
        return totalTemperature * 2.0 / (gamma + 1.0);
    }

    public override double FuelForTemperature(
        double t3,
        double h3,
        double t4,
        double q,
        double efficiency,
        out FuelSlopes slopes
    )
    {
        if (_balancesHeat)
        {
            var rest = efficiency * HeatingValue - _cpBurnt * t4;
            var ratio = (_cpBurnt * t4 - _cpAir * t3) / rest;
            slopes = new FuelSlopes { T3 = -_cpAir / rest, T4 = _cpBurnt * (1.0 + ratio) / rest };
            return ratio;
        }

        _chart.AtTemperature(t3, 0.0, 0.0, out var air);
        var f = _chart.FuelForTemperature(t3, air.H, t4, 0.0, efficiency, out slopes);
        slopes.T3 = slopes.H3 * air.Cp;
        slopes.H3 = 0.0;
        slopes.Q = 0.0;
        return f;
    }

    public override double FuelEnthalpyFlow(double fuelFlow, double efficiency) =>
        _balancesHeat && CountsFuelMass ? fuelFlow * efficiency * HeatingValue : double.NaN;

    public override double BurntFraction(double fuelAirRatio, out double slope)
    {
        slope = 0.0;
        return 1.0;
    }

    public override double FuelAirRatioOf(double y) => 0.0;

    private double Cp(double y) => _cpAir + y * (_cpBurnt - _cpAir);

    private void Fill(double t, double logT, double y, ref GasPoint point)
    {
        var cp = Cp(y);
        var cpy = _cpBurnt - _cpAir;
        point.T = t;
        point.H = cp * t;
        point.Phi = cp * logT;
        point.Cp = cp;
        point.Hy = cpy * t;
        point.Phiy = cpy * logT;
        point.Cpy = cpy;
    }
}
