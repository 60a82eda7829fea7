using CycleSim.Gas;

namespace CycleSim.Definitions;

/// <summary>Makes the gas of an engine from its [gas] and [fuel] tables.</summary>
internal static class GasBuilder
{
    private static readonly string[] ConstantKeys = ["air_cp", "air_gamma", "burnt_cp", "burnt_gamma"];

    private static readonly string[] OptionalConstantKeys = ["count_fuel_mass", "fuel_air_ratio"];

    public static GasModel? Build(TableReader gas, TableReader fuelTable)
    {
        if (gas.Has("fuel") && fuelTable.Present)
            gas.Report("fuel", "is given beside a [fuel] table; give one of the two.");
        var constant = gas.Text("model") == "constant";
        foreach (var key in ConstantKeys)
        {
            if (constant && !gas.Has(key))
                gas.Report("model", $"\"constant\" needs {key}.");
            if (!constant && gas.Has(key))
                gas.Report(key, "belongs to model = \"constant\".");
        }

        foreach (var key in OptionalConstantKeys.Where(k => !constant && gas.Has(k)))
            gas.Report(key, "belongs to model = \"constant\".");
        var fuel = fuelTable.Present ? Described(fuelTable) : Known(gas.Text("fuel"));
        if (fuel is null || constant && ConstantKeys.Any(key => double.IsNaN(gas.Number(key))))
            return null;
        var perfect = ThermallyPerfectGas.For(fuel);
        return constant
            ? new ConstantGas(
                gas.Number("air_cp"),
                gas.Number("air_gamma"),
                gas.Number("burnt_cp"),
                gas.Number("burnt_gamma"),
                perfect,
                gas.Number("count_fuel_mass", 0.0) > 0.0,
                gas.Text("fuel_air_ratio") == "heat balance"
            )
            : perfect;
    }

    private static Fuel Known(string name) =>
        name switch
        {
            "HEFA" => Fuel.Hefa,
            "hydrogen" => Fuel.Dihydrogen,
            _ => Fuel.JetA1,
        };

    private static Fuel? Described(TableReader table)
    {
        var fuel = new Fuel(
            table.Text("name"),
            table.Number("carbon"),
            table.Number("hydrogen"),
            table.Number("heating_value")
        );
        return double.IsFinite(fuel.Carbon + fuel.Hydrogen + fuel.LowerHeatingValue) ? fuel : null;
    }
}
