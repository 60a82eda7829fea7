using System.Reflection;
using System.Text.Encodings.Web;
using System.Text.Json;
using System.Text.Json.Nodes;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>The JSON documents, in SI with the unit in every name; JSON.md describes them.</summary>
internal static class Documents
{
    public static readonly string Version =
        typeof(EngineModel).Assembly.GetCustomAttribute<AssemblyInformationalVersionAttribute>()?.InformationalVersion
        ?? "unknown";

    private static readonly JsonSerializerOptions Indented = new()
    {
        WriteIndented = true,
        Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping,
    };

    public static void Print(JsonObject document) => Console.WriteLine(document.ToJsonString(Indented));

    public static JsonObject Point(OperatingPoint p, LoadedDefinition loaded)
    {
        var document = Provenance(loaded);
        Fill(document, p);
        return document;
    }

    /// <summary>A point inside a document that has its provenance already.</summary>
    public static JsonObject Point(OperatingPoint p)
    {
        var entry = new JsonObject();
        Fill(entry, p);
        return entry;
    }

    public static JsonObject Point(OperatingPoint p, LoadedDefinition loaded, IReadOnlyList<LimitMargin> margins)
    {
        var document = Point(p, loaded);
        document["limit_margins"] = Array(
            margins,
            m =>
            {
                var entry = LimitOf(m.Limit);
                entry["rating"] = m.Rating;
                entry["at_point"] = Number(m.Value);
                entry["left"] = Number(m.Left);
                return entry;
            }
        );
        return document;
    }

    public static JsonObject Of(FlatRatingResult s, LoadedDefinition loaded)
    {
        var document = Provenance(loaded);
        document["rating"] = s.Rating;
        document["pressure_altitude_m"] = Number(s.PressureAltitude);
        document["mach"] = Number(s.Mach);
        document["flat_thrust_N"] = Number(s.FlatThrust);
        document["break_temperature_K"] = Number(s.BreakTemperature);
        document["break_isa_offset_K"] = Number(s.BreakIsaOffset);
        document["break_limit"] = LimitOf(s.BreakLimit);
        document["lapse_fraction_per_K"] = Number(s.LapsePerKelvin);
        document["limits"] = Array(s.Limits, LimitOf);
        document["iterations"] = s.BreakIterations;
        document["residual"] = Number(s.BreakResidual);
        document["rows"] = Array(
            s.Rows,
            row =>
            {
                var entry = new JsonObject
                {
                    ["outside_temperature_K"] = Number(row.OutsideTemperature),
                    ["isa_offset_K"] = Number(row.IsaOffset),
                    ["solved"] = row.Point is not null,
                };
                if (row.Point is { } point)
                {
                    entry["set_by"] = row.Governing;
                    Fill(entry, point);
                }
                else
                    entry["reason"] = row.Reason;
                return entry;
            }
        );
        return document;
    }

    public static JsonObject Provenance(LoadedDefinition loaded) =>
        new()
        {
            ["caution"] = Layout.Caution,
            ["cyclesim_version"] = Version,
            ["definition"] = loaded.Source,
            ["definition_sha256"] = loaded.Hash,
            ["engine"] = loaded.Engine.Name,
        };

