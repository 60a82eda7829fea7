using System.CommandLine;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Reports;

namespace CycleSim.Cli;

/// <summary>One operating point with everything behind it.</summary>
internal static class PointCommand
{
    private sealed record Setting(Option<string?> Option, Quantity Quantity, Dimension Dimension);

    public static Command Create()
    {
        var common = new CommonOptions();
        var design = new Option<bool>("--design") { Description = "The design point itself." };
        var rating = CommonOptions.Text("--rating", "Power of a rating of the definition, for instance take-off.");
        Setting[] settings =
        [
            new(
                CommonOptions.Text("--thrust", "Net thrust, for instance \"100 kN\"."),
                Quantity.NetThrust,
                Dimension.Force
            ),
            new(
                CommonOptions.Text("--fuel-flow", "Fuel flow, for instance \"0.8 kg/s\"."),
                Quantity.FuelFlow,
                Dimension.MassFlow
            ),
            new(
                CommonOptions.Text("--T4", "Combustor exit temperature, for instance \"1600 K\"."),
                Quantity.T4,
                Dimension.Temperature
            ),
            new(
                CommonOptions.Text("--T41", "Rotor inlet temperature, for instance \"1550 K\"."),
                Quantity.T41,
                Dimension.Temperature
            ),
            new(
                CommonOptions.Text(
                    "--EGT",
                    "Gas temperature behind the first turbine (station 45), for instance \"850 °C\"."
                ),
                Quantity.T45,
                Dimension.Temperature
            ),
            new(
                CommonOptions.Text("--N1", "Low-pressure speed over its design value, for instance \"95 %\"."),
                Quantity.N1,
                Dimension.Share
            ),
            new(
                CommonOptions.Text("--N2", "Speed of the second spool over its design value."),
                Quantity.N2,
                Dimension.Share
            ),
            new(
                CommonOptions.Text("--N3", "Speed of the third spool over its design value."),
                Quantity.N3,
                Dimension.Share
            ),
            new(
                CommonOptions.Text("--EPR", "Engine pressure ratio P5/P2, for instance 1.45."),
                Quantity.Epr,
                Dimension.Number
            ),
            new(
                CommonOptions.Text("--lever", "Lever position between idle and full, for instance \"80 %\"."),
                Quantity.Lever,
                Dimension.Share
            ),
        ];
        var command = new Command(
            "point",
            """
            One operating point: performance, stations, components, air, balances.

            Examples:
              cyclesim point velda-27 --design
              cyclesim point velda-27 --altitude "0 ft" --mach 0.2 --isa "15 K" --rating take-off
              cyclesim point velda-27 --altitude "35000 ft" --mach 0.78 --thrust "22 kN" --units us
              cyclesim point velda-27 --altitude "10000 ft" --cas "250 kt" --lever "40 %" --bleed "customer-bleed=3 %"
            """
        )
        {
            design,
            rating,
        };
        common.AddTo(command, temperature: true);
        foreach (var setting in settings)
            command.Add(setting.Option);

        command.SetAction(result =>
        {
            var given = settings.Where(s => result.GetValue(s.Option) is not null).Select(s => s.Option.Name).ToList();
            if (result.GetValue(rating) is not null)
                given.Add("--rating");
            if (result.GetValue(design))
                given.Add("--design");
            if (given.Count != 1)
                throw new UsageException(
                    given.Count == 0
                        ? "say at what power: --design, --rating, --thrust, --fuel-flow, --T4, --T41, --EGT, --N1, --N2, --N3, --EPR or --lever."
                        : $"{string.Join(" and ", given)} each set the power; use one of them."
                );
            if (
                result.GetValue(design)
                && (result.GetValue(common.Altitude) is not null || result.GetValue(common.Mach) is not null)
            )
                throw new UsageException("--design is the point of the definition; it takes no altitude or speed.");

            var loaded = EngineLibrary.Load(result.GetRequiredValue(common.Engine));
            var model = new EngineModel(loaded.Engine);
            var point = Solve(result, common, model, settings, design, rating);
            if (result.GetValue(common.Json))
                Documents.Print(Documents.Point(point, loaded));
            else
                PointLayout.Print(point, loaded, common.Display(result));
            return ExitCode.Done;
        });
        return command;
    }

    private static OperatingPoint Solve(
        ParseResult result,
        CommonOptions common,
        EngineModel model,
        Setting[] settings,
        Option<bool> design,
        Option<string?> rating
    )
    {
        if (result.GetValue(design))
            return model.DesignPoint();
        var flight = common.Flight(result);
        var inputs = model.Inputs(flight);
        common.Loads(result, model.Engine)(inputs);
        if (result.GetValue(rating) is { } name)
            return model.AtRating(flight, model.Rating(name), inputs);
        var setting = settings.Single(s => result.GetValue(s.Option) is not null);
        var text = result.GetValue(setting.Option)!;
        var value = setting.Dimension switch
        {
            Dimension.Share => CommonOptions.Share(setting.Option.Name, text),
            Dimension.Number => CommonOptions.Plain(setting.Option.Name, text),
            _ => CommonOptions.Quantity(result, setting.Option, setting.Dimension, ""),
        };
        return model.At(flight, setting.Quantity, value, inputs);
    }
}
