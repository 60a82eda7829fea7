using System.CommandLine;
using System.Text.Json.Nodes;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>Which worn parts explain a shift of readings.</summary>
internal static class DiagnoseCommand
{
    // Name on the command line, quantity, unit of an absolute value, and the usual scatter: of temperatures in K, else relative.
    private static readonly (string Name, Quantity Quantity, Dimension Dimension, double Sigma)[] Readings =
    [
        ("EGT", Quantity.T45, Dimension.TemperatureDifference, 3.0),
        ("T5", Quantity.T5, Dimension.TemperatureDifference, 3.0),
        ("T3", Quantity.T3, Dimension.TemperatureDifference, 2.0),
        ("P3", Quantity.P3, Dimension.Pressure, 0.005),
        ("fuel-flow", Quantity.FuelFlow, Dimension.MassFlow, 0.005),
        ("thrust", Quantity.NetThrust, Dimension.Force, 0.005),
        ("EPR", Quantity.Epr, Dimension.Number, 0.003),
        ("N1", Quantity.N1, Dimension.Share, 0.001),
        ("N2", Quantity.N2, Dimension.Share, 0.001),
        ("N3", Quantity.N3, Dimension.Share, 0.001),
    ];

    public static Command Create()
    {
        var common = new CommonOptions();
        var power = new PowerSetting();
        var names = string.Join(", ", Readings.Select(r => r.Name));
        var shift = new Option<string[]>("--shift")
        {
            Description =
                $"Shift of a reading from what it should be, for instance \"EGT=12 K\" or \"fuel-flow=1.1 %\"; of {names}; may be repeated.",
        };
        var sigma = new Option<string[]>("--sigma")
        {
            Description = "Standard deviation of a reading's shift, for instance \"EGT=3 K\"; may be repeated.",
        };
        var cause = new Option<string[]>("--cause")
        {
            Description =
                "A part to be fitted together with the others named, for instance \"hpt efficiency\"; without any, every part is tried alone.",
        };
        var prior = CommonOptions.Text(
            "--prior",
            "Standard deviation of every cause before the readings, for instance \"1 %\"; lets more causes than readings be fitted."
        );
        var command = new Command(
            "diagnose",
            """
            Which worn parts explain shifted readings, the power setting held: every part alone, ranked; parts fitted together by
            weighted least squares on the model; which of them these readings cannot tell apart.

            Examples:
              cyclesim diagnose velda-27 --altitude "0 ft" --mach 0 --N1 "95 %" --shift "EGT=12 K" --shift "fuel-flow=1.1 %" --shift "N2=-0.3 %"
              cyclesim diagnose velda-27 --altitude "35000 ft" --mach 0.78 --EPR 1.6 --shift "EGT=9 K" --shift "fuel-flow=0.8 %" --cause "hpt efficiency" --cause "hpc efficiency"
            """
        )
        {
            shift,
            sigma,
            cause,
            prior,
            common.Csv,
            common.Parquet,
        };
        common.AddTo(command, temperature: true);
        power.AddQuantitiesTo(command);
        command.SetAction(result =>
        {
            var loaded = EngineLibrary.Load(result.GetRequiredValue(common.Engine));
            var model = new EngineModel(loaded.Engine);
            var flight = common.Flight(result);
            var held = power.Single(result);
            var loads = common.Loads(result, model.Engine);
            var inputs = model.Inputs(flight);
            loads(inputs);
            var expected = model.At(flight, held.Quantity, held.Value, inputs);
            var study = HealthDiagnosis.Run(
                model,
                flight,
                held,
                Shifts(result.GetValue(shift) ?? [], result.GetValue(sigma) ?? [], expected),
                result.GetValue(cause) ?? [],
                result.GetValue(prior) is { } text ? CommonOptions.Share("--prior", text) : 0.0,
                loads
            );
            Exports.Write(result, common, study.Table(Exports.Provenance(result, loaded)));
            if (result.GetValue(common.Json))
                Documents.Print(Document(study, loaded));
            else
                Print(study, loaded, common.Display(result));
            return ExitCode.Done;
        });
        return command;
    }

    private static List<Reading> Shifts(string[] shifts, string[] sigmas, OperatingPoint expected)
    {
        var scatter = new Dictionary<Quantity, double>();
        foreach (var text in sigmas)
        {
            var (quantity, value) = Read("--sigma", text, expected);
            if (!scatter.TryAdd(quantity, value))
                throw new UsageException($"--sigma: {QuantityText.Name(quantity)} is given twice.");
        }

        var readings = new List<Reading>();
        foreach (var text in shifts)
        {
            var (quantity, value) = Read("--shift", text, expected);
            var usual = Readings.Single(r => r.Quantity == quantity);
            var otherwise =
                usual.Dimension == Dimension.TemperatureDifference
                    ? usual.Sigma
                    : usual.Sigma * expected.Value(quantity);
            readings.Add(new Reading(quantity, value, scatter.GetValueOrDefault(quantity, otherwise)));
        }

        foreach (var quantity in scatter.Keys.Where(q => readings.All(r => r.Quantity != q)))
            throw new UsageException($"--sigma: {QuantityText.Name(quantity)} has no --shift.");
        return readings;
    }

