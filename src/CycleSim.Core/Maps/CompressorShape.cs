namespace CycleSim.Maps;

/// <summary>
/// Builds a plausible compressor map where nothing but the design pressure ratio is known.
/// </summary>
/// <remarks>
/// Own construction, no source. Backbone (the points of best efficiency): the temperature rise goes with the square of
/// speed; the flow goes with speed times the mean density rise through the machine to the power 3/4, so that front and
/// rear stages share the mismatch. Around it every speed line runs from vertical at choke (beta 0) to a flattening top at
/// surge (beta 1), wider at low speed. Efficiency falls off the backbone parabolically and along it above and below
/// about 92 % speed. Values are relative to design (flow 1, efficiency 1); the pressure ratio is the real one.
/// </remarks>
public static class CompressorShape
{
    /// <summary>Position of the design point on its speed line: nearer to surge than to choke.</summary>
    public const double DesignBeta = 0.6;

    private const double ChokeEnd = DesignBeta / (1.0 - DesignBeta);
    private const double LeastRise = 0.05;
    private const double Gamma = 1.4;
    private const double PolytropicEfficiency = 0.9;

    public static CompressorMap Build(double designPressureRatio)
    {
        var speeds = new double[22];
        for (var i = 0; i < speeds.Length; i++)
            speeds[i] = 0.20 + 0.05 * i;
        var betas = new double[17];
        for (var j = 0; j < betas.Length; j++)
            betas[j] = j / (double)(betas.Length - 1);

        var flow = new double[speeds.Length, betas.Length];
        var pressureRatio = new double[speeds.Length, betas.Length];
        var efficiency = new double[speeds.Length, betas.Length];
        for (var i = 0; i < speeds.Length; i++)
        for (var j = 0; j < betas.Length; j++)
            (flow[i, j], pressureRatio[i, j], efficiency[i, j]) = At(designPressureRatio, speeds[i], betas[j]);
        return new CompressorMap(speeds, betas, flow, pressureRatio, efficiency);
    }

    private static (double Flow, double PressureRatio, double Efficiency) At(double design, double speed, double beta)
    {
        var rise = Math.Pow(design, 1.0 / Exponent) - 1.0;
        var (backboneFlow, backbone) = Backbone(rise, speed);
        backboneFlow /= Backbone(rise, 1.0).Flow;

        // s: 1 on the surge line, 0 at best efficiency, -1.5 where the line has fallen to almost no pressure rise.
        var s = (beta - DesignBeta) / (1.0 - DesignBeta);
        var slack = Math.Max(0.0, 1.0 - speed);
        var width = 0.05 + 0.32 * slack;
        var height = 0.22 + 0.32 * slack;
        var flow = backboneFlow * (1.0 - width * (s + (s < 0.0 ? s * s / 3.0 : 0.5 * s * s)));
        var droop = s < 0.0 ? (1.0 - LeastRise - ChokeEnd * height) / (ChokeEnd * ChokeEnd) : 0.3 * height;
        var pressureRatio = 1.0 + (backbone - 1.0) * (1.0 + height * s - droop * s * s);

        var off = speed - 0.92;
        var along = 1.0 - (off < 0 ? 0.22 : 0.9) * off * off;
        var across = 1.0 - (s < 0.0 ? 0.12 : 0.07) * s * s;
        var atDesign = 1.0 - 0.9 * 0.08 * 0.08;
        return (flow, pressureRatio, along / atDesign * across);
    }

    /// <summary>
    /// Carries a point of a speed line down to a lower speed along the backbone's law: temperature rise with the square of
    /// speed, flow with speed times mean density.
    /// </summary>
    public static (double Flow, double PressureRatio, double Efficiency) CarryDown(
        double flow,
        double pressureRatio,
        double efficiency,
        double fromSpeed,
        double toSpeed
    )
    {
        var rise = (Math.Pow(pressureRatio, 1.0 / Exponent) - 1.0) / (fromSpeed * fromSpeed);
        var from = Backbone(rise, fromSpeed);
        var to = Backbone(rise, toSpeed);
        double Along(double speed) => 1.0 - 0.22 * Math.Pow(Math.Min(0.0, speed - 0.92), 2.0);
        return (flow * to.Flow / from.Flow, to.PressureRatio, efficiency * Along(toSpeed) / Along(fromSpeed));
    }

    private const double Exponent = PolytropicEfficiency * Gamma / (Gamma - 1.0);

    /// <summary>Flow (any unit) and pressure ratio at a speed, for a temperature rise over inlet temperature at speed 1.</summary>
    private static (double Flow, double PressureRatio) Backbone(double rise, double speed)
    {
        var tau = 1.0 + rise * speed * speed;
        var ratio = Math.Pow(tau, Exponent);
        return (speed * Math.Pow(ratio / tau, 0.75), ratio);
    }
}
