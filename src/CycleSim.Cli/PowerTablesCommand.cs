using System.CommandLine;
using System.Text.Json.Nodes;
using CycleSim.Air;
using CycleSim.Definitions;
using CycleSim.Reports;
using CycleSim.Studies;
using Units = CycleSim.Definitions.Units;

namespace CycleSim.Cli;

/// <summary>Power-setting tables of ratings, and N1 held along a take-off run.</summary>
internal static class PowerTablesCommand
{
    private const int MostCells = 5000,
        MostRuns = 12;

    private sealed record Options(
        CommonOptions Common,
        LoadOption Load,
        Option<string[]> Rating,
        Option<string?> Altitudes,
        Option<string?> Outside,
        Option<string?> Offsets,
        Option<string?> Coldest,
        Option<string?> Hottest,
        Option<string?> SetAt,
        Option<string?> HoldTo,
        Option<string?> Step
    );

    public static Command Create()
    {
        var o = new Options(
            new CommonOptions(),
            new LoadOption(),
            new Option<string[]>("--rating")
            {
                Description = "Rating of the definition, may be repeated; its first one without it.",
            },
            CommonOptions.Text(
                "--altitudes",
                "Pressure altitudes, for instance \"0 ft, 2000 ft\"; sea level to 10 000 ft without it."
            ),
            CommonOptions.Text(
                "--outside",
                "Outside air temperatures of the rows, for instance \"-10 °C, 0 °C, 10 °C\"; every 10 °C of the envelope without it."
            ),
            CommonOptions.Text(
                "--isa-offsets",
                "Rows by offset from the standard temperature instead, for instance \"-10 K, 0 K, 10 K\"."
            ),
            CommonOptions.Text("--coldest", "Offset from ISA below which cells stay empty; \"-60 K\" without it."),
            CommonOptions.Text("--hottest", "Offset from ISA above which cells stay empty; \"40 K\" without it."),
            CommonOptions.Text(
                "--set-at",
                "Take-off run: calibrated airspeed by which N1 is set, for instance \"60 kt\"; N1 is held from there on."
            ),
            CommonOptions.Text("--hold-to", "Calibrated airspeed at which the run ends; \"150 kt\" without it."),
            CommonOptions.Text("--step", "Step of calibrated airspeed in the run; \"20 kt\" without it.")
        );
        var command = new Command(
            "power-setting",
            """
            Power-setting tables: N1 and EPR of ratings against outside temperature and pressure altitude, what governs each cell, and
            the corrections for loads. With --set-at: N1 set at an airspeed of the take-off run and held.

            Examples:
              cyclesim power-setting velda-27 --temperatures C --load "packs: customer-bleed=1.2 kg/s"
              cyclesim power-setting velda-27 --rating max-climb --rating max-cruise --cas "280 kt" --altitudes "10000 ft, 20000 ft, 30000 ft"
              cyclesim power-setting velda-27 --rating max-cruise --mach 0.78 --altitudes "31000 ft, 35000 ft, 39000 ft" \
                --isa-offsets "-10 K, 0 K, 10 K" --csv cruise.csv
              cyclesim power-setting velda-27 --set-at "60 kt" --hold-to "150 kt" --altitudes "2000 ft" --outside "30 °C"
            """
        )
        {
            o.Common.Engine,
            o.Rating,
            o.Altitudes,
            o.Outside,
            o.Offsets,
            o.Coldest,
            o.Hottest,
            o.Common.Mach,
            o.Common.CalibratedAirspeed,
            o.SetAt,
            o.HoldTo,
            o.Step,
            o.Load.Option,
            o.Common.Humidity,
            o.Common.Bleed,
            o.Common.Open,
            o.Common.Shut,
            o.Common.Offtake,
            o.Common.Worn,
            o.Common.UnitSystem,
            o.Common.Temperatures,
            o.Common.Json,
            o.Common.Csv,
            o.Common.Parquet,
        };
        command.SetAction((result, cancellation) => Task.FromResult(Run(result, o, cancellation)));
        return command;
    }

