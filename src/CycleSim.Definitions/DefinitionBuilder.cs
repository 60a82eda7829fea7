using CycleSim.Air;
using CycleSim.Engine;
using CycleSim.Gas;

namespace CycleSim.Definitions;

/// <summary>Puts checked tables together into an engine, and checks what no table can see alone.</summary>
internal sealed class DefinitionBuilder(List<TomlTableNode> nodes, string source, List<Problem> problems)
{
    public EngineDefinition? Build()
    {
        RefuseUnknownTables();
        var top = One("");
        var gas = One("gas");
        var fuel = One("fuel");
        var design = One("design");
        var inlet = One("inlet");
        var fan = One("fan");
        var compressors = Many("compressor");
        var combustor = One("combustor");
        var turbines = Many("turbine");
        var spools = Many("spool");
        var air = Many("air");
        var coreNozzle = One("core_nozzle");
        var bypassNozzle = One("bypass_nozzle");
        var bypassDuct = One("bypass_duct");
        var coreDuct = One("core_duct");
        var mixer = One("mixer");
        var control = One("control");
        var ratings = Many("rating");

        var builtGas = GasBuilder.Build(gas, fuel);
        var point = DesignPoint(design, fan);
        if (inlet.Has("pressure_recovery") && inlet.Has("ram_efficiency"))
            inlet.Report("ram_efficiency", "is given beside pressure_recovery; give one of the two.");
        Efficiency(fan, "");
        if (fan.Has("hub_isentropic_efficiency") && fan.Has("hub_polytropic_efficiency"))
            fan.Report("hub_polytropic_efficiency", "is given beside hub_isentropic_efficiency; give one of the two.");
        foreach (var table in compressors.Concat(turbines))
            Efficiency(table, "");
        CheckNames(compressors, turbines, spools, air, ratings);
        CheckSpools(fan, compressors, turbines, spools);
        var ports = air.Select(a => Port(a, compressors, turbines, fan.Present)).ToList();
        CheckFlows(compressors, air);
        if (!fan.Present)
            foreach (var useless in new[] { bypassNozzle, bypassDuct, mixer }.Where(t => t.Present))
                useless.Report("", "has no fan to serve; drop this table or add [fan].");
        if (mixer.Present && bypassNozzle.Present)
            bypassNozzle.Report("", "is not needed beside [mixer]: the mixed stream leaves by the core nozzle. Drop one of the two.");
        if (control.Number("idle_speed", 0.3) >= control.Number("full_speed", 1.05))
            control.Report("idle_speed", "must lie below full_speed.");
        var builtRatings = ratings.Select(r => Rating(r, spools.Count)).ToList();
        if (problems.Count > 0)
            return null;

        return new EngineDefinition
        {
            Name = top.Text("name"),
            Description = top.Text("description"),
            Gas = builtGas!,
            Design = point!,
            Inlet = new InletDefinition
            {
                PressureRecovery = inlet.Number("pressure_recovery", 1.0),
                RamEfficiency = inlet.Has("ram_efficiency") ? inlet.Number("ram_efficiency") : null,
            },
            Fan = fan.Present ? Fan(fan) : null,
            Compressors =
            [
                .. compressors.Select(c => new CompressorDefinition
                {
                    Name = c.Text("name"),
                    Spool = c.Text("spool"),
                    PressureRatio = c.Number("pressure_ratio"),
                    Efficiency = Efficiency(c, ""),
                    InletDuctLoss = c.Number("inlet_duct_loss", 0.0),
                }),
            ],
            Combustor = new CombustorDefinition
            {
                PressureLoss = combustor.Number("pressure_loss", 0.0),
                Efficiency = combustor.Number("efficiency", 1.0),
            },
            Turbines =
            [
                .. turbines.Select(t => new TurbineDefinition
                {
                    Name = t.Text("name"),
                    Spool = t.Text("spool"),
                    Efficiency = Efficiency(t, ""),
                    InletDuctLoss = t.Number("inlet_duct_loss", 0.0),
                    Stages = (int)t.Number("stages", 1.0),
                    ChokingRatio = t.Number("choking_ratio", 0.0),
                    BestVelocityRatio = t.Number("best_velocity_ratio", 1.08),
                }),
            ],
            Spools =
            [
                .. spools.Select(s => new SpoolDefinition
                {
                    Name = s.Text("name"),
                    Speed = s.Number("speed", 0.0),
                    MechanicalEfficiency = s.Number("mechanical_efficiency", 1.0),
                    PowerOfftake = s.Number("power_offtake", 0.0),
                }),
            ],
            AirPorts = ports,
            Mixer = mixer.Present
                ? new MixerDefinition
                {
                    CoreMach = mixer.Number("core_mach"),
                    Effectiveness = mixer.Number("effectiveness", 1.0),
                    PressureLoss = mixer.Number("pressure_loss", 0.0),
                }
                : null,
            CoreNozzle = Nozzle(coreNozzle),
            BypassNozzle = Nozzle(bypassNozzle),
            BypassDuctLoss = bypassDuct.Number("pressure_loss", 0.0),
            CoreDuctLoss = coreDuct.Number("pressure_loss", 0.0),
            Control = new ControlDefinition
            {
                IdleSpeed = control.Number("idle_speed", 0.30),
                FullSpeed = control.Number("full_speed", 1.05),
            },
            Ratings = builtRatings,
        };
    }

