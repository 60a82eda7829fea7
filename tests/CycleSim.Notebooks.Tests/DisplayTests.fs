module CycleSim.Notebooks.Tests.DisplayTests

open System
open System.Globalization
open System.Net
open System.Text.RegularExpressions
open Expecto
open Microsoft.DotNet.Interactive.Formatting
open Plotly.NET
open CycleSim.Air
open CycleSim.Definitions
open CycleSim.Engine
open CycleSim.Notebooks
open CycleSim.Reports
open CycleSim.Studies
open FSharp.Data.UnitSystems.SI.UnitSymbols

NotebookDisplay.Register()

let private loaded = EngineLibrary.Load "velda-27"
let private model = EngineModel loaded.Engine
let private takeOff = model.Rating "take-off"

let private point =
    let flight = FlightCondition.AtIsaOffset(1500.0, 0.0, 25.0)
    model.AtRating(&flight, takeOff)

let private html value =
    Formatter.ToDisplayString(value, HtmlFormatter.MimeType)

let private text value =
    Formatter.ToDisplayString(value, PlainTextFormatter.MimeType)

let private fixedTo digits (value: float) =
    value.ToString($"F{digits}", CultureInfo.InvariantCulture)

/// Both ways of showing a value hold all of these words; the HTML says so to a reader, tags aside.
let private holds (value: obj) (words: string list) =
    let read = string (WebUtility.HtmlDecode(Regex.Replace(html value, "<[^>]*>", " ")))
    let plain = text value

    for word in words do
        Expect.stringContains read word "HTML"
        Expect.stringContains plain word "plain text"

let private shown: (string * obj * string list) list = [
    "engine definition", loaded.Engine, [ "velda-27"; "10668 m, Mach 0.800"; "168.000 kg/s"; "max-climb"; "thrust kN" ]
    "loaded definition", loaded, [ "velda-27"; loaded.Hash[..15] ]
    "sized engine", model, [ $"{fixedTo 2 (model.Engine.DesignThrust / 1e3)} kN"; "m2"; "1520.0 K" ]
    "operating point",
    point,
    [
        $"{fixedTo 2 (point.NetThrust / 1e3)} kN"
        $"{fixedTo 4 point.FuelFlow} kg/s"
        $"{fixedTo 3 (point.Sfc * 1e6)} g/(kN s)"
        "hpc exit"
        fixedTo 2 (point.Station("3").TotalPressure / 1e3)
        "Pt kPa"
        fixedTo 2 (point.Compressors[2].IsentropicEfficiency * 100.0)
        "margin, flow %"
        fixedTo 1 (point.Turbines[0].Power / 1e3)
        "customer-bleed"
        "not for dispatch"
    ]
    "stations", point.Stations, [ "Tt K"; fixedTo 1 point.T4 ]
    "compressors", point.Compressors, [ "corrected kg/s"; fixedTo 4 point.Compressors[1].PressureRatio ]
    "air", point.Air, [ "vane-cooling"; "hpt vane"; "W kg/s"; fixedTo 3 point.Air[0].MassFlow ]
    "limits left",
    LimitMargin.Of(point, takeOff),
    [
        "take-off"
        "N1 = 107.00 %"
        $"{fixedTo 2 (point.Spools[0].RelativeSpeed * 100.0)} %%"
    ]
    "rating", takeOff, [ "ISA +15.0 K"; "120.00 kN"; "T41 ="; "(from thrust and flat_to)" ]
    let flat = FlatRating.Run(model, "take-off", 1500.0<m>, 0.0)

    "flat rating",
    flat,
    [
        $"{fixedTo 2 (float flat.FlatThrust / 1e3)} kN"
        $"{fixedTo 2 (float flat.BreakTemperature)} K"
        "OAT °C"
        "SFC g/(kN s)"
    ]

    let wanted =
        RatingQuestions.Required(model, "take-off", 1500.0<m>, 0.0, 313.15<K>, flat.FlatThrust)

    "required rating",
    wanted,
    [
        "40.0 °C"
        $"{fixedTo 1 wanted.Point.T41} K"
        $"{fixedTo 2 (float wanted.Rated / 1e3)} kN"
    ]

    let effects = RatingQuestions.BreakEffects(model, "take-off", 0.0<m>, 0.0)

    "break effects",
    effects,
    [
        "shift K"
        "100 kW from spool high"
        fixedTo 1 (float effects[0].BreakTemperature - 273.15)
    ]

    "rating map",
    RatingQuestions.Map(model, "take-off", [| 0.0<m> |], [| 0.0 |]),
    [ "flat_thrust_N [N]"; "break_temperature_K [K]" ]

    let cruise = FlightCondition.AtIsaOffset(10668.0, 0.8, 0.0)

    let load = {
        Name = "packs"
        Items = [| LoadItem.Air("customer-bleed", 0.5<kg / s>) |]
    }

    let penalties = Penalties.Run(model, cruise, "max-cruise", [| load |])

    "penalties",
    penalties,
    [
        "packs"
        "fuel at thrust %"
        (penalties.Loads[0].AtThrust.Full.FuelFlow * 100.0).ToString("+0.00;-0.00", CultureInfo.InvariantCulture)
        "0.500 kg/s"
    ]

    let worn = [|
        {
            Name = "hpt efficiency"
            Change = -0.01
        }
    |]

    let egt = EgtMargin.Run(model, "take-off", 0.0<m>, 0.0, worn, 1300.0<K>)

    "EGT margin",
    egt,
    [
        "hpt efficiency"
        "margin_change_alone_K [K]"
        (float egt.Shares[0].Alone).ToString("G6", CultureInfo.InvariantCulture)
    ]

    let loop = Throttle.Loop(model, cruise, "max-cruise", 0.5, 5)

    "throttle loop",
    loop,
    [
        "sfc_kg_per_N_s [kg/(N s)]"
        (float loop.RatedThrust).ToString("G6", CultureInfo.InvariantCulture)
    ]

    let survey = SurgeSurvey.Run(model, "take-off")

    "surge survey",
    survey,
    [
        "hpc"
        fixedTo 1 (survey.Budgets[2].Slack * 100.0)
        "required %"
        "engine-to-engine scatter"
    ]

    let atDesign = model.DesignPoint()
    let influence = model.InfluenceOfLastPoint()

    "influence coefficients",
    influence,
    [
        "net_thrust_N"
        "efficiency_factor_hpc"
        influence.Of("net_thrust_N", "efficiency_factor_hpc").ToString("G6", CultureInfo.InvariantCulture)
    ]

    "table",
    StudyTable.Of(
        "Lapse",
        [||],
        [|
            TableColumn.Of("net_thrust_N", "N", [| atDesign.NetThrust; nan |])
            TableColumn.OfText("reason", [| ""; "no solution" |])
        |]
    ),
    [
        "Lapse"
        "net_thrust_N [N]"
        atDesign.NetThrust.ToString("G6", CultureInfo.InvariantCulture)
        "no solution"
    ]
]