    private static int Run(ParseResult result, Options o, CancellationToken cancellation)
    {
        var loaded = EngineLibrary.Load(result.GetRequiredValue(o.Common.Engine));
        var first = CommonOptions.FirstRating(loaded);
        var ratings = result.GetValue(o.Rating) is { Length: > 0 } given ? given : [first];
        var altitudes = Altitudes(result, o);
        var axis = Axis(result, o, altitudes);
        var model = new EngineModel(loaded.Engine);
        return result.GetValue(o.SetAt) is not null
            ? RunTakeOff(result, o, loaded, model, ratings, altitudes, axis)
            : RunTables(result, o, loaded, model, ratings, altitudes, axis, cancellation);
    }

    private static int RunTables(
        ParseResult result,
        Options o,
        LoadedDefinition loaded,
        EngineModel model,
        string[] ratings,
        double[] altitudes,
        TemperatureAxis axis,
        CancellationToken cancellation
    )
    {
        foreach (var option in new[] { o.HoldTo, o.Step })
            if (result.GetValue(option) is not null)
                throw new UsageException($"{option.Name} belongs to a take-off run; give {o.SetAt.Name} with it.");
        var (coldest, hottest) = Envelope(result, o);
        var study = CommonOptions.Checked(() =>
            PowerTables.Run(
                model,
                ratings,
                altitudes,
                axis,
                Speed(result, o.Common),
                coldest,
                hottest,
                o.Common.HumidityOf(result),
                o.Load.Read(result, loaded.Engine),
                o.Common.Loads(result, model.Engine),
                cancellation
            )
        );
        Exports.Write(result, o.Common, study.Table(Exports.Provenance(result, loaded)));
        if (result.GetValue(o.Common.Json))
            Documents.Print(PowerTablesLayout.Document(study, loaded));
        else
            PowerTablesLayout.Print(study, loaded, o.Common.Display(result));
        return ExitCode.Done;
    }

    private static int RunTakeOff(
        ParseResult result,
        Options o,
        LoadedDefinition loaded,
        EngineModel model,
        string[] ratings,
        double[] altitudes,
        TemperatureAxis axis
    )
    {
        foreach (var option in new[] { o.Common.Mach, o.Common.CalibratedAirspeed })
            if (result.GetValue(option) is not null)
                throw new UsageException($"{o.SetAt.Name} gives the speeds of the run; leave {option.Name} out.");
        if (result.GetValue(o.Load.Option) is { Length: > 0 })
            throw new UsageException(
                $"corrections for loads belong to the tables; in a run say {o.Common.Bleed.Name} and {o.Common.Offtake.Name}."
            );
        var temperatures = axis is TemperatureAxis.Outside outside
            ? outside.Item
            : throw new UsageException($"a run wants {o.Outside.Name}, not {o.Offsets.Name}.");
        if (ratings.Length * altitudes.Length * temperatures.Length > MostRuns)
            throw new UsageException(
                $"{ratings.Length * altitudes.Length * temperatures.Length} runs are more than {MostRuns}; narrow {o.Altitudes.Name} and {o.Outside.Name}, for instance --altitudes \"2000 ft\" --outside \"30 °C\"."
            );
        var setAt = CommonOptions.Quantity(result, o.SetAt, Dimension.Speed, "");
        var holdTo = CommonOptions.Quantity(result, o.HoldTo, Dimension.Speed, "150 kt");
        var step = CommonOptions.Quantity(result, o.Step, Dimension.Speed, "20 kt");
        if (!(setAt >= 0.0 && holdTo > 0.0 && setAt <= holdTo))
            throw new UsageException($"{o.SetAt.Name} must lie between standstill and {o.HoldTo.Name}.");
        if (!(step > 0.0) || holdTo / step > 1000.0)
            throw new UsageException($"{o.Step.Name} must be above zero and leave at most 1000 rows.");
        var runs = (
            from rating in ratings
            from altitude in altitudes
            from temperature in temperatures
            select CommonOptions.Checked(() =>
                TakeOffRun.Run(
                    model,
                    rating,
                    altitude,
                    temperature,
                    setAt,
                    holdTo,
                    step,
                    o.Common.HumidityOf(result),
                    o.Common.Loads(result, model.Engine)
                )
            )
        ).ToList();
        if (runs.Count > 1 && (result.GetValue(o.Common.Csv) ?? result.GetValue(o.Common.Parquet)) is not null)
            throw new UsageException("a file takes one run; name one rating, altitude and temperature.");
        Exports.Write(result, o.Common, runs[0].Table(Exports.Provenance(result, loaded)));
        if (result.GetValue(o.Common.Json))
            Documents.Print(PowerTablesLayout.Document(runs, loaded));
        else
            PowerTablesLayout.Print(runs, loaded, o.Common.Display(result));
        return ExitCode.Done;
    }

