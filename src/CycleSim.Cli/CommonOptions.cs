using System.CommandLine;
using System.Globalization;
using CycleSim.Air;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Studies;
using Units = CycleSim.Definitions.Units;

namespace CycleSim.Cli;

/// <summary>Options that several commands share, and how their texts become values.</summary>
internal sealed class CommonOptions
{
    public readonly Argument<string> Engine = new("engine")
    {
        Description = "An engine that ships with the program, or the path of a definition file.",
    };

    public readonly Option<string?> Altitude = Text(
        "--altitude",
        "Pressure altitude, for instance \"35000 ft\" or \"1500 m\"."
    );
    public readonly Option<string?> Mach = Text("--mach", "Mach number, for instance 0.78.");
    public readonly Option<string?> TrueAirspeed = Text(
        "--tas",
        "True airspeed instead of Mach, for instance \"450 kt\"."
    );
    public readonly Option<string?> CalibratedAirspeed = Text(
        "--cas",
        "Calibrated airspeed instead of Mach, for instance \"140 kt\"."
    );
    public readonly Option<string?> Isa = Text("--isa", "Offset from the standard temperature, for instance \"15 K\".");
    public readonly Option<string?> Temperature = Text(
        "--temperature",
        "Outside air temperature instead of an offset, for instance \"38 °C\"."
    );
    public readonly Option<string?> Humidity = Text(
        "--humidity",
        "Relative humidity, for instance \"60 %\"; dry air without it."
    );

    public readonly Option<string[]> Bleed = new("--bleed")
    {
        Description =
            "Air taken by a port of the definition, for instance \"customer-bleed=3 %\" or \"customer-bleed=1.2 kg/s\"; may be repeated.",
    };

    public readonly Option<string[]> Open = new("--open")
    {
        Description =
            "Opens a port to what its definition says, for instance nacelle-anti-ice, which is normally shut; may be repeated.",
    };

    public readonly Option<string[]> Shut = new("--shut") { Description = "Shuts a port; may be repeated." };

    public readonly Option<string[]> Offtake = new("--offtake")
    {
        Description = "Power taken from a spool, for instance \"high=120 kW\"; may be repeated.",
    };

    public readonly Option<string[]> Worn = new("--worn")
    {
        Description =
            "Change of a component's efficiency or flow against new, for instance \"hpt efficiency=-2 %\" or \"hpc flow=-1.5 %\"; may be repeated.",
    };

    public readonly Option<string> UnitSystem = new Option<string>("--units")
    {
        Description = "si or us (ft, lbf, lb/h).",
        DefaultValueFactory = _ => "si",
    }.AcceptOnlyFromAmong("si", "us");

    public readonly Option<string?> Temperatures = new Option<string?>("--temperatures")
    {
        Description = "Scale in which temperatures are shown: K, C, F or R; K with si, F with us.",
    }.AcceptOnlyFromAmong(Cli.Display.TemperatureScales!);

    public readonly Option<bool> Json = new("--json") { Description = "One JSON document in SI; see JSON.md." };

    public readonly Option<string?> Csv = Text(
        "--csv",
        "Also writes the rows to this CSV file, in SI with the unit in every column's name."
    );

    public readonly Option<string?> Parquet = Text(
        "--parquet",
        "Also writes the rows to this Parquet file, in SI, with units and provenance in its metadata."
    );

    public void AddTo(Command command, bool temperature)
    {
        command.Add(Engine);
        foreach (var option in new Option[] { Altitude, Mach, TrueAirspeed, CalibratedAirspeed })
            command.Add(option);
        if (temperature)
        {
            command.Add(Isa);
            command.Add(Temperature);
        }

        foreach (
            var option in new Option[] { Humidity, Bleed, Open, Shut, Offtake, Worn, UnitSystem, Temperatures, Json }
        )
            command.Add(option);
    }

    public Display Display(ParseResult result)
    {
        var us = result.GetValue(UnitSystem) == "us";
        return new Display(us, result.GetValue(Temperatures) ?? (us ? "F" : "K"));
    }

    public double AltitudeOf(ParseResult result, string otherwise) =>
        Quantity(result, Altitude, Dimension.Length, otherwise);

