module CycleSim.Charts.Tests.ChartTests

open System
open System.Text.Json
open Expecto
open FSharp.Data.UnitSystems.SI.UnitSymbols
open Plotly.NET
open CycleSim.Air
open CycleSim.Charts
open CycleSim.Definitions
open CycleSim.Engine
open CycleSim.Reports
open CycleSim.Studies

let private model = lazy EngineModel((EngineLibrary.Load "velda-27").Engine)

let private at altitude mach quantity value =
    let flight = FlightCondition.AtIsaOffset(altitude, mach, 0.0)
    model.Value.At(&flight, quantity, value)

let private throttle =
    lazy [| for lever in [ 0.4; 0.6; 0.8; 1.0 ] -> at 0.0 0.0 Quantity.Lever lever |]

/// What a browser is given.
let private figure (chart: GenericChart) =
    JsonDocument.Parse(GenericChart.toFigureJson chart).RootElement

let private traces (chart: GenericChart) =
    (figure chart).GetProperty("data").EnumerateArray() |> Seq.toArray

let private named (name: string) (chart: GenericChart) =
    traces chart |> Array.find (fun t -> t.GetProperty("name").GetString() = name)

let private numbers (field: string) (trace: JsonElement) =
    trace.GetProperty(field).EnumerateArray()
    |> Seq.map (fun e ->
        if e.ValueKind = JsonValueKind.Number then
            e.GetDouble()
        else
            nan)
    |> Seq.toArray

let private axisTitle (axis: string) (chart: GenericChart) =
    (figure chart).GetProperty("layout").GetProperty(axis).GetProperty("title").GetProperty("text").ToString()

let private close (actual: float[]) (expected: float seq) what =
    let expected = Seq.toArray expected
    Expect.equal actual.Length expected.Length $"{what}: how many"

    for a, e in Array.zip actual expected do
        Expect.floatClose Accuracy.high a e what

let private alts = [| 0.0; 5000.0; 11000.0 |]
let private machs = [| 0.3; 0.6 |]

let private grid =
    lazy
        (Array2D.init 3 2 (fun i j ->
            if i = 1 && j = 1 then
                Unchecked.defaultof<OperatingPoint>
            else
                at alts[i] machs[j] Quantity.Lever 0.9))

let private flat =
    lazy
        [|
            FlatRating.Run(model.Value, "take-off", 0.0<m>, 0.0)
            FlatRating.Run(model.Value, "take-off", 1500.0<m>, 0.0)
        |]

let private all =
    lazy
        (let point = at 10668.0 0.78 Quantity.NetThrust 22e3
         let influence = model.Value.InfluenceOfLastPoint()

         let table =
             (PowerTables.Run(
                 model.Value,
                 [| "take-off" |],
                 [| 0.0<m>; 1500.0<m> |],
                 TemperatureAxis.Outside [| 280.0<K>; 300.0<K>; 310.0<K> |],
                 FlightSpeed.Mach 0.0
             ))
                 .Tables[0]

         [
             "map", MapCharts.CompressorMap(model.Value.Engine, "hpc", throttle.Value)
             "T-s", PointCharts.TemperatureEntropy point
             "stations", PointCharts.StationProfile point
             "flat rating", RatingCharts.FlatRating flat.Value
             "N1", RatingCharts.PowerSettingN1 table
             "EPR", RatingCharts.PowerSettingEpr table
             "SFC",
             EnvelopeCharts.SfcLoops(
                 "SFC",
                 [|
                     {
                         Name = "static"
                         Points = throttle.Value
                     }
                 |]
             )
             "carpet", EnvelopeCharts.Carpet("thrust", EnvelopeQuantity.NetThrust, alts, machs, grid.Value)
             "envelope", EnvelopeCharts.Map("thrust", EnvelopeQuantity.NetThrust, alts, machs, grid.Value)
             "governing", EnvelopeCharts.Governing("power", alts, machs, grid.Value)
             "tornado",
             LossCharts.Tornado(
                 "SFC",
                 influence,
                 "sfc_kg_per_N_s",
                 [|
                     {
                         Name = "efficiency_factor_hpt"
                         Amount = -0.01
                     }
                 |]
             )
             "budget", LossCharts.SurgeBudget(SurgeSurvey.Run(model.Value, "take-off"))
             "waterfall",
             LossCharts.Waterfall(
                 "thrust",
                 { Name = "gross"; Amount = 60.0 },
                 [| { Name = "ram drag"; Amount = -36.0 } |],
                 "net",
                 "kN"
             )
         ])