    private TableReader One(string name)
    {
        var spec = Schema.Find(name)!;
        var found = nodes.Where(n => n.Name == name).ToList();
        foreach (var second in found.Skip(1))
            problems.Add(
                new Problem(source, second.Line, 1, name, $"is given twice; the first is in line {found[0].Line}.")
            );
        if (spec.Required && found.Count == 0)
            problems.Add(new Problem(source, 0, 0, "", $"the table {spec.Header} is missing. {spec.Meaning}"));
        return new TableReader(spec, found.FirstOrDefault(), source, problems);
    }

    private List<TableReader> Many(string name)
    {
        var spec = Schema.Find(name)!;
        var found = nodes.Where(n => n.Name == name).ToList();
        if (spec.Required && found.Count == 0)
            problems.Add(new Problem(source, 0, 0, "", $"there is no {spec.Header}. {spec.Meaning}"));
        return [.. found.Select(n => new TableReader(spec, n, source, problems))];
    }

    private void RefuseUnknownTables()
    {
        foreach (var node in nodes.Concat(nodes.SelectMany(n => n.Children)))
            if (Schema.Find(node.Name) is null)
                problems.Add(
                    new Problem(
                        source,
                        node.Line,
                        1,
                        node.Name,
                        "is not a table of a definition file."
                            + Spelling.Suggest(node.Name, Schema.Tables.Select(t => t.Name))
                            + $" Its tables are {string.Join(", ", Schema.Tables.Skip(1).Select(t => t.Header))}."
                    )
                );
    }

    private static DesignPoint? DesignPoint(TableReader design, TableReader fan)
    {
        if (!design.Present)
            return null;
        var place = design.ExactlyOne("altitude", "pressure");
        if (design.Has("temperature") && design.Has("isa_offset"))
            design.Report("temperature", "is given beside isa_offset; give one of the two.");
        design.ExactlyOne("mass_flow", "net_thrust");
        design.ExactlyOne("T4", "T41");
        var bypass = design.Number("bypass_ratio", 0.0);
        if (bypass > 0.0 && !fan.Present)
            design.Report("bypass_ratio", "is above zero, but there is no [fan] to feed a bypass duct.");
        if (!(bypass > 0.0) && fan.Present)
            design.Report("bypass_ratio", "must be above zero for an engine with a [fan], for instance bypass_ratio = 5.8.");
        if (!place || double.IsNaN(design.Number("mach")))
            return null;
        try
        {
            return new DesignPoint
            {
                Flight = Flight(design),
                MassFlow = design.Number("mass_flow", 0.0),
                NetThrust = design.Number("net_thrust", 0.0),
                BypassRatio = bypass,
                CombustorExitTemperature = design.Number("T4", 0.0),
                RotorInletTemperature = design.Number("T41", 0.0),
            };
        }
        catch (ArgumentOutOfRangeException error)
        {
            design.Report("", error.Message.Split(" (Parameter")[0]);
            return null;
        }
    }