    /// <summary>Mach number from whichever of the three speeds is given; zero without any.</summary>
    public double MachOf(ParseResult result, double altitude, double temperature)
    {
        var given = new[] { Mach, TrueAirspeed, CalibratedAirspeed }
            .Where(o => result.GetValue(o) is not null)
            .ToList();
        if (given.Count > 1)
            throw new UsageException($"{given[0].Name} and {given[1].Name} both give the speed; use one of them.");
        return Checked(() =>
        {
            if (result.GetValue(Mach) is { } mach)
                return Plain("--mach", mach);
            if (result.GetValue(TrueAirspeed) is not null)
                return Airspeed.MachFromTrue(Speed(result, TrueAirspeed), temperature);
            return result.GetValue(CalibratedAirspeed) is not null
                ? Airspeed.MachFromCalibrated(Speed(result, CalibratedAirspeed), StandardAtmosphere.Pressure(altitude))
                : 0.0;
        });
    }

    /// <summary>The rating asked for by name; the first of the definition without a name.</summary>
    /// <exception cref="DefinitionException">The definition has no rating.</exception>
    public static string RatingOf(ParseResult result, Option<string?> rating, LoadedDefinition loaded)
    {
        var first = FirstRating(loaded);
        return result.GetValue(rating) ?? first;
    }

    /// <summary>The first rating of a definition.</summary>
    /// <exception cref="DefinitionException">It has none.</exception>
    public static string FirstRating(LoadedDefinition loaded) =>
        loaded.Engine.Ratings.Count > 0
            ? loaded.Engine.Ratings[0].Name
            : throw new DefinitionException([
                new Problem(loaded.Source, 0, 0, "", "defines no [[rating]]; add one to work out."),
            ]);

    public FlightCondition Flight(ParseResult result)
    {
        if (result.GetValue(Altitude) is null)
            throw new UsageException("--altitude is missing, for instance --altitude \"0 m\"; or ask for --design.");
        if (result.GetValue(Isa) is not null && result.GetValue(Temperature) is not null)
            throw new UsageException("--isa and --temperature both give the temperature; use one of them.");
        var altitude = AltitudeOf(result, "0 m");
        return Checked(() =>
        {
            var temperature = result.GetValue(Temperature) is not null
                ? Quantity(result, Temperature, Dimension.Temperature, "")
                : StandardAtmosphere.Temperature(altitude)
                    + Quantity(result, Isa, Dimension.TemperatureDifference, "0 K");
            var flight = FlightCondition.AtTemperature(altitude, MachOf(result, altitude, temperature), temperature);
            return HumidityOf(result) is var humidity and > 0.0 ? flight.WithRelativeHumidity(humidity) : flight;
        });
    }

    public double HumidityOf(ParseResult result)
    {
        var humidity = result.GetValue(Humidity) is { } text ? Share("--humidity", text) : 0.0;
        return humidity is >= 0.0 and <= 1.0
            ? humidity
            : throw new UsageException(
                $"--humidity must lie between 0 and 100 %; '{result.GetValue(Humidity)}' was given."
            );
    }

    /// <summary>Applies the bleeds and offtakes of the command line to a list of inputs.</summary>
    public Action<double[]> Loads(ParseResult result, SizedEngine engine)
    {
        var changes = new List<(int Index, double Value)>();
        var opened = (result.GetValue(Open) ?? []).Select(name => Port("--open", name, engine)).ToList();
        var shut = (result.GetValue(Shut) ?? []).Select(name => Port("--shut", name, engine)).ToList();
        if (opened.Intersect(shut).Any())
            throw new UsageException(
                $"--open and --shut both name '{engine.Ports[opened.Intersect(shut).First()].Port.Name}'; use one of them."
            );
        foreach (var text in result.GetValue(Bleed) ?? [])
        {
            var (name, value) = Pair("--bleed", text, "customer-bleed=3 %");
            var port = Port("--bleed", name, engine);
            if (value.EndsWith('%') || double.TryParse(value, NumberStyles.Float, CultureInfo.InvariantCulture, out _))
            {
                var share = Share("--bleed " + name, value);
                if (share is not (>= 0.0 and < 1.0))
                    throw new UsageException($"--bleed {name}: '{value}' must lie between 0 and 100 % of the flow.");
                changes.Add((engine.Layout.PortFraction(port), share));
                changes.Add((engine.Layout.PortFlow(port), 0.0));
            }
            else
            {
                changes.Add((engine.Layout.PortFraction(port), 0.0));
                changes.Add((engine.Layout.PortFlow(port), Positive("--bleed " + name, value, Dimension.MassFlow)));
            }
        }

        foreach (var text in result.GetValue(Offtake) ?? [])
        {
            var (name, value) = Pair("--offtake", text, "high=120 kW");
            var spools = engine.Spools.Select(s => s.Name).ToList();
            var spool = spools.IndexOf(name);
            if (spool < 0)
                throw new UsageException(
                    $"--offtake: '{name}' is not a spool of this engine; it has {string.Join(", ", spools)}."
                );
            changes.Add((engine.Layout.PowerOfftake(spool), Positive("--offtake " + name, value, Dimension.Power)));
        }

        foreach (var part in WornParts(result))
            try
            {
                changes.Add((Wear.Input(engine, part.Name), 1.0 + part.Change));
            }
            catch (WearException error)
            {
                throw new UsageException("--worn: " + error.Message);
            }

        return inputs =>
        {
            foreach (var port in opened)
                engine.Layout.Open(engine.Definition, inputs, port);
            foreach (var port in shut)
                engine.Layout.Shut(inputs, port);
            foreach (var (index, value) in changes)
                inputs[index] = value;
        };
    }