    private static FlightSpeed Speed(ParseResult result, CommonOptions common)
    {
        if (result.GetValue(common.Mach) is not { } mach)
            return result.GetValue(common.CalibratedAirspeed) is null
                ? FlightSpeed.NewMach(0.0)
                : FlightSpeed.NewCalibrated(
                    CommonOptions.Quantity(result, common.CalibratedAirspeed, Dimension.Speed, "")
                );
        return result.GetValue(common.CalibratedAirspeed) is null
            ? FlightSpeed.NewMach(CommonOptions.Plain(common.Mach.Name, mach))
            : throw new UsageException(
                $"{common.Mach.Name} and {common.CalibratedAirspeed.Name} both give the speed; use one of them."
            );
    }

    private static double[] Altitudes(ParseResult result, Options o)
    {
        var altitudes = List(
            result,
            o.Altitudes,
            Dimension.Length,
            "0 ft, 2000 ft, 4000 ft, 6000 ft, 8000 ft, 10000 ft"
        );
        foreach (var altitude in altitudes)
            CommonOptions.Checked(() => StandardAtmosphere.Temperature(altitude));
        return altitudes;
    }

    private static (double Coldest, double Hottest) Envelope(ParseResult result, Options o)
    {
        var coldest = CommonOptions.Quantity(result, o.Coldest, Dimension.TemperatureDifference, "-60 K");
        var hottest = CommonOptions.Quantity(result, o.Hottest, Dimension.TemperatureDifference, "40 K");
        return coldest < hottest
            ? (coldest, hottest)
            : throw new UsageException($"{o.Coldest.Name} must lie below {o.Hottest.Name}.");
    }

    private static TemperatureAxis Axis(ParseResult result, Options o, double[] altitudes)
    {
        if (result.GetValue(o.Outside) is not null && result.GetValue(o.Offsets) is not null)
            throw new UsageException($"{o.Outside.Name} and {o.Offsets.Name} both give the rows; use one of them.");
        var axis =
            result.GetValue(o.Offsets) is not null
                ? TemperatureAxis.NewIsaOffsets(List(result, o.Offsets, Dimension.TemperatureDifference, ""))
            : result.GetValue(o.Outside) is not null
                ? TemperatureAxis.NewOutside(List(result, o.Outside, Dimension.Temperature, ""))
            : TemperatureAxis.NewOutside(UsualTemperatures(altitudes));
        var rows = axis is TemperatureAxis.Outside outside ? outside.Item : ((TemperatureAxis.IsaOffsets)axis).Item;
        return rows.Length * altitudes.Length <= MostCells
            ? axis
            : throw new UsageException(
                $"{rows.Length * altitudes.Length} cells are more than {MostCells}; give fewer altitudes or temperatures."
            );
    }

    // Tens of degrees Celsius from ISA - 40 K at the highest altitude to ISA + 40 K at the lowest.
    private static double[] UsualTemperatures(double[] altitudes)
    {
        var from = Math.Ceiling((altitudes.Min(a => StandardAtmosphere.Temperature(a)) - 273.15 - 40.0) / 10.0);
        var to = Math.Floor((altitudes.Max(a => StandardAtmosphere.Temperature(a)) - 273.15 + 40.0) / 10.0);
        return [.. Enumerable.Range(0, (int)(to - from) + 1).Select(i => 273.15 + 10.0 * (from + i))];
    }

    private static double[] List(ParseResult result, Option<string?> option, Dimension dimension, string otherwise)
    {
        var text = result.GetValue(option) ?? otherwise;
        var values = text.Split(',', StringSplitOptions.TrimEntries | StringSplitOptions.RemoveEmptyEntries)
            .Select(part =>
                Units.TryRead(part, dimension, out var value, out var problem)
                    ? value
                    : throw new UsageException($"{option.Name}: {problem}")
            )
            .Order()
            .Distinct()
            .ToArray();
        return values.Length > 0 ? values : throw new UsageException($"{option.Name}: '{text}' lists nothing.");
    }
}