    // A per cent is of the expected value; anything else is absolute, in the reading's own unit. Speeds are per cent of design.
    private static (Quantity Quantity, double Value) Read(string option, string text, OperatingPoint expected)
    {
        var (name, value) = CommonOptions.Pair(option, text, "EGT=12 K");
        var reading = Readings.FirstOrDefault(r => r.Name.Equals(name, StringComparison.OrdinalIgnoreCase));
        if (reading.Name is null)
            throw new UsageException(
                $"{option}: '{name}' is no reading; expected one of {string.Join(", ", Readings.Select(r => r.Name))}."
            );
        if (reading.Quantity is Quantity.N2 or Quantity.N3 && reading.Quantity - Quantity.N1 >= expected.Spools.Count)
            throw new UsageException($"{option}: this engine has no spool for {name}.");
        var where = $"{option} {name}";
        if (reading.Dimension == Dimension.Share)
            return (reading.Quantity, CommonOptions.Share(where, value));
        if (value.EndsWith('%'))
            return (reading.Quantity, CommonOptions.Share(where, value) * expected.Value(reading.Quantity));
        return (
            reading.Quantity,
            reading.Dimension == Dimension.Number
                ? CommonOptions.Plain(where, value)
                : CommonOptions.Quantity(where, value, reading.Dimension)
        );
    }

    private static void Print(DiagnosisResult s, LoadedDefinition loaded, Display d)
    {
        Layout.Line(
            $"{s.Engine}: {d.Altitude(s.Expected.Flight.PressureAltitude)} {d.AltitudeUnit}, Mach {Display.Fixed(s.Expected.Flight.Mach, 3)}, {PointLayout.Setting(s.Held, d)} held"
        );
        Layout.Line();
        Layout.Table(
            "Readings: shift from the expected value, over its standard deviation"
                + (s.Estimates.Count > 0 ? ", and what the parts fitted together leave of it" : ""),
            ["", "expected", "shift %", "sigma %", "shift/sigma", "left/sigma"],
            s.Readings.Select(r =>
            {
                var expected = s.Expected.Value(r.Reading.Quantity);
                return new[]
                {
                    QuantityText.Name(r.Reading.Quantity),
                    PointLayout.Setting(new Limit(r.Reading.Quantity, expected), d),
                    Display.Percent(r.Reading.Shift / expected),
                    Display.Percent(r.Reading.Sigma / expected),
                    Display.Fixed(r.Reading.Shift / r.Reading.Sigma, 2),
                    s.Estimates.Count > 0 ? Display.Fixed(r.Miss, 2) : "-",
                };
            })
        );
        if (s.Estimates.Count > 0)
            Layout.Table(
                $"Parts fitted together: chi-square {Display.Fixed(s.ChiSquare, 2)} with {s.DegreesOfFreedom} degrees of freedom",
                ["", "change %", "+- %", "by the Jacobian alone %"],
                s.Estimates.Select(e =>
                    new[]
                    {
                        e.Name,
                        Display.Percent(e.Full),
                        Display.Percent(e.StandardDeviation),
                        Display.Percent(e.Linear),
                    }
                )
            );
        Layout.Table(
            $"Every part alone, the best first (chi-square with nothing wrong {Display.Fixed(s.ChiSquareOfNothing, 2)})",
            ["", "change %", "+- %", "chi-square"],
            s.Singles.Select(c =>
                new[]
                {
                    c.Name,
                    Display.Percent(c.Change),
                    Display.Percent(c.StandardDeviation),
                    Display.Fixed(c.ChiSquare, 2),
                }
            )
        );
        foreach (var remark in s.Remarks)
            Layout.Line(char.ToUpperInvariant(remark[0]) + remark[1..]);
        Layout.Line(
            "Standard deviations not given are usual ones (EGT 3 K, fuel flow and pressures 0.5 %, speeds 0.1 %; own choice, no source). Sensors and bleeds that are not as assumed look like worn parts."
        );
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    private static JsonObject Document(DiagnosisResult s, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["held"] = Documents.LimitOf(s.Held);
        document["expected"] = Documents.Point(s.Expected, loaded);
        document["readings"] = Documents.Array(
            s.Readings,
            r => new JsonObject
            {
                ["quantity"] = r.Reading.Quantity.ToString(),
                ["shift"] = Documents.Number(r.Reading.Shift),
                ["sigma"] = Documents.Number(r.Reading.Sigma),
                ["explained"] = Documents.Number(r.Explained),
                ["miss"] = Documents.Number(r.Miss),
            }
        );
        document["together"] = Documents.Array(
            s.Estimates,
            e => new JsonObject
            {
                ["name"] = e.Name,
                ["change_linear"] = Documents.Number(e.Linear),
                ["change"] = Documents.Number(e.Full),
                ["standard_deviation"] = Documents.Number(e.StandardDeviation),
            }
        );
        document["alone"] = Documents.Array(
            s.Singles,
            c => new JsonObject
            {
                ["name"] = c.Name,
                ["change"] = Documents.Number(c.Change),
                ["standard_deviation"] = Documents.Number(c.StandardDeviation),
                ["chi_square"] = Documents.Number(c.ChiSquare),
            }
        );
        document["chi_square"] = Documents.Number(s.ChiSquare);
        document["degrees_of_freedom"] = s.DegreesOfFreedom;
        document["chi_square_of_nothing"] = Documents.Number(s.ChiSquareOfNothing);
        document["alike"] = Documents.Array(
            s.Alike,
            a => new JsonObject
            {
                ["first"] = a.First,
                ["second"] = a.Second,
                ["cosine"] = Documents.Number(a.Cosine),
            }
        );
        document["remarks"] = new JsonArray([.. s.Remarks.Select(r => JsonValue.Create(r))]);
        return document;
    }
}