    private static FlightCondition Flight(TableReader design)
    {
        var mach = design.Number("mach");
        var pressure = design.Has("pressure")
            ? design.Number("pressure")
            : StandardAtmosphere.Pressure(design.Number("altitude"));
        var altitude = design.Has("altitude") ? design.Number("altitude") : StandardAtmosphere.PressureAltitude(pressure);
        var temperature = design.Has("temperature")
            ? design.Number("temperature")
            : StandardAtmosphere.Temperature(altitude) + design.Number("isa_offset", 0.0);
        var flight = design.Has("pressure")
            ? FlightCondition.AtPressure(pressure, mach, temperature)
            : FlightCondition.AtTemperature(altitude, mach, temperature);
        return flight.WithRelativeHumidity(design.Number("relative_humidity", 0.0));
    }

    private static DesignEfficiency Efficiency(TableReader table, string prefix)
    {
        var isentropic = prefix + "isentropic_efficiency";
        var polytropic = prefix + "polytropic_efficiency";
        if (table.Present)
            table.ExactlyOne(isentropic, polytropic);
        return table.Has(polytropic)
            ? new DesignEfficiency(table.Number(polytropic), true)
            : new DesignEfficiency(table.Number(isentropic));
    }

    private static FanDefinition Fan(TableReader fan)
    {
        var efficiency = Efficiency(fan, "");
        var hub =
            fan.Has("hub_polytropic_efficiency") ? new DesignEfficiency(fan.Number("hub_polytropic_efficiency"), true)
            : fan.Has("hub_isentropic_efficiency") ? new DesignEfficiency(fan.Number("hub_isentropic_efficiency"))
            : efficiency;
        return new FanDefinition
        {
            Spool = fan.Text("spool"),
            PressureRatio = fan.Number("pressure_ratio"),
            Efficiency = efficiency,
            HubPressureRatio = fan.Number("hub_pressure_ratio", fan.Number("pressure_ratio")),
            HubEfficiency = hub,
            GearRatio = fan.Number("gear_ratio", 1.0),
        };
    }

    private static void CheckNames(params IEnumerable<TableReader>[] lists)
    {
        foreach (var list in lists)
        {
            var seen = new Dictionary<string, int>(StringComparer.OrdinalIgnoreCase);
            foreach (var table in list)
            {
                var name = table.Text("name");
                if (name.Length > 0 && !seen.TryAdd(name, table.Node.Line))
                    table.Report("name", $"'{name}' is already the name of the one in line {seen[name]}.");
            }
        }
    }

    private static void CheckSpools(
        TableReader fan,
        List<TableReader> compressors,
        List<TableReader> turbines,
        List<TableReader> spools
    )
    {
        var names = spools.Select(s => s.Text("name")).ToList();
        var driven = compressors.Concat(fan.Present ? [fan] : []).ToList();
        foreach (var table in driven.Concat(turbines))
        {
            var spool = table.Text("spool");
            if (spool.Length > 0 && !names.Contains(spool))
                table.Report(
                    "spool",
                    $"'{spool}' is not the name of a [[spool]]; there are {string.Join(", ", names)}.{Spelling.Suggest(spool, names)}"
                );
        }

        foreach (var spool in spools.Where(s => s.Text("name").Length > 0))
        {
            var name = spool.Text("name");
            var count = turbines.Count(t => t.Text("spool") == name);
            if (count == 0)
                spool.Report("name", $"spool '{name}' has no turbine to turn it; give a [[turbine]] spool = \"{name}\".");
            if (count > 1)
                spool.Report("name", $"spool '{name}' has {count} turbines; give it one with the stages of all.");
            if (driven.All(d => d.Text("spool") != name))
                spool.Report("name", $"spool '{name}' turns neither fan nor compressor.");
        }

        if (spools.Count > 3)
            spools[3].Report("", "is a fourth spool; an engine has at most three.");
        if (compressors.Count > 3)
            compressors[3].Report("", "is a fourth compressor of the core stream; there are at most three.");
    }

