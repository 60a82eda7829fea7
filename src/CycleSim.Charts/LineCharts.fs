namespace CycleSim.Charts

open System
open System.Collections.Generic
open Plotly.NET

/// A named line: as many numbers across as up, in the units of its axes; NaN leaves a gap.
type NamedCurve = {
    Name: string
    X: IReadOnlyList<float>
    Y: IReadOnlyList<float>
}

/// What a study of one's own has found, in the look of the other charts.
[<AbstractClass; Sealed>]
type LineCharts private () =

    /// <summary>Lines over one axis.</summary>
    /// <param name="xAxis">name of the axis with its unit, for instance "Density ratio"</param>
    /// <param name="yAxis">name of the axis with its unit, for instance "Net thrust, kN"</param>
    /// <param name="curves">at least one</param>
    /// <exception cref="T:System.ArgumentException">No line, or one with unequal numbers across and up.</exception>
    static member Of(title: string, xAxis: string, yAxis: string, curves: IReadOnlyList<NamedCurve>) : GenericChart =
        if curves.Count = 0 then
            raise (ArgumentException "a chart of no lines")

        let line index (curve: NamedCurve) =
            if curve.X.Count <> curve.Y.Count then
                raise (ArgumentException $"line '{curve.Name}' has {curve.X.Count} numbers across, {curve.Y.Count} up")

            let note x y =
                $"{curve.Name}: {ChartUnits.Text(x, 3)}, {ChartUnits.Text(y, 3)}"

            ChartStyle.series curve.Name curve.X curve.Y (Seq.map2 note curve.X curve.Y) index [
                if curve.X.Count < 30 then
                    "mode", box "lines+markers"
            ]

        ChartStyle.chart title (curves |> Seq.mapi line) (ChartStyle.axis xAxis []) (ChartStyle.axis yAxis []) [] [
            "showlegend", box (curves.Count > 1)
        ]

    /// <summary>Amounts beside each other, a group of bars for each name across.</summary>
    /// <param name="groups">names across</param>
    /// <param name="bars">for each kind of bar its name and an amount a group</param>
    /// <exception cref="T:System.ArgumentException">No bars, or not one for each group.</exception>
    static member Bars
        (
            title: string,
            yAxis: string,
            groups: IReadOnlyList<string>,
            bars: IReadOnlyList<KeyValuePair<string, IReadOnlyList<float>>>
        ) : GenericChart =
        if bars.Count = 0 then
            raise (ArgumentException "a chart of no bars")

        let trace index (bar: KeyValuePair<string, IReadOnlyList<float>>) =
            if bar.Value.Count <> groups.Count then
                raise (ArgumentException $"'{bar.Key}' has {bar.Value.Count} bars for {groups.Count} groups")

            ChartStyle.trace "bar" [
                "name", box bar.Key
                "x", box (Seq.toArray groups)
                "y", ChartStyle.numbers bar.Value
                "marker", box (ChartStyle.make [ "color", box (ChartStyle.colour index) ])
                "hovertemplate", box (bar.Key + ", %{x}: %{y:.3f}<extra></extra>")
            ]

        ChartStyle.chart
            title
            (bars |> Seq.mapi trace)
            (ChartStyle.axis "" [ "type", box "category" ])
            (ChartStyle.axis yAxis [ "zeroline", box true; "zerolinecolor", box ChartStyle.ink ]) [] [
                "barmode", box "group"
                "showlegend", box (bars.Count > 1)
            ]