    private static void Fill(JsonObject o, OperatingPoint p)
    {
        o["flight"] = new JsonObject
        {
            ["pressure_altitude_m"] = Number(p.Flight.PressureAltitude),
            ["static_pressure_Pa"] = Number(p.Flight.StaticPressure),
            ["static_temperature_K"] = Number(p.Flight.StaticTemperature),
            ["isa_offset_K"] = Number(p.Flight.IsaOffset),
            ["mach"] = Number(p.Flight.Mach),
            ["true_airspeed_m_per_s"] = Number(p.Airspeed),
            ["water_air_ratio"] = Number(p.Flight.WaterAirRatio),
        };
        o["setting"] = LimitOf(p.Setting);
        o["net_thrust_N"] = Number(p.NetThrust);
        o["installed_thrust_N"] = Number(p.InstalledThrust);
        o["gross_thrust_N"] = Number(p.GrossThrust);
        o["ram_drag_N"] = Number(p.RamDrag);
        o["fuel_flow_kg_per_s"] = Number(p.FuelFlow);
        o["sfc_kg_per_N_s"] = Number(p.Sfc);
        o["fuel_air_ratio"] = Number(p.FuelAirRatio);
        o["bypass_ratio"] = Number(p.BypassRatio);
        o["overall_pressure_ratio"] = Number(p.OverallPressureRatio);
        o["engine_pressure_ratio"] = Number(p.EnginePressureRatio);
        o["T4_K"] = Number(p.T4);
        o["T41_K"] = Number(p.T41);
        o["T45_K"] = Number(p.T45);
        o["dissociation_drop_of_T4_K"] = Number(p.DissociationDrop);
        o["lever_position"] = Number(p.LeverPosition);
        o["thermal_efficiency"] = Number(p.ThermalEfficiency);
        o["propulsive_efficiency"] = Number(p.PropulsiveEfficiency);
        o["overall_efficiency"] = Number(p.OverallEfficiency);
        o["stations"] = Array(
            p.Stations,
            s => new JsonObject
            {
                ["station"] = s.Number,
                ["plane"] = s.Plane,
                ["mass_flow_kg_per_s"] = Number(s.MassFlow),
                ["total_temperature_K"] = Number(s.TotalTemperature),
                ["total_pressure_Pa"] = Number(s.TotalPressure),
                ["fuel_air_ratio"] = Number(s.FuelAirRatio),
                ["total_enthalpy_J_per_kg"] = Number(s.Enthalpy),
                ["entropy_J_per_kg_K"] = Number(s.Entropy),
            }
        );
        o["compressors"] = Array(
            p.Compressors,
            c => new JsonObject
            {
                ["name"] = c.Name,
                ["pressure_ratio"] = Number(c.PressureRatio),
                ["isentropic_efficiency"] = Number(c.IsentropicEfficiency),
                ["polytropic_efficiency"] = Number(c.PolytropicEfficiency),
                ["corrected_flow_kg_per_s"] = Number(c.CorrectedFlow),
                ["relative_corrected_speed"] = Number(c.RelativeCorrectedSpeed),
                ["power_W"] = Number(c.Power),
                ["surge_margin_constant_flow"] = Number(c.SurgeMarginConstantFlow),
                ["surge_margin_constant_speed"] = Number(c.SurgeMarginConstantSpeed),
            }
        );
        o["turbines"] = Array(
            p.Turbines,
            t => new JsonObject
            {
                ["name"] = t.Name,
                ["expansion_ratio"] = Number(t.ExpansionRatio),
                ["isentropic_efficiency"] = Number(t.IsentropicEfficiency),
                ["specific_work_J_per_kg"] = Number(t.SpecificWork),
                ["power_W"] = Number(t.Power),
                ["choked"] = t.Choked,
            }
        );
        o["spools"] = Array(
            p.Spools,
            s => new JsonObject
            {
                ["name"] = s.Name,
                ["relative_speed"] = Number(s.RelativeSpeed),
                ["speed_rpm"] = Number(s.Rpm),
                ["turbine_power_W"] = Number(s.TurbinePower),
                ["power_offtake_W"] = Number(s.Offtake),
            }
        );
        o["fan_speed_rpm"] = Number(p.FanRpm);
        o["nozzles"] = Array(
            p.Nozzles,
            n => new JsonObject
            {
                ["name"] = n.Name,
                ["pressure_ratio"] = Number(n.PressureRatio),
                ["choked"] = n.Choked,
                ["exit_speed_m_per_s"] = Number(n.ExitSpeed),
                ["exit_temperature_K"] = Number(n.ExitTemperature),
                ["exit_pressure_Pa"] = Number(n.ExitPressure),
                ["effective_area_m2"] = Number(n.EffectiveArea),
                ["geometric_area_m2"] = Number(n.GeometricArea),
                ["gross_thrust_N"] = Number(n.GrossThrust),
            }
        );
        o["air"] = Array(
            p.Air,
            a => new JsonObject
            {
                ["name"] = a.Name,
                ["from"] = a.From,
                ["to"] = a.To,
                ["mass_flow_kg_per_s"] = Number(a.MassFlow),
                ["total_temperature_K"] = Number(a.TotalTemperature),
                ["total_pressure_Pa"] = Number(a.TotalPressure),
            }
        );
        o["audit"] = new JsonObject
        {
            ["largest_imbalance"] = Number(p.Audit.LargestImbalance),
            ["entropy_closure"] = Number(p.Audit.EntropyClosure),
            ["components"] = Array(
                p.Audit.Components,
                line => new JsonObject
                {
                    ["component"] = line.Component,
                    ["mass_imbalance"] = Number(line.MassImbalance),
                    ["energy_imbalance"] = Number(line.EnergyImbalance),
                    ["entropy_production_W_per_K"] = Number(line.EntropyProduction),
                }
            ),
        };
        o["iterations"] = p.Outcome.Iterations;
        o["residual"] = Number(p.Outcome.Residual);
    }

    public static JsonObject LimitOf(Limit limit) =>
        new()
        {
            ["quantity"] = limit.Quantity.ToString(),
            ["value"] = Number(limit.Value),
            ["unit"] = limit.Quantity switch
            {
                Quantity.NetThrust or Quantity.InstalledThrust => "N",
                Quantity.FuelFlow => "kg/s",
                Quantity.P3 => "Pa",
                Quantity.T3 or Quantity.T4 or Quantity.T41 or Quantity.T45 or Quantity.T5 => "K",
                _ => "1",
            },
        };

    public static JsonArray Array<T>(IEnumerable<T> items, Func<T, JsonObject> convert) =>
        new([.. items.Select(convert)]);

    // JSON has no word for what is not a number.
    public static JsonNode? Number(double value) => double.IsFinite(value) ? JsonValue.Create(value) : null;
}
