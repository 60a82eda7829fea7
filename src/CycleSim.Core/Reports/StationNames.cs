using CycleSim.Components;
using CycleSim.Engine;
using CycleSim.Scalars;

namespace CycleSim.Reports;

/// <summary>Which SAE AS755 number each plane of an engine bears.</summary>
public static class StationNames
{
    /// <summary>All stations of a pass in the order of the flow, the bypass stream after the core's.</summary>
    public static List<(string Number, string Plane, FlowState<T> State)> List<T>(SizedEngine engine, FlowPath<T> path)
        where T : struct, IScalar<T> =>
        [.. Planes<T>(engine).Select(plane => (plane.Number, plane.Name, plane.State(path)))];

    /// <summary>The same stations as readers of a pass, for whoever reads many passes.</summary>
    public static List<StationPlane<T>> Planes<T>(SizedEngine engine)
        where T : struct, IScalar<T>
    {
        var list = new List<StationPlane<T>>
        {
            new("0", "free stream", p => p.FreeStream),
            new("2", engine.HasFan ? "fan face" : "compressor face", p => p.FanFace),
        };
        if (engine.HasFan)
            list.Add(new("21", "fan exit, core", p => p.FanHub));

        var compressors = engine.Compressors;
        for (var i = 0; i < compressors.Length; i++)
        {
            var k = i;
            var fromEnd = compressors.Length - 1 - k;
            if (engine.HasFan || k > 0)
                list.Add(new(InletNumber(engine, fromEnd), $"{compressors[k].Name} inlet", p => p.CompressorInlet[k]));
            list.Add(
                new(
                    fromEnd == 0 ? "3"
                        : fromEnd == 1 ? "24"
                        : "23",
                    $"{compressors[k].Name} exit",
                    p => p.CompressorDelivery[k]
                )
            );
        }

        list.Add(new("4", "combustor exit", p => p.CombustorExit));
        for (var i = 0; i < engine.Turbines.Length; i++)
        {
            var k = i;
            var name = engine.Turbines[k].Definition.Name;
            var last = k == engine.Turbines.Length - 1;
            list.Add(
                new(
                    k == 0 ? "41"
                        : k == 1 && !last ? "46"
                        : "48",
                    $"{name} rotor inlet",
                    p => p.TurbineInlet[k]
                )
            );
            list.Add(
                new(
                    last ? "5"
                        : k == 0 ? "45"
                        : "47",
                    $"{name} exit",
                    p => p.TurbineOutlet[k]
                )
            );
        }

        var mixes = engine.Definition.Mixer is not null;
        list.Add(
            mixes ? new("6", "mixer inlet, core", p => p.CoreExit) : new("7", "core nozzle inlet", p => p.CoreExit)
        );
        if (engine.HasFan)
        {
            list.Add(new("13", "fan exit, bypass", p => p.FanTip));
            list.Add(
                mixes
                    ? new("16", "mixer inlet, bypass", p => p.BypassExit)
                    : new("17", "bypass nozzle inlet", p => p.BypassExit)
            );
        }

        if (mixes)
            list.Add(new("7", "nozzle inlet, mixed", p => p.Mixed));

        return list;
    }

    private static string InletNumber(SizedEngine engine, int fromEnd) =>
        fromEnd switch
        {
            0 => engine.Spools.Length > 2 ? "26" : "25",
            _ => "22",
        };
}

/// <summary>A plane of an engine with its SAE AS755 number, and how its state is read off a pass.</summary>
public sealed record StationPlane<T>(string Number, string Name, Func<FlowPath<T>, FlowState<T>> State)
    where T : struct, IScalar<T>;