    /// <summary>What the command line says is worn.</summary>
    public IReadOnlyList<WornPart> WornParts(ParseResult result)
    {
        var parts = new List<WornPart>();
        foreach (var text in result.GetValue(Worn) ?? [])
        {
            var (name, value) = Pair("--worn", text, "hpt efficiency=-2 %");
            var change = Share("--worn " + name, value);
            if (change is not (> -0.5 and < 0.5))
                throw new UsageException($"--worn {name}: '{value}' must lie between -50 and 50 %.");
            parts.Add(new WornPart(name, change));
        }

        return parts;
    }

    /// <summary>Whether any condition or load is given beside the engine.</summary>
    public bool GivesConditions(ParseResult result) =>
        new[] { Altitude, Mach, TrueAirspeed, CalibratedAirspeed, Isa, Temperature, Humidity }.Any(o =>
            result.GetValue(o) is not null
        ) || new[] { Bleed, Open, Shut, Offtake, Worn }.Any(o => result.GetValue(o) is { Length: > 0 });

    /// <summary>The loads of this command line as options of another one; empty without any.</summary>
    public string LoadsAsOptions(ParseResult result) =>
        string.Concat(
            new[] { Bleed, Open, Shut, Offtake, Worn }.SelectMany(o =>
                (result.GetValue(o) ?? []).Select(text => $" {o.Name} \"{text}\"")
            )
        ) + (result.GetValue(Humidity) is { } humidity ? $" {Humidity.Name} \"{humidity}\"" : "");

    private static int Port(string option, string name, SizedEngine engine)
    {
        var ports = engine.Ports.Select(p => p.Port.Name).ToList();
        return ports.IndexOf(name) is var port and >= 0
            ? port
            : throw new UsageException(
                $"{option}: '{name}' is not an air port of this engine; it has {string.Join(", ", ports)}."
            );
    }

    public static Option<string?> Text(string name, string description) => new(name) { Description = description };

    public static double Quantity(ParseResult result, Option<string?> option, Dimension dimension, string otherwise) =>
        Quantity(option.Name, result.GetValue(option) ?? otherwise, dimension);

    public static double Quantity(string name, string text, Dimension dimension) =>
        Units.TryRead(text, dimension, out var value, out var problem)
            ? value
            : throw new UsageException($"{name}: {problem}");

    public static double Share(string name, string text)
    {
        if (double.TryParse(text, NumberStyles.Float, CultureInfo.InvariantCulture, out var value))
            return value;
        return Units.TryRead(text, Dimension.Share, out value, out var problem)
            ? value
            : throw new UsageException($"{name}: {problem}");
    }

    public static double Plain(string name, string text) =>
        double.TryParse(text, NumberStyles.Float, CultureInfo.InvariantCulture, out var value) && double.IsFinite(value)
            ? value
            : throw new UsageException($"{name}: '{text}' is not a number, for instance 0.78.");

    // Range errors of the core name a parameter of the code at their end, which means nothing on a command line.
    public static TValue Checked<TValue>(Func<TValue> make)
    {
        try
        {
            return make();
        }
        catch (ArgumentOutOfRangeException error)
        {
            throw new UsageException(error.Message.Split(" (Parameter")[0]);
        }
    }

    private static double Speed(ParseResult result, Option<string?> option) =>
        Quantity(result, option, Dimension.Speed, "");

    private static double Positive(string name, string text, Dimension dimension) =>
        !Units.TryRead(text, dimension, out var value, out var problem) ? throw new UsageException($"{name}: {problem}")
        : value >= 0.0 ? value
        : throw new UsageException($"{name}: '{text}' must not be negative.");

    public static (string Name, string Value) Pair(string option, string text, string example)
    {
        var at = text.IndexOf('=');
        return at > 0 && at < text.Length - 1
            ? (text[..at].Trim(), text[(at + 1)..].Trim())
            : throw new UsageException($"{option}: '{text}' is not of the form {example}.");
    }
}