[<Tests>]
let tests =
    testSequenced
    <| testList "charts" [
        testCase "a map's working points are those of the operating points" (fun () ->
            let chart = MapCharts.CompressorMap(model.Value.Engine, "hpc", throttle.Value)
            let drawn = named "working points" chart
            let hpc = throttle.Value |> Array.map (fun p -> p.Compressors[2])
            close (numbers "x" drawn) (hpc |> Seq.map _.CorrectedFlow) "corrected flow"
            close (numbers "y" drawn) (hpc |> Seq.map _.PressureRatio) "pressure ratio"

            // The points lie on the map that is drawn: below the surge line at their flow.
            let surge = named "surge line" chart
            let xs, ys = numbers "x" surge, numbers "y" surge

            for c in hpc do
                let k = Array.FindIndex(xs, (fun x -> x > c.CorrectedFlow))
                Expect.isGreaterThan ys[k] c.PressureRatio "surge line above the working point")

        testCase "a flat-rating chart holds the thrusts and the break" (fun () ->
            let chart = RatingCharts.FlatRating flat.Value
            let drawn = named "0 m, Mach 0.00" chart
            let result = flat.Value[0]

            let expected =
                [|
                    for row in result.Rows do
                        match row.Point with
                        | null -> ()
                        | point -> float row.OutsideTemperature - 273.15, point.NetThrust / 1000.0
                    float result.BreakTemperature - 273.15, float result.FlatThrust / 1000.0
                |]
                |> Array.sortBy fst

            close (numbers "x" drawn) (expected |> Seq.map fst) "outside temperature, °C"
            close (numbers "y" drawn) (expected |> Seq.map snd) "net thrust, kN")

        testCase "US units are the same thrusts" (fun () ->
            // 1 lbf = 4.4482216152605 N by definition of pound and standard gravity.
            let si = named "0 m, Mach 0.00" (RatingCharts.FlatRating flat.Value)

            let us =
                named "0 ft, Mach 0.00" (RatingCharts.FlatRating(flat.Value, ChartUnits.US))

            close (numbers "y" us) (numbers "y" si |> Seq.map (fun kN -> kN * 1000.0 / 4.4482216152605)) "lbf")

        testCase "stations: every station with its pressure and temperature" (fun () ->
            let point = throttle.Value[2]
            let chart = PointCharts.StationProfile(point, ChartUnits.Kelvin)

            let drawn name =
                traces chart |> Array.filter (fun t -> t.GetProperty("name").GetString() = name)

            let both =
                drawn "total temperature"
                |> Array.collect (fun t ->
                    Array.zip
                        (t.GetProperty("x").EnumerateArray() |> Seq.map _.GetString() |> Seq.toArray)
                        (numbers "y" t))

            Expect.equal both.Length point.Stations.Count "every station"

            for station, temperature in both do
                match station with
                | null -> failtest "a station without number"
                | number -> Expect.floatClose Accuracy.high temperature (point.Station number).TotalTemperature number)

        testCase "an envelope map leaves empty what has no point" (fun () ->
            let chart =
                EnvelopeCharts.Map("thrust", EnvelopeQuantity.NetThrust, alts, machs, grid.Value)

            let drawn = Array.head (traces chart)
            let z = drawn.GetProperty("z").EnumerateArray() |> Seq.toArray
            let cell i j = Seq.item j (z[i].EnumerateArray())

            let note =
                Seq.item 1 ((Seq.item 1 (drawn.GetProperty("text").EnumerateArray())).EnumerateArray())

            let missing = cell 1 1
            let there = cell 2 0
            Expect.equal missing.ValueKind JsonValueKind.Null "no point"
            Expect.floatClose Accuracy.high (there.GetDouble()) (grid.Value[2, 0].NetThrust / 1000.0) "kN"
            Expect.stringContains (note.ToString()) "no point" "said in the note")

        testCase "a tornado's bar is the influence coefficient times the step" (fun () ->
            at 10668.0 0.78 Quantity.NetThrust 22e3 |> ignore
            let influence = model.Value.InfluenceOfLastPoint()

            let chart =
                LossCharts.Tornado(
                    "SFC",
                    influence,
                    "sfc_kg_per_N_s",
                    [|
                        {
                            Name = "efficiency_factor_hpt"
                            Amount = -0.01
                        }
                        {
                            Name = "power_offtake_high_W"
                            Amount = 1e5
                        }
                    |]
                )

            let row = influence.Outputs |> Seq.findIndex (fun o -> o = "sfc_kg_per_N_s")
            let sfc = influence.OutputValues[row]

            let expected =
                [|
                    influence.Of("sfc_kg_per_N_s", "efficiency_factor_hpt") * -0.01 / sfc * 100.0
                    influence.Of("sfc_kg_per_N_s", "power_offtake_high_W") * 1e5 / sfc * 100.0
                |]
                |> Array.sortByDescending abs

            close (numbers "x" (Array.head (traces chart))) expected "per cent")

        testCase "axes of numbers carry their units" (fun () ->
            let shown = [
                for name, chart in all.Value do
                    name, axisTitle "xaxis" chart, axisTitle "yaxis" chart
            ]

            for name, x, y in shown do
                if name <> "carpet" then
                    Expect.isTrue (x <> "" || y <> "") $"{name} has axes"

            let yOf name =
                shown |> List.pick (fun (n, _, y) -> if n = name then Some y else None)

            let xOf name =
                shown |> List.pick (fun (n, x, _) -> if n = name then Some x else None)

            Expect.equal (yOf "flat rating") "Net thrust, kN" "thrust"
            Expect.equal (xOf "flat rating") "Outside air temperature, °C" "temperature"
            Expect.equal (xOf "map") "Corrected flow, kg/s" "flow"
            Expect.equal (yOf "SFC") "SFC, g/(kN s)" "SFC"
            Expect.equal (yOf "envelope") "Pressure altitude, m" "altitude"
            Expect.stringContains (xOf "budget") "%" "margin")

        testCase "no chart fetches anything, and all draw from the library in the page" (fun () ->
            for name, chart in all.Value do
                let html = ChartHtml.Fragment chart
                Expect.isFalse (html.Contains "http") $"{name}: an address"
                Expect.isFalse (html.Contains "NaN") $"{name}: not a number"
                Expect.stringContains html "Plotly.newPlot" name
                Expect.isLessThan html.Length 400000 $"{name}: size"

            Expect.isGreaterThan ChartHtml.Library.Length 1000000 "the library itself"
            // One end of a script: its own.
            Expect.equal (ChartHtml.LibraryElement.Split("</script>").Length) 2 "one script")

        testCase "charts of nothing are refused" (fun () ->
            Expect.throwsT<ArgumentException> (fun () -> RatingCharts.FlatRating [||] |> ignore) "no rating"
            Expect.throwsT<ArgumentException> (fun () -> EnvelopeCharts.SfcLoops("x", [||]) |> ignore) "no points"

            Expect.throwsT<ArgumentException>
                (fun () -> MapCharts.CompressorMap(model.Value.Engine, "hp", [||]) |> ignore)
                "no such compressor"

            Expect.throwsT<ArgumentException>
                (fun () ->
                    EnvelopeCharts.Map("x", EnvelopeQuantity.Sfc, [| 0.0 |], machs, grid.Value)
                    |> ignore)
                "unequal sizes")
    ]