let private chart =
    Chart.Line(x = [ 1.0; 2.0 ], y = [ 3.0; 4.0 ], Name = "</script><b> & fan")

[<Tests>]
let tests =
    testList "display" [
        testList "shows numbers and units" [
            for name, value, words in shown -> testCase name (fun () -> holds value words)
        ]

        testList "fetches nothing and runs nothing" [
            for name, value, _ in shown ->
                testCase name (fun () ->
                    let page = html value

                    for forbidden in [ "http"; "src="; "<script"; "<link"; "url(" ] do
                        Expect.isFalse (page.Contains(forbidden, StringComparison.OrdinalIgnoreCase)) forbidden)
        ]

        testCase "text is escaped"
        <| fun () ->
            let table =
                StudyTable.Of("<b>a & b</b>", [||], [| TableColumn.OfText("<i>", [| "<script>alert(1)</script>" |]) |])

            let page = html table

            for raw in [ "<b>"; "<i>"; "<script" ] do
                Expect.isFalse (page.Contains raw) raw

            Expect.stringContains page "&lt;b&gt;a &amp; b&lt;/b&gt;" "escaped"
            Expect.stringContains (text table) "<b>a & b</b>" "plain text is as it is"

        testCase "a long table says how long it is and shows its beginning"
        <| fun () ->
            let table =
                StudyTable.Of("long", [||], [| TableColumn.Of("mach", "", Array.init 5000 float) |])

            Expect.isLessThan (html table).Length 20_000 "size"
            holds table [ "of 5000 rows" ]

        testCase "a number that does not exist is a dash"
        <| fun () ->
            let table =
                StudyTable.Of("t", [||], [| TableColumn.Of("a", "", [| nan; infinity |]) |])

            Expect.isFalse ((html table).Contains "NaN") "no NaN"
            Expect.equal (Regex.Matches(html table, ">-<").Count) 2 "dashes"

        testCase "a met limit does not read as exceeded"
        <| fun () -> Expect.isFalse ((text (LimitMargin.Of(point, takeOff))).Contains "-0.0 K") "sign"

        testCase "a chart draws itself from its own numbers and fetches nothing"
        <| fun () ->
            let page = html chart
            Expect.isLessThan page.Length 20_000 "size"
            Expect.stringContains page "Plotly.newPlot" "drawn"
            Expect.stringContains page "\"y\":[3.0,4.0]" "numbers"
            Expect.isFalse (page.Contains "http") "no address"
            Expect.isFalse (page.Contains "</script><b>") "a name cannot break out of the script"
            Expect.stringContains (text chart) "</script><b> & fan" "plain text"

        testCase "two showings of a chart do not share a place on the page"
        <| fun () ->
            let place () =
                Regex.Match(html chart, "id=\"([^\"]+)\"").Groups[1].Value

            Expect.notEqual (place ()) (place ()) "id"
    ]
