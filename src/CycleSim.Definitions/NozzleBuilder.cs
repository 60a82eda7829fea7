using CycleSim.Components;
using CycleSim.Engine;

namespace CycleSim.Definitions;

/// <summary>Nozzles: area ratio, and coefficients that are constant or go with the pressure ratio.</summary>
internal static class NozzleBuilder
{
    public static NozzleDefinition Build(TableReader table, string source, List<Problem> problems)
    {
        if (table.Number("exit_area_ratio", 1.0) > 1.0 && table.Has("efficiency"))
            table.Report(
                "efficiency",
                "is for a convergent nozzle; a convergent-divergent one takes its losses in its coefficients."
            );
        var spec = Schema.Find(table.Node.Name + ".coefficients")!;
        var points = table.Node.Children.Select(n => new TableReader(spec, n, source, problems)).ToList();
        return new NozzleDefinition
        {
            Efficiency = table.Number("efficiency", 1.0),
            ExitAreaRatio = table.Number("exit_area_ratio", 1.0),
            VelocityCoefficient = table.Number("velocity_coefficient", 1.0),
            DischargeCoefficient = table.Number("discharge_coefficient", 1.0),
            VelocityCurve = Curve(table, points, "velocity"),
            DischargeCurve = Curve(table, points, "discharge"),
        };
    }

    private static CoefficientCurve? Curve(TableReader table, List<TableReader> points, string key)
    {
        if (!points.Any(p => p.Has(key)))
            return null;
        if (table.Has(key + "_coefficient"))
        {
            table.Report(key + "_coefficient", $"is given beside {key} in the [[{table.Node.Name}.coefficients]].");
            return null;
        }

        if (points.FirstOrDefault(p => !p.Has(key)) is { } without)
        {
            without.Report(key, "is missing; the other points of this nozzle give it.");
            return null;
        }

        var ratios = points.Select(p => p.Number("pressure_ratio")).ToList();
        var values = points.Select(p => p.Number(key)).ToList();
        if (ratios.Concat(values).Any(double.IsNaN))
            return null;
        try
        {
            return new CoefficientCurve(ratios, values);
        }
        catch (ArgumentException error)
        {
            points[0].Report(key, error.Message);
            return null;
        }
    }
}
