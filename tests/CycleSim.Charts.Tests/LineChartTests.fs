module CycleSim.Charts.Tests.LineChartTests

open System
open System.Collections.Generic
open Expecto
open Plotly.NET
open CycleSim.Charts

let private curve name x y = { Name = name; X = x; Y = y }

let private figure (chart: GenericChart) = GenericChart.toFigureJson chart

let private bars name (amounts: float[]) =
    KeyValuePair(name, amounts :> IReadOnlyList<float>)

[<Tests>]
let tests =
    testList "lines and bars" [
        testCase "a line shows its numbers, and a gap where there is none"
        <| fun () ->
            let page =
                figure (
                    LineCharts.Of(
                        "t",
                        "Mach number",
                        "Net thrust, kN",
                        [| curve "climb" [| 0.1; 0.2 |] [| 5.5; nan |] |]
                    )
                )

            for expected in [ "\"x\":[0.1,0.2]"; "\"y\":[5.5,null]"; "Mach number"; "Net thrust, kN" ] do
                Expect.stringContains page expected expected

        testCase "bars show an amount for each group"
        <| fun () ->
            let page =
                figure (LineCharts.Bars("t", "K", [| "fan"; "hpc" |], [| bars "EGT" [| 1.5; -2.5 |] |]))

            for expected in [ "\"x\":[\"fan\",\"hpc\"]"; "\"y\":[1.5,-2.5]"; "EGT" ] do
                Expect.stringContains page expected expected

        testCase "what makes no line is refused"
        <| fun () ->
            for curves in [ [||]; [| curve "odd" [| 1.0; 2.0 |] [| 1.0 |] |] ] do
                Expect.throwsT<ArgumentException> (fun () -> LineCharts.Of("t", "x", "y", curves) |> ignore) "lines"

            for given in [ [||]; [| bars "odd" [| 1.0 |] |] ] do
                Expect.throwsT<ArgumentException>
                    (fun () -> LineCharts.Bars("t", "y", [| "a"; "b" |], given) |> ignore)
                    "bars"
    ]
