using CycleSim.Engine;

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
        var nacelle = One("nacelle");
        var control = One("control");
        var ratings = Many("rating");

        var builtGas = GasBuilder.Build(gas, fuel);
        var point = DesignPointBuilder.Build(design, fan, gas);
        if (inlet.Has("pressure_recovery") && inlet.Has("ram_efficiency"))
            inlet.Report("ram_efficiency", "is given beside pressure_recovery; give one of the two.");
        Efficiency(fan, "");
        if (fan.Has("hub_isentropic_efficiency") && fan.Has("hub_polytropic_efficiency"))
            fan.Report("hub_polytropic_efficiency", "is given beside hub_isentropic_efficiency; give one of the two.");
        foreach (var table in turbines)
            Efficiency(table, "");
        var builtCompressors = compressors.Select(c => CompressorBuilder.Build(c, source, problems)).ToList();
        Names.Check(top, compressors, turbines, spools, air, ratings);
        Spools.Check(fan, compressors, turbines, spools);
        var ports = air.Select(a => AirPorts.Build(a, compressors, builtCompressors, turbines, fan.Present)).ToList();
        AirPorts.CheckFlows(compressors, air);
        var builtCoreNozzle = NozzleBuilder.Build(coreNozzle, source, problems);
        var builtBypassNozzle = NozzleBuilder.Build(bypassNozzle, source, problems);
        if (nacelle.Number("scrubbing_loss", 0.0) > 0.0 && (!fan.Present || mixer.Present))
            nacelle.Report("scrubbing_loss", "needs a bypass nozzle; this engine has none.");
        if (!fan.Present)
            foreach (var useless in new[] { bypassNozzle, bypassDuct, mixer }.Where(t => t.Present))
                useless.Report("", "has no fan to serve; drop this table or add [fan].");
        if (mixer.Present && bypassNozzle.Present)
            bypassNozzle.Report(
                "",
                "is not needed beside [mixer]: the mixed stream leaves by the core nozzle. Drop one of the two."
            );
        if (control.Number("idle_speed", 0.3) >= control.Number("full_speed", 1.05))
            control.Report("idle_speed", "must lie below full_speed.");
        var builtRatings = ratings.Select(r => RatingBuilder.Build(r, spools.Count, source, problems)).ToList();
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
            Compressors = [.. builtCompressors.Select(c => c!)],
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
                    ReynoldsExponent = t.Number("reynolds_exponent", 0.0),
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
            CoreNozzle = builtCoreNozzle,
            BypassNozzle = builtBypassNozzle,
            Nacelle = new NacelleDefinition
            {
                DragArea = nacelle.Number("drag_area", 0.0),
                ScrubbingLoss = nacelle.Number("scrubbing_loss", 0.0),
            },
            BypassDuctLoss = bypassDuct.Number("pressure_loss", 0.0),
            CoreDuctLoss = coreDuct.Number("pressure_loss", 0.0),
            Control = new ControlDefinition
            {
                IdleSpeed = control.Number("idle_speed", 0.30),
                FullSpeed = control.Number("full_speed", 1.05),
                IdleCoreSpeed = control.Number("idle_core_speed", 0.0),
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

    /// <summary>Isentropic or polytropic efficiency of a table, whichever it gives; reports unless it gives one.</summary>
    public static DesignEfficiency Efficiency(TableReader table, string prefix)
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
            GearEfficiency = fan.Number("gear_efficiency", 1.0),
            ReynoldsExponent = fan.Number("reynolds_exponent", 0.0),
        };
    }
}