    private static AirPort Port(
        TableReader air,
        List<TableReader> compressors,
        List<TableReader> turbines,
        bool hasBypass
    )
    {
        var from = air.Text("from");
        var compressorNames = compressors.Select(c => c.Text("name")).ToList();
        if (from.Length > 0 && !compressorNames.Contains(from))
            air.Report(
                "from",
                $"'{from}' is not the name of a [[compressor]]; there are {string.Join(", ", compressorNames)}.{Spelling.Suggest(from, compressorNames)}"
            );
        var (destination, turbine) = Destination(air, turbines, hasBypass);
        if (air.Has("open_below") != air.Has("shut_above"))
            air.Report("", "needs open_below and shut_above together, or neither.");
        else if (air.Number("open_below", 0.0) >= air.Number("shut_above", 1.0))
            air.Report("open_below", "must lie below shut_above.");
        return new AirPort
        {
            Name = air.Text("name"),
            From = from,
            To = destination,
            Turbine = turbine,
            WorkFraction = air.Number("work_fraction", 1.0),
            Fraction = air.Number("fraction", 0.0),
            Flow = air.Number("flow", 0.0),
            OpenBelow = air.Number("open_below", 0.0),
            ShutAbove = air.Number("shut_above", 0.0),
        };
    }

    private static (AirDestination To, string? Turbine) Destination(
        TableReader air,
        List<TableReader> turbines,
        bool hasBypass
    )
    {
        var to = air.Text("to");
        if (to is "" or "overboard")
            return (AirDestination.Overboard, null);
        if (to == "bypass duct")
        {
            if (!hasBypass)
                air.Report("to", "'bypass duct' does not exist in an engine without [fan]; say \"overboard\".");
            return (AirDestination.BypassDuct, null);
        }

        var names = turbines.Select(t => t.Text("name")).ToList();
        foreach (var name in names.Where(n => n.Length > 0))
        {
            if (to == name + " vane")
                return (AirDestination.Vane, name);
            if (to == name + " rotor")
                return (AirDestination.Rotor, name);
        }

        var possible = new[] { "overboard", "bypass duct" }
            .Concat(names.SelectMany(n => new[] { n + " vane", n + " rotor" }))
            .ToList();
        air.Report(
            "to",
            $"'{to}' is no place for air to go; there are {string.Join(", ", possible.Select(p => $"\"{p}\""))}.{Spelling.Suggest(to, possible)}"
        );
        return (AirDestination.Overboard, null);
    }

    private static void CheckFlows(List<TableReader> compressors, List<TableReader> air)
    {
        foreach (var compressor in compressors)
        {
            var taken = air.Where(a => a.Text("from") == compressor.Text("name")).ToList();
            var sum = taken.Sum(a => a.Number("fraction", 0.0));
            if (sum >= 1.0)
                taken[^1].Report(
                    "fraction",
                    $"brings what is taken from '{compressor.Text("name")}' to {sum * 100.0:F0} % of its flow; less than 100 % is there."
                );
        }
    }

    private RatingDefinition Rating(TableReader rating, int spools)
    {
        var limits = new List<Limit>();
        foreach (var node in rating.Node.Children)
        {
            var limit = new TableReader(Schema.Find("rating.limit")!, node, source, problems);
            var name = limit.Text("quantity");
            if (name.Length == 0)
                continue;
            var quantity = name == "EGT" ? Quantity.T45 : Enum.Parse<Quantity>(name, ignoreCase: true);
            if (quantity == Quantity.N2 && spools < 2 || quantity == Quantity.N3 && spools < 3)
                limit.Report("quantity", $"{name} needs a spool that this engine has not; it has {spools}.");
            var dimension = quantity switch
            {
                Quantity.P3 => Dimension.Pressure,
                Quantity.N1 or Quantity.N2 or Quantity.N3 => Dimension.Share,
                Quantity.Epr => Dimension.Number,
                _ => Dimension.Temperature,
            };
            if (limit.Quantity("value", dimension) is not { } value)
                continue;
            if (value > 0.0)
                limits.Add(new Limit(quantity, value));
            else
                limit.Report("value", "must be above zero.");
        }

        return new RatingDefinition
        {
            Name = rating.Text("name"),
            Thrust = rating.Number("thrust", 0.0),
            FlatTo = rating.Number("flat_to"),
            Limits = limits,
        };
    }

    private static NozzleDefinition Nozzle(TableReader table) =>
        new()
        {
            Efficiency = table.Number("efficiency", 1.0),
            VelocityCoefficient = table.Number("velocity_coefficient", 1.0),
            DischargeCoefficient = table.Number("discharge_coefficient", 1.0),
        };
}
