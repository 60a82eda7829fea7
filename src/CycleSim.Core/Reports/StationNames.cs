using CycleSim.Components;
using CycleSim.Engine;
using CycleSim.Scalars;

namespace CycleSim.Reports;

/// <summary>Which SAE AS755 number each plane of an engine bears.</summary>
public static class StationNames
{
    /// <summary>All stations of a pass in the order of the flow, the bypass stream after the core's.</summary>
    public static List<(string Number, string Plane, FlowState<T> State)> List<T>(SizedEngine engine, FlowPath<T> path)
        where T : struct, IScalar<T>
    {
        var list = new List<(string, string, FlowState<T>)>
        {
            ("0", "free stream", path.FreeStream),
            ("2", engine.HasFan ? "fan face" : "compressor face", path.FanFace),
        };
        if (engine.HasFan)
            list.Add(("21", "fan exit, core", path.FanHub));

        var compressors = engine.Compressors;
        for (var k = 0; k < compressors.Length; k++)
        {
            var fromEnd = compressors.Length - 1 - k;
            if (engine.HasFan || k > 0)
                list.Add((InletNumber(engine, fromEnd), $"{compressors[k].Name} inlet", path.CompressorInlet[k]));
            list.Add(
                (
                    fromEnd == 0 ? "3"
                    : fromEnd == 1 ? "24"
                    : "23",
                    $"{compressors[k].Name} exit",
                    path.CompressorDelivery[k]
                )
            );
        }

        list.Add(("4", "combustor exit", path.CombustorExit));
        for (var k = 0; k < engine.Turbines.Length; k++)
        {
            var name = engine.Turbines[k].Definition.Name;
            var last = k == engine.Turbines.Length - 1;
            list.Add(
                (
                    k == 0 ? "41"
                    : k == 1 && !last ? "46"
                    : "48",
                    $"{name} rotor inlet",
                    path.TurbineInlet[k]
                )
            );
            list.Add(
                (
                    last ? "5"
                    : k == 0 ? "45"
                    : "47",
                    $"{name} exit",
                    path.TurbineOutlet[k]
                )
            );
        }

        var mixes = engine.Definition.Mixer is not null;
        list.Add(mixes ? ("6", "mixer inlet, core", path.CoreExit) : ("7", "core nozzle inlet", path.CoreExit));
        if (engine.HasFan)
        {
            list.Add(("13", "fan exit, bypass", path.FanTip));
            list.Add(
                mixes ? ("16", "mixer inlet, bypass", path.BypassExit) : ("17", "bypass nozzle inlet", path.BypassExit)
            );
        }

        if (mixes)
            list.Add(("7", "nozzle inlet, mixed", path.Mixed));

        return list;
    }

    private static string InletNumber(SizedEngine engine, int fromEnd) =>
        fromEnd switch
        {
            0 => engine.Spools.Length > 2 ? "26" : "25",
            _ => "22",
        };
}
